"""What is typed after `logbook`, and how it ends.

The engine is imported by the command that needs it: `--help`, `--version` and a slip of the pen answer at once.
"""

from __future__ import annotations

import argparse
import gc
import os
import sys
from collections.abc import Sequence
from typing import Any, NoReturn

from logbook.cli.status import WRONG_USAGE, UsageError

_PATH = "a logbook's folder, or one with mkdocs.yml (default: the site here, else ./entries)"


class _Parser(argparse.ArgumentParser):
    """A parser that ends with this program's own status for wrong usage."""

    def error(self, message: str) -> NoReturn:
        self.print_usage(sys.stderr)
        self.exit(WRONG_USAGE, f"{self.prog}: {message}\n")


class _Version(argparse.Action):
    """Looks the version up only when it is asked for: reading the installed packages' data takes time."""

    def __init__(self, **rest: Any) -> None:
        super().__init__(nargs=0, default=argparse.SUPPRESS, **rest)

    def __call__(self, parser: argparse.ArgumentParser, *_: object) -> None:
        from importlib.metadata import PackageNotFoundError, version

        try:
            found = version("signal-chain-logbook")
        except PackageNotFoundError:
            found = "(not installed)"
        print(f"logbook {found}")
        parser.exit()


def _parser() -> _Parser:
    parser = _Parser(prog="logbook", description="A project logbook for radio hardware on the bench.")
    parser.add_argument("--version", action=_Version, help="show the version and stop")
    commands = parser.add_subparsers(dest="command", required=True, metavar="check | new | compare")

    check = commands.add_parser(
        "check",
        help="compute the logbook; report problems, regressions and targets",
        description="Reads and computes the logbook without building the site. Exit status: 0 in order; 1 problems; "
        "2 an unaccepted regression or a missed target, when asked to fail on it; 3 wrong usage.",
    )
    check.add_argument("path", nargs="?", metavar="PATH", help=_PATH)
    check.add_argument("--results", metavar="FILE", help="write everything as JSON, as the site has it")
    check.add_argument("--fail-on", metavar="LIST", help="any of problem,regression,target (default: problem)")
    check.add_argument("--coverage", metavar="K", help="coverage factor of verdicts (default: 2)")
    check.add_argument("--quiet", action="store_true", help="print problems only")

    new = commands.add_parser("new", help="start an entry", description="Writes a new entry and prints its path.")
    new.add_argument("title", metavar="TITLE", help="the entry's title")
    new.add_argument("path", nargs="?", metavar="PATH", help=_PATH)
    new.add_argument("--date", metavar="DATE", help="such as 2026-05-09 (default: today)")
    new.add_argument("--revision", metavar="X", help="the revision that the entry makes or measures")
    new.add_argument("--state", choices=("built", "trial", "planned"), help="state of a revision that it makes")

    compare = commands.add_parser(
        "compare",
        help="what changed between any two revisions",
        description="Prints the measured and the predicted deltas between any two revisions.",
    )
    compare.add_argument("before", metavar="B", help="the revision to compare with")
    compare.add_argument("after", metavar="C", help="the revision to judge")
    compare.add_argument("path", nargs="?", metavar="PATH", help=_PATH)
    compare.add_argument("--budget", action="store_true", help="show where the doubt of each change comes from")
    compare.add_argument("--coverage", metavar="K", help="coverage factor of verdicts (default: 2)")
    return parser


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command; the exit status. Wrong usage that the parser finds raises SystemExit(3), as argparse does."""
    _bear_any_character()
    given = _parser().parse_args(arguments)
    # A short-lived program that keeps all it makes: looking for garbage takes a tenth of its time and finds none.
    collecting = gc.isenabled()
    gc.disable()
    try:
        return _run(given)
    except UsageError as error:
        print(f"logbook {given.command}: {error}", file=sys.stderr)
        return WRONG_USAGE
    except BrokenPipeError:
        # The reader of the report has gone (`| head`); nothing is left to say, not even at the interpreter's end.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    finally:
        if collecting:
            gc.enable()


def _run(given: argparse.Namespace) -> int:
    if given.command == "check":
        from logbook.cli.check import check

        return check(given.path, given.results, given.fail_on, given.coverage, quiet=given.quiet)
    if given.command == "new":
        from logbook.cli.new import new

        return new(given.title, given.path, given.date, given.revision, given.state)
    from logbook.cli.compare import compare

    return compare(given.before, given.after, given.path, given.coverage, budget=given.budget)


def _bear_any_character() -> None:
    """A terminal that cannot show a character shows a stand-in, rather than stop the program."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="replace")
