"""Links to entries, as pages show them."""

from __future__ import annotations

from logbook.model import Entry
from logbook.pieces import Link, Span


def entry_link(entry: Entry) -> tuple[Span, ...]:
    """An entry's date, and its title as a link."""
    return (f"{entry.date} ", Link(entry.title, f"entry:{entry.path}"))
