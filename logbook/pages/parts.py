"""Parts: what was spent by revision and in all, what is planned, and what each decibel cost."""

from __future__ import annotations

from logbook.book import Book
from logbook.compare.costs import cost_by_currency, prices_of_improvement, spent_on
from logbook.findings import Part
from logbook.pages.links import entry_link
from logbook.pieces import Heading, Line, Note, Piece, Table, Text
from logbook.quantity_display import show_value
from logbook.showing.parts import improvements_table, sum_words
from logbook.showing.words import revision_link


def part_pieces(book: Book) -> list[Piece]:
    """Everything that was bought, or is planned to be."""
    parts = book.findings.parts
    if not parts:
        return [Note("No part is listed yet: a parts block says what was bought, and for how much.")]
    spent, planned = [p for p in parts if not p.planned], [p for p in parts if p.planned]
    pieces: list[Piece] = [Text(f"Spent in all: {sum_words(cost_by_currency(spent))}.")]
    if spent:
        pieces += [_by_revision(book), _items(book, spent, "Bought")]
    pieces += _improvements(book)
    if planned:
        pieces += [Heading(2, "Planned, not counted above"), _items(book, planned, "Planned")]
    return pieces


def _by_revision(book: Book) -> Table:
    rows: list[tuple[Line, ...]] = []
    for label in book.revisions:
        costs = cost_by_currency(spent_on(book.findings, label))
        if costs:
            rows.append((revision_link(label), sum_words(costs)))
    return Table(("revision", "cost"), tuple(rows), "Cost by revision", frozenset({1}))


def _items(book: Book, parts: list[Part], caption: str) -> Table:
    entries = {entry.path: entry for entry in book.entries}
    rows: list[tuple[Line, ...]] = [
        (
            part.item,
            revision_link(part.revision),
            f"{part.count}",
            show_value(part.price, part.currency),
            show_value(part.cost, part.currency),
            entry_link(entries[part.entry]),
        )
        for part in parts
    ]
    head = ("item", "revision", "quantity", "price of one", "cost", "entry")
    return Table(head, tuple(rows), caption, frozenset({2, 3, 4}))


def _improvements(book: Book) -> list[Piece]:
    prices = [price for label in book.revisions for price in prices_of_improvement(book.findings, label)]
    if not prices:
        return []
    words = "Each improvement is set against all that was spent on its revision; parts are not divided among results."
    table = improvements_table(prices, "Measured improvements beyond doubt")
    return [Heading(2, "What each decibel cost"), table, Text(words)]
