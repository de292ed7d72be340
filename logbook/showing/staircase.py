"""A staircase as pieces: the line and its errors, the ranges in which it is good, and what it was before."""

from __future__ import annotations

from math import isinf, isnan

import numpy as np

from logbook.detector import Calibration
from logbook.kind import Outcome, View
from logbook.model import Block
from logbook.physics.detector import conformance_errors, range_within, step_errors
from logbook.pieces import Axis, Chart, Folded, Limit, Line, Picture, Piece, Series, Table, Text
from logbook.quantity_display import show_value
from logbook.showing.readings import show_results
from logbook.showing.words import plain

WITHIN_DB = (0.5, 1.0, 3.0)


def show_staircase(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The staircase with its errors; the one before it on the same detector beneath."""
    detector = outcome.data
    if not isinstance(detector, Calibration):
        return []
    before = _before(detector, block, view)
    pieces: list[Piece] = [_picture(detector, before), Text(_line(detector)), _ranges(detector)]
    if before is not None:
        pieces.append(Text(_drift(detector, before)))
    pieces += show_results(block, outcome, view)
    pieces.append(Folded("How sure the line is", (Text(_doubt(detector)),)))
    return pieces


def _before(detector: Calibration, block: Block, view: View) -> Calibration | None:
    """The detector's last calibration before this one."""
    found: Calibration | None = None
    for each in view.earlier.get(("staircase", detector.name), ()):
        if (each.block.entry, each.block.number) == (block.entry, block.number):
            return found
        if isinstance(each.outcome.data, Calibration):
            found = each.outcome.data
    return found


def _picture(detector: Calibration, before: Calibration | None) -> Picture:
    steps, fit = detector.steps, detector.fit
    order = np.argsort(steps.input_dbm)
    x = [float(v) for v in steps.input_dbm[order]]
    errors = conformance_errors(fit, steps.input_dbm, steps.output)
    ends = [x[0], x[-1]]
    line = [fit.slope * (level - fit.intercept_dbm) for level in ends]
    series = [
        Series("read", x, [float(v) for v in steps.output[order]], "now", line=False, marker=True),
        Series("line", ends, line, "fit"),
    ]
    below = [Series("read less line", x, [float(v) for v in errors[order]], "now", marker=True)]
    if before is not None:
        old = np.argsort(before.steps.input_dbm)
        old_x = [float(v) for v in before.steps.input_dbm[old]]
        if before.unit == detector.unit:
            series.insert(
                0, Series(f"on {before.since}", old_x, [float(v) for v in before.steps.output[old]], "before")
            )
        old_errors = conformance_errors(before.fit, before.steps.input_dbm, before.steps.output)
        below.insert(0, Series(f"on {before.since}", old_x, [float(v) for v in old_errors[old]], "before"))
    worst = int(np.argmax(np.abs(errors)))
    alt = (
        f"Output of {detector.name} over its input, {len(x)} steps, and the error of each against the line. The "
        f"largest error is {errors[worst]:+.2f} dB at {show_value(float(steps.input_dbm[worst]), 'dBm')}."
    )
    return Picture(
        title=f"Staircase of {detector.name}",
        drawing=Chart(
            Axis("input, dBm"),
            Axis(f"output, {detector.unit}"),
            tuple(series),
            below=Chart(Axis("input, dBm"), Axis("error, dB"), tuple(below), limits=(Limit("±1 dB", -1.0, 1.0),)),
        ),
        alt=alt,
        numbers=_steps_table(detector),
    )


def _steps_table(detector: Calibration) -> Table:
    steps = detector.steps
    errors = conformance_errors(detector.fit, steps.input_dbm, steps.output)
    moved = step_errors(detector.fit, steps.input_dbm, steps.output)
    rows: list[tuple[Line, ...]] = [
        (
            show_value(float(steps.input_dbm[i]), "dBm"),
            show_value(float(steps.output[i]), detector.unit),
            f"{errors[i]:+.2f} dB",
            "" if i == 0 else f"{moved[i - 1]:+.2f} dB",
        )
        for i in range(len(steps.input_dbm))
    ]
    return Table(
        ("input", "output", "error against the line", "error of the step"), tuple(rows), "", frozenset(range(4))
    )


def _line(detector: Calibration) -> str:
    fit, (low, high) = detector.fit, detector.window_dbm
    words = f"{show_value(fit.slope, detector.unit)} per dB, and nothing at {show_value(fit.intercept_dbm, 'dBm')}"
    span = "" if isinf(low) else f" from {show_value(low, 'dBm')} to {show_value(high, 'dBm')}"
    return f"{detector.name}: {words}, by least squares through {fit.points} points{span}."


def _ranges(detector: Calibration) -> Table:
    steps = detector.steps
    errors = conformance_errors(detector.fit, steps.input_dbm, steps.output)
    rows: list[tuple[Line, ...]] = []
    for limit in WITHIN_DB:
        low, high = range_within(steps.input_dbm, errors, limit, detector.window_dbm)
        rows.append((f"±{limit:g} dB", plain(low, "dBm") or "none", plain(high, "dBm"), plain(high - low, "dB")))
    return Table(("good within", "from", "to", "range"), tuple(rows), "Range", frozenset({1, 2, 3}))


def _drift(detector: Calibration, before: Calibration) -> str:
    slope = detector.fit.slope / before.fit.slope - 1
    moved = detector.fit.intercept_dbm - before.fit.intercept_dbm
    return (
        f"Since {before.since} its slope has changed by {100 * slope:+.2f} % and its intercept by {moved:+.2f} dB; "
        "what of it is beyond doubt stands with the results."
    )


def _doubt(detector: Calibration) -> str:
    fit = detector.fit
    words = f"The points scatter about the line by {show_value(fit.scatter, detector.unit)}"
    words += f" ({abs(fit.scatter / fit.slope):.2f} dB)."
    if not isnan(fit.correlation):
        words += f" Slope and intercept are correlated by {fit.correlation:+.3f}; readings through it allow for that."
    drive = detector.drive
    if drive is not None and drive.u:
        words += f" The source's accuracy (u = {show_value(drive.u, 'dB')}) shifts all levels read through it alike."
    return words
