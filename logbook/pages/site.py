"""Home, revisions, history, targets, open items and benches as pages."""

from __future__ import annotations

import re

from logbook.book import Book
from logbook.pages.entry import entry_link
from logbook.pages.revision import revision_pieces
from logbook.pieces import Branch, Heading, Items, Note, Page, Piece, Table, Text, Tree
from logbook.showing.targets import target_verdict_line, target_words, targets_table
from logbook.showing.words import plain, revision_link


def revision_path(label: str) -> str:
    """The path of a revision's page; letters that a file system minds are written as their code points."""
    safe = re.sub(r"[^A-Za-z0-9.+-]", lambda m: f"_{ord(m.group()):x}_", label)
    return f"revisions/{safe}.md"


def generated_pages(book: Book) -> list[Page]:
    """Every page that the logbook makes itself, but for home."""
    pages = [
        Page(revision_path(label), f"Revision {label}", tuple(revision_pieces(book, revision)))
        for label, revision in book.revisions.items()
    ]
    pages.append(Page("history.md", "History", tuple(history_pieces(book))))
    pages.append(Page("targets.md", "Targets", tuple(target_pieces(book))))
    pages.append(Page("open-items.md", "Open items", tuple(todo_pieces(book))))
    return pages


def home_pieces(book: Book) -> list[Piece]:
    """Where the project stands."""
    if not book.entries:
        words = 'There is no entry yet. Start one with: logbook new "First light"'
        return [Note(words)]
    pieces: list[Piece] = []
    latest = book.latest
    if latest is not None:
        verdicts = {v.target.key: v for v in book.findings.targets_of(latest.label)}
        pieces.append(Text(("Built now: revision ", revision_link(latest.label), ".")))
        if verdicts:
            pieces.append(targets_table(list(book.history.targets.values()), verdicts, latest.label))
    pieces.append(Heading(2, "Entries"))
    pieces.append(Items(tuple(entry_link(entry) for entry in reversed(book.entries))))
    return pieces


def history_pieces(book: Book) -> list[Piece]:
    """The tree of the hardware's revisions."""

    def branches(parent: str | None) -> tuple[Branch, ...]:
        return tuple(
            Branch((revision_link(label), f" {revision.state}, {revision.date}"), branches(label), not revision.built)
            for label, revision in book.revisions.items()
            if revision.comes_from == parent
        )

    return [Tree(branches(None))]


def target_pieces(book: Book) -> list[Piece]:
    """Every target against every revision."""
    labels = list(book.revisions)
    by = {(v.target.key, v.revision): v for v in book.findings.targets}
    rows = []
    for target in book.history.targets.values():
        cells = []
        for label in labels:
            found = by.get((target.key, label))
            value = "" if found is None else plain(found.value, target.unit, found.u)
            cells.append((value, " ", target_verdict_line(found)))
        rows.append((target_words(target), target.written, *cells))
    return [Table(("target", "limit", *labels), tuple(rows), "Targets by revision")]  # type: ignore[arg-type]


def todo_pieces(book: Book) -> list[Piece]:
    """What is open, and what has been closed."""
    titles = {entry.path: entry for entry in book.entries}
    open_ = [t for t in book.findings.todo if t.closed is None]
    closed = [t for t in book.findings.todo if t.closed is not None]
    pieces: list[Piece] = [Heading(2, "Open")]
    pieces.append(Items(tuple((t.what, ", since ", *entry_link(titles[t.opened])) for t in open_)))
    pieces.append(Heading(2, "Closed"))
    pieces.append(Items(tuple((t.what, ", in ", *entry_link(titles[t.closed or t.opened])) for t in closed)))
    return pieces
