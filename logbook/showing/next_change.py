"""What to change next, and alternatives of a plan weighed against each other."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import isfinite, isnan

from logbook.compare.next_change import NextChange, StageNeeds
from logbook.compare.targets import Weighed
from logbook.pieces import Line, Note, Piece, Strong, Table, Text
from logbook.quantity_display import show_delta, show_value
from logbook.showing.targets import target_words
from logbook.showing.words import difference_unit, percent


def next_change_pieces(found: NextChange) -> list[Piece]:
    """For one target: which stage alone could meet it, and what each would bring if it were ideal."""
    target = found.verdict.target
    unit = target.unit
    pieces: list[Piece] = [Text((Strong(f"{target_words(target)} {target.written}"), f": {_start(found)}"))]
    rows: list[tuple[Line, ...]] = [_row(row, found, unit) for row in found.rows]
    head = ("stage", "parameter", "now", "would have to become", "total if ideal", "share")
    pieces.append(Table(head, tuple(rows), "What one stage alone would have to become", frozenset({2, 3, 4, 5})))
    if not found.alone:
        pieces.append(Note("No single stage can do it: even an ideal one is not enough.", "caution"))
    if found.external_share > 0.5 and found.rows[0].parameter in ("noise figure", "loss"):
        words = f"External noise sets {percent(found.external_share)} of the noise floor; no change here lowers it."
        pieces.append(Note(words))
    return pieces


def _start(found: NextChange) -> str:
    unit = found.verdict.target.unit
    words = f"{found.verdict.basis} {show_value(found.verdict.value, unit, found.verdict.u)}"
    if found.offset:
        words += f", {show_delta(found.offset, difference_unit(unit))} from the prediction, which is taken to stay"
    return f"{words}. To meet it with 95 % probability the prediction must reach {show_value(found.wanted, unit)}."


def _row(row: StageNeeds, found: NextChange, unit: str) -> tuple[Line, ...]:
    own = "dBm" if row.parameter.startswith(("IIP", "input")) else "dB"
    needed = show_value(row.needed, own) if isfinite(row.needed) else "cannot alone"
    ideal = "ideal already" if not isfinite(row.if_ideal) else show_value(row.if_ideal + found.offset, unit)
    return (row.stage, row.parameter, show_value(row.now, own), needed, ideal, percent(row.share))


def weighed_table(weighed: list[Weighed], caption: str, lost: Mapping[str, Sequence[str]]) -> Table:
    """Alternatives of a plan, best first: expected result, part of the gap closed, cost, and other targets lost."""
    rows: list[tuple[Line, ...]] = []
    for each in weighed:
        unit = each.target.unit
        cost = "" if each.cost is None else f"{each.cost:.2f} {each.currency}"
        closes = "" if each.closes is None or isnan(each.closes) else percent(each.closes)
        reached: Line = each.verdict
        loses = "; ".join(lost.get(each.name, ()))
        rows.append((each.name, show_value(each.value, unit, each.u), closes, reached, cost, loses))
    head = (
        "alternative",
        "expected",
        "part of the gap closed",
        "reaches the target",
        "parts",
        "may no longer meet",
    )
    kept = [i for i in range(len(head)) if i < 4 or any(row[i] for row in rows)]
    return Table(
        tuple(head[i] for i in kept),
        tuple(tuple(row[i] for i in kept) for row in rows),
        caption,
        frozenset(place for place, i in enumerate(kept) if i in (1, 2, 4)),
    )
