"""A plan against the targets that its parent does not meet: can it reach them, and which way is best?"""

from __future__ import annotations

from collections.abc import Sequence
from math import isnan

from logbook.compare.targets import Predict, weigh
from logbook.compare.verdicts import MEETS
from logbook.findings import Findings, TargetVerdict
from logbook.pieces import Muted, Note, Piece, Text
from logbook.quantity_display import show_value
from logbook.revision import Revision
from logbook.showing.next_change import weighed_table
from logbook.showing.targets import target_words


def plan_pieces(plan: Revision, parent: Revision | None, findings: Findings, predict: Predict) -> list[Piece]:
    """For each target that the parent does not meet, the plan and its alternatives, best first."""
    if parent is None:
        return []
    verdicts = findings.targets_of(parent.label)
    lost = _lost(plan, parent, verdicts, predict)
    pieces: list[Piece] = []
    for before in verdicts:
        if before.verdict == MEETS or isnan(before.value):
            continue
        weighed = weigh(plan, parent, before, predict)
        if not weighed:
            continue
        pieces.append(weighed_table(weighed, f"{target_words(before.target)} {before.target.written}", lost))
        if not any(each.verdict == MEETS for each in weighed):
            few = "None of these ways reaches" if len(weighed) > 1 else "This plan does not reach"
            pieces.append(Note(f"{few} the target beyond doubt.", "caution"))
    if pieces:
        words = f"Expected is what {parent.label} was measured at, where it was, plus the predicted change."
        return [*pieces, Text(Muted(words))]
    return [Note(f"{name} may no longer meet: {'; '.join(what)}.", "caution") for name, what in lost.items()]


def _lost(
    plan: Revision, parent: Revision, verdicts: Sequence[TargetVerdict], predict: Predict
) -> dict[str, list[str]]:
    """By way, the targets that the parent meets and that would not be met beyond doubt any more."""
    found: dict[str, list[str]] = {}
    for before in verdicts:
        if before.verdict == MEETS and not isnan(before.value):
            for each in weigh(plan, parent, before, predict):
                if each.verdict != MEETS:
                    said = f"{target_words(before.target)} {before.target.written}"
                    value = show_value(each.value, before.target.unit, each.u)
                    found.setdefault(each.name, []).append(f"{said} (expected {value})")
    return found
