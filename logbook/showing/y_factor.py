"""A noise figure by the Y factor as pieces: the arithmetic, its doubt by source, and how the chain may use it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import isnan

from logbook.kind import Outcome, View
from logbook.model import Block, Result
from logbook.physics.y_factor import hot_temperature
from logbook.pieces import Code, Folded, Line, Note, Piece, Table, Text
from logbook.quantity_display import show_value
from logbook.showing.deltas import agreement_table
from logbook.showing.readings import results_table


@dataclass(frozen=True, slots=True)
class YFactorShown:
    """One measurement: its result, the numbers it follows from (dB, K), and (input, value, u, part of u) rows."""

    result: Result
    given: Mapping[str, float]
    y_db: float
    total_db: float
    stage: str
    budget: tuple[tuple[str, float, float | None, float], ...]


SOURCES = {
    "enr": "ENR of the noise source",
    "hot": "hot reading",
    "cold": "cold reading",
    "y": "Y factor",
    "cold_temperature": "temperature of the cold source",
    "linearity": "instrument's linearity between hot and cold",
    "second_nf": "noise figure of the second stage",
    "second_gain": "gain ahead of the second stage",
}


def show_y_factor(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """Every measurement of the block."""
    found = [each for each in outcome.data or () if isinstance(each, YFactorShown)]
    pieces: list[Piece] = []
    if outcome.results:
        pieces.append(results_table(list(outcome.results), view))
    for each in found:
        pieces += _one(each)
    known = view.findings.agreement_by_result
    agreements = [known[id(each.result)] for each in found if id(each.result) in known]
    if agreements:
        pieces.append(agreement_table(agreements))
    return pieces


def _one(shown: YFactorShown) -> list[Piece]:
    result = shown.result
    if isnan(result.value):
        return [Note(f"The noise figure is not known: {result.words}.", "caution")]
    given = shown.given
    hot = show_value(hot_temperature(given["enr"]), "K")
    line = f"Hot is {hot}, cold {show_value(given['cold_temperature'], 'K')}; Y = {show_value(shown.y_db, 'dB')}, "
    line += f"which makes {show_value(shown.total_db, 'dB')}"
    if "second_nf" in given:
        behind, gain = show_value(given["second_nf"], "dB"), show_value(given["second_gain"], "dB")
        line += f" with the second stage, and {show_value(result.value, 'dB')} without it ({behind} behind {gain})"
    pieces: list[Piece] = [Text(line + "."), *(Note(f"{note}.", "caution") for note in result.notes)]
    if shown.budget:
        pieces.append(Folded("Where the doubt of the noise figure comes from", (_budget(shown),)))
    if shown.stage and result.value >= 0:
        pieces += _for_the_chain(shown)
    return pieces


def _budget(shown: YFactorShown) -> Table:
    rows: list[tuple[Line, ...]] = []
    for name, value, u, part in shown.budget:
        unit = "K" if name == "cold_temperature" else "dB"
        stated = "" if u is None else show_value(u, unit)
        per = "" if not u else f"{part / u:+.3g} dB/{unit}"
        rows.append((SOURCES[name], show_value(value, unit), stated, per, show_value(abs(part), "dB")))
    head = ("source", "value", "standard uncertainty", "sensitivity", "part of the doubt")
    return Table(head, tuple(rows), "", frozenset({1, 2, 3, 4}))


def _for_the_chain(shown: YFactorShown) -> list[Piece]:
    """The step of a change that puts the figure in the place of what was assumed."""
    value = f"{shown.result.value:.3f}"
    u = shown.result.u
    written = f"{value} dB" if u is None else f"{value} ± {u:.3f} dB (k=1)"
    step = f"{{set: {shown.stage}, to: {{nf: {written}}}}}"
    return [Text(("To let the chain use it, write this step in the next change: ", Code(step), "."))]
