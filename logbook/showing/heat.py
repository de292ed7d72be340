"""Heat as pieces: power, temperatures, what is in hand, the sink needed, and how much ambient the part bears."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import inf, isfinite, isnan

import numpy as np

from logbook.kind import Outcome, View
from logbook.model import Block, Result
from logbook.physics.thermal import allowed_power
from logbook.pieces import Axis, Chart, Line, Mark, Note, Picture, Piece, Series, Table, Text, Verdict
from logbook.quantity_display import show_value
from logbook.showing.readings import results_table
from logbook.showing.words import plain


@dataclass(frozen=True, slots=True)
class Heat:
    """One part: what was given (base units), its power (W) and junction (degC), the sink it may have (K/W)."""

    name: str
    given: Mapping[str, float]
    power_w: float
    u_power_w: float | None
    junction_c: float
    sink_k_per_w: float
    results: tuple[Result, ...]


def show_heat(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """Every part of the block, then the results with their changes."""
    parts = [each for each in outcome.data or () if isinstance(each, Heat)]
    if not parts:
        return []
    pieces: list[Piece] = [_table(parts)]
    for part in parts:
        pieces += _said(part)
        derating = _derating(part)
        if derating is not None:
            pieces.append(derating)
    if outcome.results:
        pieces.append(results_table(list(outcome.results), view))
    return pieces


def _table(parts: list[Heat]) -> Table:
    rows: list[tuple[Line, ...]] = []
    for part in parts:
        given = part.given
        rows.append(
            (
                part.name,
                plain(part.power_w, "W", part.u_power_w),
                _of(given, "ambient", "degC"),
                _of(given, "case", "degC"),
                plain(part.junction_c, "degC") or "not known",
                _of(given, "maximum", "degC"),
                _sink(part),
            )
        )
    head = ("part", "heat", "ambient", "case", "junction", "junction at most", "sink to ambient at most")
    return Table(head, tuple(rows), "Heat", frozenset(range(1, 7)))


def _of(given: Mapping[str, float], key: str, unit: str) -> str:
    return plain(given[key], unit) if key in given else ""


def _sink(part: Heat) -> Line:
    if isnan(part.sink_k_per_w):
        return ""
    if part.sink_k_per_w == inf:
        return "any"
    return plain(part.sink_k_per_w, "K/W") if part.sink_k_per_w > 0 else "no sink will do"


def _said(part: Heat) -> list[Piece]:
    """Too hot, or a sink that falls short, in words; and what a measured case says of the sink that is there."""
    pieces: list[Piece] = []
    most = part.given.get("maximum")
    if most is not None and part.junction_c > most:
        over = show_value(part.junction_c - most, "K")
        words = f" {part.name}: its junction is {over} above what it bears. Take power off it, or cool it better."
        pieces.append(Note((Verdict("misses"), words), "problem"))
    if part.sink_k_per_w <= 0:
        words = f"{part.name}: no sink is good enough at this power and ambient temperature."
        pieces.append(Note(words, "caution"))
    case, ambient = part.given.get("case"), part.given.get("ambient")
    if case is not None and ambient is not None and part.power_w > 0 and case <= ambient:
        words = f"{part.name}: its case reads no warmer than ambient although it turns power to heat; read both again."
        pieces.append(Note(words, "caution"))
    if case is None and "sink_ambient" in part.given and "case_sink" not in part.given:
        words = f"{part.name}: nothing is stated between case and sink; it is taken as no resistance at all."
        pieces.append(Text(words))
    if case is not None and ambient is not None and part.power_w > 0 and case > ambient:
        there = show_value((case - ambient) / part.power_w, "K/W")
        pieces.append(Text(f"{part.name}: from case to ambient it has {there}, by the temperatures as measured."))
    return pieces


def _derating(part: Heat) -> Picture | None:
    """Power that the part bears over ambient temperature, with where it works; None without all that it takes."""
    given, most = part.given, part.given.get("maximum")
    resistance = _to_ambient(part)
    if most is None or resistance is None or "ambient" not in given or most <= given["ambient"]:
        return None
    rated = given.get("rated_power", inf)
    corner = most - rated * resistance if isfinite(rated) else given["ambient"] - 20
    low = min(given["ambient"], 0.0)
    x = np.unique(np.array([low, *([corner] if low < corner < most else []), most]))
    y = allowed_power(x, most, resistance, rated)
    bears = float(allowed_power(np.array([given["ambient"]]), most, resistance, rated)[0])
    series = (
        Series("bears at most", tuple(map(float, x)), tuple(map(float, y)), "ceiling"),
        Series("works here", (given["ambient"],), (part.power_w,), "now", line=False, marker=True),
    )
    rows: list[tuple[Line, ...]] = [(plain(float(t), "degC"), plain(float(p), "W")) for t, p in zip(x, y, strict=True)]
    alt = (
        f"{part.name} turns {show_value(part.power_w, 'W')} to heat at {show_value(given['ambient'], 'degC')} ambient, "
        f"where it bears {show_value(bears, 'W')}; nothing is left at {show_value(most, 'degC')}."
    )
    return Picture(
        title=f"Power that {part.name} bears over ambient temperature",
        drawing=Chart(
            Axis("ambient, degC"), Axis("power, W"), series, marks=(Mark(given["ambient"], part.power_w, part.name),)
        ),
        alt=alt,
        numbers=Table(("ambient", "bears at most"), tuple(rows), "", frozenset({0, 1})),
    )


def _to_ambient(part: Heat) -> float | None:
    """K/W from junction to ambient: by the sink given, else by the case as measured."""
    given = part.given
    if "junction_case" not in given:
        return None
    if "case" in given and "ambient" in given and part.power_w > 0 and given["case"] > given["ambient"]:
        return given["junction_case"] + (given["case"] - given["ambient"]) / part.power_w
    if "sink_ambient" not in given:
        return None
    return given["junction_case"] + given.get("case_sink", 0.0) + given["sink_ambient"]
