"""`logbook check`: read, compute, report."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

from logbook.book import Book, find_sources, make_book
from logbook.cli.place import find_place
from logbook.cli.printing import print_problems
from logbook.cli.status import FAILED, IN_ORDER, PROBLEMS, UsageError
from logbook.failing import failures
from logbook.options import PROBLEM, OptionError, Options, read_coverage, read_fail_on


def check(path: str | None, results: str | None, fail_on: str | None, coverage: str | None, *, quiet: bool) -> int:
    """Compute the logbook; problems go to stderr, the report to stdout; the exit status."""
    place = find_place(path)
    options = with_arguments(place.options, fail_on, coverage)
    book = make_book(find_sources(place.folder), place.folder, options.settings)
    if results is not None:
        _write_results(book, Path(results))
    print_problems(book.problems, place.folder)
    if not quiet:
        # The words and tables of a report are not needed to say nothing.
        from logbook.cli.printing import print_pieces
        from logbook.cli.report import report_pieces

        print_pieces(report_pieces(book))
        sys.stdout.flush()
    return status_of(book, options.fail_on)


def with_arguments(options: Options, fail_on: str | None, coverage: str | None) -> Options:
    """The site's options with what was typed in their place."""
    try:
        if coverage is not None:
            options = replace(options, settings=replace(options.settings, coverage=read_coverage(coverage)))
        if fail_on is not None:
            options = replace(options, fail_on=read_fail_on(fail_on))
    except OptionError as error:
        raise UsageError(str(error)) from error
    return options


def status_of(book: Book, fail_on: frozenset[str]) -> int:
    """Problems come first and always count: what is computed from faulty input cannot be relied on."""
    if failures(book, frozenset({PROBLEM})):
        return PROBLEMS
    return FAILED if failures(book, fail_on) else IN_ORDER


def _write_results(book: Book, file: Path) -> None:
    from logbook.results import results_json

    data = results_json(book)
    try:
        file.write_bytes(data)
    except OSError as error:
        raise UsageError(f"The results cannot be written to '{file}': {error.strerror}.") from error
