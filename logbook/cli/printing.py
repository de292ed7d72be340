"""What the commands print: problems with their places, and pieces as text."""

from __future__ import annotations

import os
import sys
from collections.abc import Iterable, Sequence
from pathlib import Path

from logbook.pieces import Piece
from logbook.problems import CAUTION, Problem


def print_problems(problems: Iterable[Problem], folder: Path) -> None:
    """Each problem on a line that an editor can follow: the path as it is named from here."""
    for problem in problems:
        place = problem.place
        path = folder / place.file
        said = " ".join(f"{problem.message} {problem.hint}".split())
        kind = "caution: " if problem.severity == CAUTION else ""
        print(f"{path.as_posix()}:{place.line}:{place.column}: {kind}{said} [{problem.code}]", file=sys.stderr)
    # What was found comes before the report, however the two streams are buffered.
    sys.stderr.flush()


def print_pieces(pieces: Sequence[Piece]) -> None:
    """Pieces as text, as wide as the terminal."""
    from logbook.terminal import render

    print(render(pieces, _columns()).rstrip("\n"))


def _columns() -> int:
    """The terminal's width; 100 where the output is none."""
    try:
        return int(os.environ.get("COLUMNS", "")) or 100
    except ValueError:
        pass
    try:
        return os.get_terminal_size(sys.stdout.fileno()).columns or 100
    except (OSError, ValueError, AttributeError):
        return 100
