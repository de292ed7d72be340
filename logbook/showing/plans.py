"""A plan against the targets that its parent does not meet: can it reach them, and which way is best?"""

from __future__ import annotations

from math import isnan

from logbook.compare.targets import Predict, weigh
from logbook.compare.verdicts import MEETS
from logbook.findings import Findings
from logbook.pieces import Note, Piece
from logbook.revision import Revision
from logbook.showing.next_change import weighed_table
from logbook.showing.targets import target_words


def plan_pieces(plan: Revision, parent: Revision | None, findings: Findings, predict: Predict) -> list[Piece]:
    """For each target that the parent does not meet, the plan and its alternatives, best first."""
    if parent is None:
        return []
    pieces: list[Piece] = []
    for before in findings.targets_of(parent.label):
        if before.verdict == MEETS or isnan(before.value):
            continue
        weighed = weigh(plan, parent, before, predict)
        if not weighed:
            continue
        pieces.append(weighed_table(weighed, f"{target_words(before.target)} {before.target.written}"))
        if not any(each.verdict == MEETS for each in weighed):
            few = "None of these ways reaches" if len(weighed) > 1 else "This plan does not reach"
            pieces.append(Note(f"{few} the target beyond doubt.", "caution"))
    return pieces
