"""History: the revisions as a tree, and each measured result's course over them with its limit."""

from __future__ import annotations

from math import isnan

from logbook.book import Book
from logbook.compare.equal import in_rbw
from logbook.compare.targets import fits
from logbook.findings import Target
from logbook.model import PREDICTED, Result
from logbook.pieces import (
    Axis,
    Branch,
    Chart,
    Heading,
    Limit,
    Line,
    Muted,
    Note,
    Picture,
    Piece,
    Series,
    Table,
    Text,
    Tree,
)
from logbook.quantity_display import show_value
from logbook.showing.targets import target_words
from logbook.showing.words import doubt_words, result_words, revision_link

NAN = float("nan")


def history_pieces(book: Book) -> list[Piece]:
    """The tree of revisions and the course of each result."""
    if not book.revisions:
        return [Note("No revision is built yet. An entry makes one with 'revision: A' and a chain block.")]
    pieces: list[Piece] = [Tree(_branches(book, None))]
    courses = _courses(book)
    if courses:
        pieces.append(Heading(2, "Results over the revisions"))
        pieces.append(Text(Muted(doubt_words(book.settings.coverage))))
        for key, results in courses.items():
            pieces += _course(book, key, results)
    return pieces


def _branches(book: Book, parent: str | None) -> tuple[Branch, ...]:
    known = book.revisions
    found = []
    for label, revision in known.items():
        if revision.comes_from == parent or (parent is None and revision.comes_from not in known):
            line = (revision_link(label), f" {revision.date}", _why(book, label))
            state = f", {revision.state}" if not revision.built else ""
            found.append(
                Branch((*line[:2], state, line[2]), _branches(book, label), not revision.built, revision.state)
            )
    return tuple(found)


def _why(book: Book, label: str) -> str:
    whys = [made.why for made in book.revisions[label].made.values() if made.why]
    return f": {'; '.join(whys)}" if whys else ""


def _courses(book: Book) -> dict[str, list[Result]]:
    """The last measured result of each revision, for every key that was read on two revisions or has a limit."""
    found: dict[str, dict[str, Result]] = {}
    for result in book.results:
        if result.basis != PREDICTED:
            found.setdefault(result.key, {})[result.revision] = result
    limited = {t.key for t in book.history.targets.values()}
    return {key: list(by.values()) for key, by in found.items() if len(by) > 1 or key in limited}


def _target_of(book: Book, result: Result) -> Target | None:
    revision = book.revisions.get(result.revision)
    chain = revision.chains.get(result.chain) if revision is not None else None
    signal = chain.signal_hz if chain is not None else None
    return next((t for t in book.history.targets.values() if fits(t, result, signal)), None)


def _course(book: Book, key: str, results: list[Result]) -> list[Piece]:
    last = results[-1]
    target = _target_of(book, last)
    rbw = target.rbw_hz if target is not None and target.rbw_hz is not None else last.conditions.rbw_hz
    labels = [label for label in book.revisions if label in {r.revision for r in results}]
    by = {r.revision: r for r in results}
    values = [in_rbw(by[label], rbw) if by[label].unit == last.unit else NAN for label in labels]
    if all(isnan(v) for v in values):
        return []
    k = book.settings.coverage
    errors = [k * (by[label].u or 0.0) for label in labels]
    name = result_words(last.quantity, last.at_hz, last.name, last.chain)
    x = [float(i) for i in range(len(labels))]
    series = (Series("measured", x, values, "now", marker=True, error=errors),)
    limits = () if target is None else (Limit(f"target {target.written}", target.low, target.high),)
    rows: list[tuple[Line, ...]] = [
        (revision_link(label), show_value(value, last.unit, by[label].u), by[label].basis)
        for label, value in zip(labels, values, strict=True)
    ]
    alt = (
        f"{name}: " + ", ".join(f"{la} {show_value(v, last.unit)}" for la, v in zip(labels, values, strict=True)) + "."
    )
    if target is not None:
        alt += f" Target: {target_words(target)} {target.written}."
    chart = Chart(Axis("revision", "category", tuple(labels)), Axis(f"{name}, {last.unit}"), series, limits)
    numbers = Table(("revision", "value", "basis"), tuple(rows), "", frozenset({1}))
    return [Picture(name, chart, alt + f" Bars: k = {k:g}.", numbers)]
