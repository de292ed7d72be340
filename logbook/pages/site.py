"""The pages that the logbook makes itself, but for home."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial

from logbook.book import Book
from logbook.findings import Todo
from logbook.model import Entry
from logbook.pages.benches import bench_pieces
from logbook.pages.history import history_pieces
from logbook.pages.links import entry_link
from logbook.pages.parts import part_pieces
from logbook.pages.revision import revision_pieces
from logbook.pieces import Heading, Items, Line, Muted, Note, Page, Piece, Span, Table, Text
from logbook.showing.targets import target_verdict_line, target_words
from logbook.showing.words import doubt_words, plain


def revision_path(label: str) -> str:
    """The path of a revision's page; letters that a file system minds are written as their code points.

    Capitals are marked too, so that revisions `b` and `B` do not fall together where case does not count.
    """
    safe = re.sub(r"[^A-Z0-9.+-]", lambda m: f"_{ord(m.group()):x}", label)
    return f"revisions/{safe}.md"


@dataclass(frozen=True, slots=True)
class PagePlan:
    """A page that the logbook makes itself: its path in the site's sources, its title, and what makes its pieces."""

    path: str
    title: str
    make: Callable[[], list[Piece]]


def page_plans(book: Book) -> list[PagePlan]:
    """Every page that the logbook makes itself, but for home; nothing is made before it is asked for."""
    plans = [
        PagePlan(revision_path(label), f"Revision {label}", partial(revision_pieces, book, revision))
        for label, revision in book.revisions.items()
    ]
    plans.append(PagePlan("history.md", "History", partial(history_pieces, book)))
    plans.append(PagePlan("targets.md", "Targets", partial(target_pieces, book)))
    plans.append(PagePlan("open-items.md", "Open items", partial(todo_pieces, book)))
    plans.append(PagePlan("benches.md", "Benches", partial(bench_pieces, book)))
    plans.append(PagePlan("parts.md", "Parts", partial(part_pieces, book)))
    return plans


def generated_pages(book: Book) -> list[Page]:
    """Every page that the logbook makes itself, but for home, with its pieces."""
    return [Page(plan.path, plan.title, tuple(plan.make())) for plan in page_plans(book)]


def target_pieces(book: Book) -> list[Piece]:
    """Every target against every revision."""
    # The latest first: on a phone it is the one that is seen.
    labels = list(reversed(book.revisions))
    if not book.history.targets:
        return [Note("No target is set yet: a target block says what the project wants to reach.")]
    by = {(v.target.key, v.revision): v for v in book.findings.targets}
    rows: list[tuple[Line, ...]] = []
    for target in book.history.targets.values():
        cells: list[Line] = [target_words(target), target.written]
        for label in labels:
            found = by.get((target.key, label))
            value = "" if found is None else plain(found.value, target.unit, found.u)
            basis = Muted(found.basis) if found is not None else ""
            cells.append((value, " ", basis, " ", *target_verdict_line(found)))
        rows.append(tuple(cells))
    head = ("target", "limit", *(f"{label} ({book.revisions[label].state})" for label in labels))
    table = Table(head, tuple(rows), "Targets by revision", frozenset({1}))
    return [table, Text(Muted(doubt_words(book.settings.coverage)))]


def todo_pieces(book: Book) -> list[Piece]:
    """What is open, and what has been closed."""
    titles = {entry.path: entry for entry in book.entries}
    open_ = [t for t in book.findings.todo if t.closed is None]
    closed = [t for t in book.findings.todo if t.closed is not None]
    if not open_ and not closed:
        return [Note("No item has been opened yet: a todo block says what is left to do.")]
    pieces: list[Piece] = [Heading(2, f"Open ({len(open_)})")]
    pieces.append(Items(_lines(open_, titles)) if open_ else Note("Nothing is open.", "good"))
    if closed:
        pieces += [Heading(2, f"Closed ({len(closed)})"), Items(_lines(closed, titles))]
    return pieces


def _lines(items: Sequence[Todo], titles: dict[str, Entry]) -> tuple[Line, ...]:
    lines: list[Line] = []
    for item in items:
        line: list[Span] = [item.what, " ", Muted("since "), *entry_link(titles[item.opened])]
        if item.closed is not None:
            line += [Muted("; closed in "), *entry_link(titles[item.closed])]
        lines.append(tuple(line))
    return tuple(lines)
