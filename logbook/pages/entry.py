"""What stands on an entry's page besides its prose: each block computed, and a line that leads to its revision."""

from __future__ import annotations

from logbook.book import Book
from logbook.kinds import registry
from logbook.model import BUILT, Block, Entry
from logbook.pieces import Line, Link, Note, Piece, Text, Verdict, Written
from logbook.showing.deltas import revision_change
from logbook.showing.words import result_words


def block_pieces(book: Book, entry: Entry, block: Block) -> list[Piece]:
    """A block as computed; with its own text and the problems beneath when something is wrong in it."""
    problems = book.problems_of(block)
    kind = registry().get(block.kind)
    pieces: list[Piece] = []
    if kind is not None and block.items:
        outcome = book.outcome(block)
        view = book.view(entry, block)
        if kind.hazard:
            pieces.append(Note(kind.hazard, "caution"))
        if kind.show is not None:
            pieces += kind.show(block, outcome, view)
        else:
            from logbook.showing.readings import show_results

            pieces += show_results(block, outcome, view)
    if problems:
        pieces.append(Written(block.text, tuple(str(p) for p in problems), block.line))
    return pieces


def head_pieces(book: Book, entry: Entry) -> list[Piece]:
    """The line under an entry's title: its date, and the revision it speaks of."""
    line: tuple[object, ...] = (f"{entry.date:%d %B %Y}. ".lstrip("0"),)
    revision = book.history.of(entry)
    if revision is not None:
        builds = "Makes revision " if revision.entry == entry.path else "On revision "
        state = "" if revision.state == BUILT else f" ({revision.state})"
        said = revision_change(revision.label, revision.comes_from if revision.entry == entry.path else None)
        assert isinstance(said, tuple)
        line = (*line, builds, *said[1:], state, ".")
    return [Text(line)]  # type: ignore[arg-type]


def tail_pieces(book: Book, entry: Entry) -> list[Piece]:
    """Unaccepted regressions of the revision that this entry speaks of, and the neighbouring entries."""
    pieces: list[Piece] = []
    revision = book.history.of(entry)
    if revision is not None:
        own = {result.key for result in book.results if result.entry == entry.path}
        for regression in book.findings.regressions_of(revision.label):
            if regression.key in own:
                words = "accepted: " + regression.why if regression.accepted else "not accepted"
                pieces.append(
                    Note((Verdict("worse"), f" {regression.key} since {regression.from_}, {words}"), "problem")
                )
    return pieces


def entry_link(entry: Entry) -> Line:
    """A link to an entry with its date."""
    return (f"{entry.date} ", Link(entry.title, f"entry:{entry.path}"))


__all__ = ["block_pieces", "entry_link", "head_pieces", "result_words", "tail_pieces"]
