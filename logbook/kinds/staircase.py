"""`staircase`: levels stepped into a detector or display: its line, its errors, and what it reads from then on."""

from __future__ import annotations

from dataclasses import replace
from math import inf, isnan, sqrt

import numpy as np

from logbook.detector import Calibration, Steps
from logbook.fields import Field, many, pair, quantity, text
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, fresh, impedance_of, not_on_a_plan, setting_of
from logbook.kinds._trace import axis, trace_of
from logbook.model import Block, Result, Values
from logbook.physics.detector import DetectorFit, conformance_errors, fit_detector, range_within, step_errors
from logbook.quantity import Quantity, level_dbm
from logbook.showing.staircase import WITHIN_DB, show_staircase
from logbook.stage_fields import LEVEL

_OUTPUT = ("voltage", "divisions")

FIELDS = (
    Field("name", text(), required=True, help="The detector's name, such as 'name: log-detector'."),
    Field("chain", text()),
    Field("bench", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("input", many(quantity(LEVEL), least=3)),
    Field("output", many(quantity(_OUTPUT), least=3)),
    Field("file", text()),
    Field("x", axis()),
    Field("y", axis()),
    Field("fit", pair(quantity(LEVEL))),
    Field("temperature", quantity("temperature")),
    Field("note", text()),
)

EXAMPLE = """\
name: log-detector
bench: shack
at: 21.4 MHz
input: [-70 dBm, -60 dBm, -50 dBm, -40 dBm, -30 dBm, -20 dBm, -10 dBm, 0 dBm]
output: [0.412 V, 0.601 V, 0.803 V, 1.001 V, 1.204 V, 1.399 V, 1.590 V, 1.702 V]
fit: [-60 dBm, -10 dBm]
"""


def calculate(block: Block, session: Session) -> Outcome:
    """The line, its errors and its ranges; kept as the calibration of the detector from here on."""
    if not block.items or not not_on_a_plan("read", block.place, session):
        return Outcome()
    values = block.items[0]
    setting = setting_of(values, session)
    steps = _steps(values, setting, session) if setting is not None else None
    if setting is None or steps is None:
        return Outcome()
    window = _window(values, setting)
    fit = fit_detector(steps.input_dbm, steps.output, window)
    why = _no_line(fit, steps, window)
    if why:
        session.fault(values.place("fit"), "fit", why)
        return Outcome()
    detector = Calibration(
        name=values["name"],
        since=session.entry.date.isoformat(),
        written=f"{session.entry.path}:{values.start.line}",
        fit=fit,
        unit=steps.unit,
        dimension=steps.dimension,
        drive=None if setting.bench is None else setting.bench.drive_accuracy,
        lowest_dbm=float(steps.input_dbm.min()),
        highest_dbm=float(steps.input_dbm.max()),
        steps=steps,
        window_dbm=window,
    )
    return Outcome(_results(detector, values, setting), detector)


def _no_line(fit: DetectorFit, steps: Steps, window: tuple[float, float]) -> str:
    """Why no line goes through the steps; nothing when one does."""
    if fit.points < 3:
        return f"{fit.points} of the steps lie within the fit; a line needs three at least."
    levels = steps.input_dbm[(steps.input_dbm >= window[0]) & (steps.input_dbm <= window[1])]
    if not np.ptp(levels) > 0:
        return "All steps within the fit are at one level; a line needs different ones."
    # A slope within its own expanded doubt of zero is none.
    if isnan(fit.slope) or abs(fit.slope) <= 2 * fit.u_slope:
        return "The output does not follow the level: within its doubt the line has no slope."
    return ""


def _window(values: Values, setting: Setting) -> tuple[float, float]:
    found = values.get("fit")
    if found is None:
        return -inf, inf
    low, high = (level_dbm(each, impedance_of(setting.chain, setting.session))[0] for each in found)
    return min(low, high), max(low, high)


def _steps(values: Values, setting: Setting, session: Session) -> Steps | None:
    """What was put in and what came out; None with a fault."""
    lists = [key for key in ("input", "output") if key in values]
    if ("file" in values) == bool(lists) or len(lists) == 1:
        message = "The steps are given either by 'input' and 'output' or by a 'file'."
        session.fault(values.start, "steps", message, "Such as 'input: [-60 dBm, -50 dBm, -40 dBm]' with 'output:'.")
        return None
    if not lists:
        trace = trace_of(values, ("level",), _OUTPUT, session)
        if trace is None:
            return None
        return Steps(trace.x, trace.y, trace.y_unit, "voltage" if trace.y_unit == "V" else "divisions", None)
    return _from_lists(values["input"], values["output"], values, setting, session)


def _from_lists(
    given: tuple[Quantity, ...], read: tuple[Quantity, ...], values: Values, setting: Setting, session: Session
) -> Steps | None:
    if len(given) != len(read):
        message = f"{len(given)} levels are put in and {len(read)} outputs are read; each step needs both."
        session.fault(values.place("output"), "lengths", message)
        return None
    if len({each.dimension for each in read}) > 1:
        session.fault(values.place("output"), "dimension", "The outputs are partly volts and partly divisions.")
        return None
    impedance = impedance_of(setting.chain, session)
    levels = np.array([level_dbm(each, impedance)[0] for each in given])
    stated = [each.u for each in read if each.u is not None]
    # One doubt stands for all outputs: the root of the mean square of those that state one.
    u = sqrt(sum(each * each for each in stated) / len(stated)) if stated else None
    return Steps(levels, np.array([each.value for each in read]), read[0].unit, read[0].dimension, u)


def _results(detector: Calibration, values: Values, setting: Setting) -> tuple[Result, ...]:
    fit, place = detector.fit, values.start
    at = values["at"].value if "at" in values else None

    def result(
        quantity_: str, value: float, unit: str, u: float | None, words: str = "", common: bool = False
    ) -> Result:
        parts = {fresh(place, quantity_, "least squares"): u} if u and not isnan(u) else {}
        if common and detector.drive is not None and detector.drive.u:
            parts[detector.drive.source] = detector.drive.u
        return derived(quantity_, value, unit, parts, setting, place, at_hz=at, words=words)

    slope_unit = f"{detector.unit}/dB"
    worst, step = worst_errors(detector)
    u_read = None if detector.steps.u_output is None else abs(detector.steps.u_output / fit.slope)
    found = [
        result("slope", fit.slope, slope_unit, fit.u_slope),
        result("intercept", fit.intercept_dbm, "dBm", fit.u_intercept_db, common=True),
        result("conformance_error", worst, "dB", u_read),
        result("step_error", step, "dB", None if u_read is None else u_read * sqrt(2)),
    ]
    errors = conformance_errors(fit, detector.steps.input_dbm, detector.steps.output)
    for limit in WITHIN_DB:
        low, high = range_within(detector.steps.input_dbm, errors, limit, detector.window_dbm)
        words = f"no point is within {limit:g} dB of the line" if isnan(low) else ""
        whole = low <= detector.lowest_dbm or high >= detector.highest_dbm
        each = result(f"log_range_{limit:g}db", high - low, "dB", None, words)
        # It may be good beyond the steps that were made.
        found.append(replace(each, bound="lower" if whole else ""))
    return tuple(found)


def worst_errors(detector: Calibration) -> tuple[float, float]:
    """The largest error of a point, and of a step, within the fit's window, dB without sign."""
    fit: DetectorFit = detector.fit
    steps, (low, high) = detector.steps, detector.window_dbm
    inside = (steps.input_dbm >= low) & (steps.input_dbm <= high)
    errors = np.abs(conformance_errors(fit, steps.input_dbm, steps.output))
    moved = np.abs(step_errors(fit, steps.input_dbm, steps.output))
    both = inside[1:] & inside[:-1]
    return float(errors[inside].max()), float(moved[both].max()) if both.any() else float("nan")


KIND = Kind(
    word="staircase",
    title="Staircase",
    about=(
        "Levels stepped into a detector or display: slope, intercept and errors against least squares, and the range "
        "in which it is good. Later readings in volts or divisions name it in `through_detector` and become levels."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    needs_revision=True,
    calculate=calculate,
    show=show_staircase,
    name_key="name",
)
