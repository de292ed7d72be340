"""The report of `logbook check`: regressions, targets, the last change, what is open."""

from __future__ import annotations

from logbook.book import Book
from logbook.pieces import Heading, Note, Piece, Text
from logbook.problems import CAUTION
from logbook.revision import Revision
from logbook.showing.deltas import moved_pieces
from logbook.showing.regressions import regression_pieces
from logbook.showing.targets import targets_table


def report_pieces(book: Book) -> list[Piece]:
    """Where the project stands, for a terminal."""
    if not book.entries:
        return [Note("There is no entry yet. Start one with: logbook new TITLE")]
    pieces: list[Piece] = [Text(_summary(book))]
    pieces += _regressions(book)
    latest = book.latest
    if latest is not None:
        pieces += _targets(book, latest)
        pieces += _last_change(book, latest)
    return [*pieces, Text(_closing(book))]


def _count(number: int, what: str) -> str:
    plural = what[:-1] + "ies" if what.endswith("y") else what + "s"
    return f"{number} {what if number == 1 else plural}"


def _summary(book: Book) -> str:
    counts = f"{_count(len(book.entries), 'entry')}, {_count(len(book.revisions), 'revision')}"
    latest = book.latest
    now = f"; built now: revision {latest.label}, {latest.date}" if latest is not None else ""
    return f"{book.settings.title}: {counts}{now}."


def _regressions(book: Book) -> list[Piece]:
    pieces: list[Piece] = []
    for revision in book.revisions.values():
        found = regression_pieces(book.findings, revision.label)
        pieces += [Text(f"On revision {revision.label}:"), *found] if found else []
    return [Heading(2, "Regressions"), *pieces] if pieces else []


def _targets(book: Book, latest: Revision) -> list[Piece]:
    verdicts = {v.target.key: v for v in book.findings.targets_of(latest.label)}
    if not verdicts:
        return []
    table = targets_table([v.target for v in verdicts.values()], verdicts, latest.label)
    return [Heading(2, f"Targets, revision {latest.label}"), table]


def _last_change(book: Book, latest: Revision) -> list[Piece]:
    deltas = book.findings.read_to(latest.label)
    if not deltas:
        return []
    title = f"What {latest.label} did, measured"
    return [Heading(2, title), *moved_pieces(deltas, "", chains=len(latest.chains) > 1)]


def _closing(book: Book) -> str:
    open_items = sum(1 for item in book.findings.todo if item.closed is None)
    cautions = sum(1 for problem in book.problems if problem.severity == CAUTION)
    faults = len(book.problems) - cautions
    said = [_count(open_items, "open item"), _count(faults, "problem")]
    said += [_count(cautions, "caution")] if cautions else []
    return ", ".join(said) + "."
