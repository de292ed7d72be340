"""`logbook compare B C`: what changed between any two revisions."""

from __future__ import annotations

from logbook.book import Book, find_sources, make_book
from logbook.book.between import deltas_between
from logbook.cli.check import with_arguments
from logbook.cli.place import find_place
from logbook.cli.printing import print_pieces, print_problems
from logbook.cli.status import IN_ORDER, PROBLEMS, UsageError
from logbook.findings import Delta
from logbook.model import PREDICTED
from logbook.pieces import Heading, Note, Piece
from logbook.problems import CAUTION, did_you_mean
from logbook.showing.deltas import budget_pieces, deltas_table
from logbook.showing.words import result_words


def compare(before: str, after: str, path: str | None, coverage: str | None, *, budget: bool) -> int:
    """Print the deltas between two revisions; the exit status, 1 when the logbook has problems."""
    place = find_place(path)
    settings = with_arguments(place.options, None, coverage).settings
    book = make_book(find_sources(place.folder), place.folder, settings)
    print_problems(book.problems, place.folder)
    for label in (before, after):
        if label not in book.revisions:
            raise UsageError(f"There is no revision '{label}' in {place.folder}.{_hint(label, book)}")
    if before == after:
        raise UsageError(f"Both are revision '{before}'; name two.")
    print_pieces(compare_pieces(book, before, after, budget=budget))
    return PROBLEMS if any(problem.severity != CAUTION for problem in book.problems) else IN_ORDER


def _hint(label: str, book: Book) -> str:
    if not book.revisions:
        return " It has no revisions yet."
    hint = did_you_mean(label, book.revisions)
    return f" {hint}" if hint else ""


def compare_pieces(book: Book, before: str, after: str, *, budget: bool) -> list[Piece]:
    """The deltas from one revision to another as tables; with `budget`, the doubt of each by its sources."""
    deltas = deltas_between(book, before, after)
    measured = [d for d in deltas if d.basis != PREDICTED]
    predicted = [d for d in deltas if d.basis == PREDICTED]
    pieces: list[Piece] = [Heading(1, f"From {before} to {after}")]
    pieces += _part("Measured", measured, f"Neither {before} nor {after} has been measured.", book, budget)
    silent = f"{before} and {after} have no chain of one name to predict from."
    return pieces + _part("Predicted", predicted, silent, book, budget)


def _part(title: str, deltas: list[Delta], silent: str, book: Book, budget: bool) -> list[Piece]:
    if not deltas:
        return [Heading(2, title), Note(silent)]
    pieces: list[Piece] = [Heading(2, title), deltas_table(deltas, "", chains=True)]
    for d in deltas if budget else ():
        if d.budget and (d.u or d.basis != PREDICTED):
            words = result_words(d.quantity, d.at_hz, d.name, d.chain)
            pieces += [Heading(3, f"Doubt of the change in {words}"), *budget_pieces(d, book.settings.coverage)]
    return pieces
