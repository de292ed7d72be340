"""Regressions as notes."""

from __future__ import annotations

from math import isnan

from logbook.findings import Findings
from logbook.pieces import Note, Piece, Strong
from logbook.quantity_display import show_value
from logbook.showing.words import difference_unit


def regression_pieces(findings: Findings, revision: str, keys: set[str] | None = None) -> list[Piece]:
    """What got worse with a revision, with what was said of it; `keys` keeps only these."""
    pieces: list[Piece] = []
    for found in findings.regressions_of(revision):
        if keys is not None and found.key not in keys:
            continue
        unit = difference_unit(found.unit)
        size = "" if found.delta is None or isnan(found.delta) else f" by {show_value(abs(found.delta), unit)}"
        what = "a target met before is missed now" if found.kind == "target" else f"worse{size}"
        said = f"accepted: {found.why}" if found.accepted else "not accepted"
        words = (Strong(found.key), f": {what}, against revision {found.from_}; {said}.")
        pieces.append(Note(words, "plain" if found.accepted else "problem"))
    return pieces
