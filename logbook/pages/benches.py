"""Benches: what is measured with, and which readings were taken after a calibration was due."""

from __future__ import annotations

from logbook.bench import Bench
from logbook.book import Book
from logbook.kinds.bench import bench_table
from logbook.model import Entry
from logbook.pages.links import entry_link
from logbook.pieces import Heading, Items, Line, Note, Piece, Text


def bench_pieces(book: Book) -> list[Piece]:
    """Every bench with each of its descriptions, and what is overdue at the date of a reading."""
    benches = _all(book)
    if not benches:
        return [Note("No bench is described yet. A bench block says what the readings are taken with, and how well.")]
    pieces: list[Piece] = []
    for name, described in benches.items():
        pieces.append(Heading(2, f"Bench {name}"))
        for entry, bench in described:
            pieces.append(Text(("Described on ", *entry_link(entry), ".")))
            pieces.append(bench_table(bench))
            if bench.calibrated is not None or bench.due is not None:
                until = f" due again on {bench.due}." if bench.due else " no due date stated."
                done = f"Calibrated on {bench.calibrated};" if bench.calibrated else "Calibration:"
                pieces.append(Text(done + until))
            pieces += _overdue(book, bench)
    return pieces


def _all(book: Book) -> dict[str, list[tuple[Entry, Bench]]]:
    found: dict[str, list[tuple[Entry, Bench]]] = {}
    for entry in book.entries:
        for block in entry.blocks:
            for declared in book.history.declared.get((entry.path, block.number), ()):
                if isinstance(declared, Bench):
                    found.setdefault(declared.name, []).append((entry, declared))
    return found


def _overdue(book: Book, bench: Bench) -> list[Piece]:
    late: dict[str, Entry] = {}
    by_path = {entry.path: entry for entry in book.entries}
    for result in book.results:
        conditions = result.conditions
        if (conditions.bench, conditions.bench_from) == (bench.name, bench.since):
            entry = by_path[result.entry]
            if bench.overdue(entry.date):
                late[entry.path] = entry
    if not late:
        return []
    lines: tuple[Line, ...] = tuple(entry_link(entry) for entry in late.values())
    return [Note(f"Read after its calibration was due on {bench.due}:", "caution"), Items(lines)]
