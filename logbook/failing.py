"""What a run fails on: problems, unaccepted regressions, missed targets of what is built now."""

from __future__ import annotations

from logbook.book import Book
from logbook.compare.verdicts import MISSES
from logbook.options import PROBLEM, REGRESSION, TARGET
from logbook.problems import CAUTION


def failures(book: Book, fail_on: frozenset[str]) -> dict[str, int]:
    """How many of each sort were found, of the sorts that count; sorts without any are left out."""
    latest = book.latest
    missed = [] if latest is None else [v for v in book.findings.targets_of(latest.label) if v.verdict == MISSES]
    counts = {
        PROBLEM: sum(problem.severity != CAUTION for problem in book.problems),
        REGRESSION: sum(not found.accepted for found in book.findings.regressions),
        TARGET: len(missed),
    }
    return {sort: count for sort, count in counts.items() if sort in fail_on and count}


def failure_words(found: dict[str, int]) -> str:
    """The failures in a few words."""
    names = {PROBLEM: "problem", REGRESSION: "regression not accepted", TARGET: "target missed"}
    plural = {PROBLEM: "problems", REGRESSION: "regressions not accepted", TARGET: "targets missed"}
    return ", ".join(f"{count} {(names if count == 1 else plural)[sort]}" for sort, count in found.items())
