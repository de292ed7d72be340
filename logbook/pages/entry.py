"""What stands on an entry's page besides its prose: each block computed, and lines that lead on."""

from __future__ import annotations

from logbook.book import Book
from logbook.kinds import registry
from logbook.model import BUILT, Block, Entry
from logbook.pieces import Muted, Note, Piece, Span, Text, Written
from logbook.showing.deltas import revision_change
from logbook.showing.readings import show_results
from logbook.showing.regressions import regression_pieces
from logbook.showing.words import doubt_words


def block_pieces(book: Book, entry: Entry, block: Block) -> list[Piece]:
    """A block as computed; with its own text and the problems beneath when something is wrong in it."""
    problems = book.problems_of(block)
    kind = registry().get(block.kind)
    pieces: list[Piece] = []
    if kind is not None and block.items:
        outcome, view = book.outcome(block), book.view(entry, block)
        if kind.hazard:
            pieces.append(Note(kind.hazard, "caution"))
        pieces += (kind.show or show_results)(block, outcome, view)
    if problems:
        pieces.append(Written(block.text, tuple(str(p) for p in problems), block.line + 1))
    return pieces


def head_pieces(book: Book, entry: Entry) -> list[Piece]:
    """The line under an entry's title: its date, and the revision it speaks of."""
    line: list[Span] = [f"{entry.date:%d %B %Y}. ".lstrip("0")]
    revision = book.history.of(entry)
    if revision is not None:
        makes = revision.entry == entry.path
        said = revision_change(revision.label, revision.comes_from if makes else None)
        state = "" if revision.state == BUILT else f" ({revision.state})"
        line += ["Makes " if makes else "On ", *said, state, "."]
    return [Text(tuple(line))]


def tail_pieces(book: Book, entry: Entry) -> list[Piece]:
    """What this entry's readings show to have got worse: where several read the same, the one that was compared."""
    revision = book.history.of(entry)
    keys = book.findings.compared_in.get(entry.path)
    found = regression_pieces(book.findings, revision.label, keys) if revision is not None and keys else []
    if any(result.u is not None for block in entry.blocks for result in book.outcome(block).results):
        found.append(Text(Muted(doubt_words(book.settings.coverage))))
    return found
