"""The navigation: what the logbook computes, then the entries by year and month, then the user's other pages."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from logbook.book import Book
from logbook.pages import PagePlan, revision_path

_MONTHS = (
    "January February March April May June July August September October November December".split()  # noqa: SIM905
)

HOME = "index.md"


def navigation(book: Book, pages: Iterable[PagePlan], others: Iterable[str]) -> list[Any]:
    """The site's navigation, latest first within the entries; `others` are the paths of the user's ordinary pages."""
    revisions = [{f"Revision {label}": revision_path(label)} for label in reversed(book.revisions)]
    made = [{page.title: page.path} for page in pages if not page.path.startswith("revisions/")]
    found: list[Any] = [{"Home": HOME}]
    if revisions:
        found.append({"Revisions": revisions})
    found += made
    found += [{"Entries": _years(book)}] if book.entries else []
    more = sorted(path for path in others if path != HOME)
    return [*found, {"More": more}] if more else found


def _years(book: Book) -> list[dict[str, Any]]:
    years: dict[str, dict[str, list[dict[str, str]]]] = {}
    for entry in reversed(book.entries):
        months = years.setdefault(str(entry.date.year), {})
        titles = months.setdefault(_MONTHS[entry.date.month - 1], [])
        titles.append({f"{entry.date.day} {entry.title}": entry.path})
    return [{year: [{month: titles} for month, titles in months.items()]} for year, months in years.items()]
