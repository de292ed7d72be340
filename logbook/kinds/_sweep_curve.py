"""From what a sweep block names to its curve: read, less its reference, and as it is shown at the unit."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import log10, nan

import numpy as np

from logbook.kind import Session
from logbook.kinds._measured import Setting
from logbook.kinds._sweep_reports import Curve
from logbook.kinds._trace import trace_of, wanted
from logbook.model import Values
from logbook.physics.averaging import averaging_correction_db
from logbook.physics.constants import Array
from logbook.physics.curves import less_reference
from logbook.problems import did_you_mean
from logbook.quantity import Quantity
from logbook.sweep import Sweep
from logbook.traces.touchstone import magnitude_trace, read_touchstone
from logbook.traces.trace import Trace

# What may stand on the y axis, by what the sweep is of.
_Y = {
    "bandpass": ("ratio", "level"),
    "response": ("ratio", "level"),
    "spectrum": ("level",),
    "noise": ("level", "density"),
}
_UNIT_DIMENSION = {"dB": "ratio", "dBm": "level", "dBm/Hz": "density"}
_PLURAL = {"ratio": "decibels", "level": "levels", "density": "densities"}

# Fewer points make no curve.
_FEWEST = 3


@dataclass(frozen=True, slots=True, eq=False)
class Read:
    """A curve as the instrument showed it, and the same as it is shown: at the unit, `offset_db` higher."""

    curve: Curve
    shown: Curve
    offset_db: float
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True, eq=False)
class _Reference:
    """The curve to subtract; `at_unit`: the path's loss is added already."""

    x: Array
    y: Array
    unit: str
    at_unit: bool


def read_curve(values: Values, setting: Setting, session: Session) -> Read | None:
    """The curve that a block names; None with faults."""
    of = values["of"]
    if "reference" in values and of in ("spectrum", "noise"):
        message = f"A sweep of {with_article(of)} has no reference: its levels count as they are."
        session.fault(values.place("reference"), "reference", message, "Leave it out, or sweep a 'response'.")
        return None
    trace = _trace(values, session)
    reference = _reference(values, session) if "reference" in values else None
    if trace is None or ("reference" in values and reference is None):
        return None
    if _UNIT_DIMENSION.get(trace.y_unit) not in _Y[of]:
        needed = " or ".join(_PLURAL[each] for each in _Y[of])
        message = f"A sweep of {with_article(of)} needs {needed} over frequency; this one is in {trace.y_unit}."
        session.fault(values.place("y" if "y" in values else "of"), "dimension", message)
        return None
    if of == "noise":
        return _noise(trace, values, setting, session)
    return _level(trace, setting) if reference is None else _relative(trace, reference, values, setting, session)


def with_article(of: str) -> str:
    """`noise`, `a response`."""
    return of if of == "noise" else f"a {of}"


def _relative(trace: Trace, reference: _Reference, values: Values, setting: Setting, session: Session) -> Read | None:
    """A curve less its reference, dB; None with a fault where the two have nothing in common."""
    place, named = values.place("reference"), values["reference"]
    if reference.unit != trace.y_unit:
        message = f"This sweep is in {trace.y_unit} and its reference '{named}' in {reference.unit}."
        session.fault(place, "reference", message, "A reference is swept with the same set-up and the same scale.")
        return None
    own = trace.y + (_path_loss(setting) if reference.at_unit and trace.y_unit == "dBm" else 0.0)
    y = less_reference(trace.x, own, reference.x, reference.y)
    known = np.isfinite(y)
    if known.sum() < _FEWEST:
        message = f"The reference '{named}' covers {known.sum()} points of this sweep; {_FEWEST} are needed at least."
        session.fault(place, "reference", message)
        return None
    notes = () if known.all() else ("the reference does not cover the whole sweep; only what it covers is used",)
    u = setting.bench.linearity_u if setting.bench is not None else None
    curve = Curve(trace.x[known], y[known], "dB", u)
    return Read(curve, curve, 0.0, notes)


def _level(trace: Trace, setting: Setting) -> Read:
    unit = trace.y_unit
    u = setting.bench.linearity_u if setting.bench is not None else None
    curve = Curve(trace.x, trace.y, unit, u, unit == "dB")
    offset = _path_loss(setting) if unit == "dBm" else 0.0
    return Read(curve, Curve(trace.x, trace.y + offset, unit), offset, ())


def _path_loss(setting: Setting) -> float:
    """dB from the unit's connector to the instrument."""
    bench, conditions = setting.bench, setting.conditions
    if bench is None or conditions.shown_at == "unit":
        return 0.0
    return sum(part.loss.value for part in bench.path if part.name in conditions.through)


def _noise(trace: Trace, values: Values, setting: Setting, session: Session) -> Read | None:
    """Noise as levels in an RBW, or as density; shown as density, power average, at the unit."""
    averaging = setting.conditions.averaging
    if averaging == "peak":
        message = "A peak trace of noise says nothing of its power."
        session.fault(values.place("averaging"), "peak", message, "Sweep it with power averaging.")
        return None
    width = 1.0
    if trace.y_unit == "dBm":
        if setting.conditions.rbw_hz is None:
            message = "Noise levels over frequency mean nothing without the resolution bandwidth."
            session.fault(values.start, "missing-key", message, "Add 'rbw:'.")
            return None
        width = setting.conditions.rbw_hz * (setting.bench.noise_ratio if setting.bench is not None else 1.0)
    u = setting.bench.linearity_u if setting.bench is not None else None
    curve = Curve(trace.x, trace.y, trace.y_unit, u, noise_bandwidth_hz=width)
    offset = _path_loss(setting) - 10 * log10(width)
    if averaging in ("log", "voltage"):
        offset += averaging_correction_db(averaging)
    return Read(curve, Curve(trace.x, trace.y + offset, "dBm/Hz"), offset, ())


def _trace(values: Values, session: Session) -> Trace | None:
    if ("file" in values) == ("points" in values):
        message = "A sweep is given either by a 'file' or by 'points'."
        session.fault(values.start, "sweep", message, "Such as 'file: traces/filter.csv'.")
        return None
    if "points" in values:
        return _points(values, session)
    return _file(values["file"], values, session)


def _points(values: Values, session: Session) -> Trace | None:
    points: tuple[tuple[Quantity, Quantity], ...] = values["points"]
    place = values.place("points")
    units = {y.unit for _, y in points}
    if any(x.dimension != "frequency" for x, _ in points) or len(units) > 1 or "Hz" in units:
        message = "Each point is a frequency and a level, the levels all in one unit."
        session.fault(place, "points", message, "Such as [21.390 MHz, -63.1 dB].")
        return None
    x = np.array([point.value for point, _ in points])
    if x[0] < 0 or not np.all(np.diff(x) > 0):
        session.fault(place, "points", "The points' frequencies must rise, and none of them is below zero.")
        return None
    return Trace(values["name"], "", x, "Hz", np.array([y.value for _, y in points]), units.pop())


def _file(file: str, values: Values, session: Session) -> Trace | None:
    if file.lower().rpartition(".")[2][:1] == "s" and file.lower().endswith("p"):
        return _touchstone(file, values, session)
    return trace_of(values, ("frequency",), _Y[values["of"]], session)


def _touchstone(file: str, values: Values, session: Session) -> Trace | None:
    """One S-parameter of a Touchstone file, in dB: S21, or S11 of one port, unless `y` names another."""
    place = values.place("file")
    data = session.read_file(file, place)
    found = None if data is None else read_touchstone(data, session.file_path(file), session.problems)
    if found is None:
        return None
    ports = found.s.shape[1]
    asked = wanted(values, "y", ("ratio",)).column
    name = str(asked).upper() if asked is not None else ("S21" if ports > 1 else "S11")
    digits = name.removeprefix("S")
    out, into = (int(digits[0]), int(digits[1])) if len(digits) == 2 and digits.isdecimal() else (0, 0)
    if not (1 <= out <= ports and 1 <= into <= ports):
        message = f"'{name}' is no parameter of a file with {ports} port{'s' if ports > 1 else ''}."
        hint = did_you_mean(name, [f"S{i}{j}" for i in range(1, ports + 1) for j in range(1, ports + 1)])
        session.fault(values.place("y"), "parameter", message, hint)
        return None
    trace = magnitude_trace(found, out, into)
    known = np.isfinite(trace.y)
    if known.sum() < _FEWEST:
        message = f"'{file}' has {known.sum()} points where {name} is not zero; {_FEWEST} are needed at least."
        session.fault(place, "points", message)
        return None
    return replace(trace, y=np.where(known, trace.y, nan))


def _reference(values: Values, session: Session) -> _Reference | None:
    """The curve to subtract: an earlier sweep by its name, or a file."""
    named = values["reference"]
    earlier = [each.outcome.data for each in session.earlier.get(("sweep", named), ())]
    sweeps = [each for each in earlier if isinstance(each, Sweep)]
    if sweeps:
        return _Reference(sweeps[-1].x, sweeps[-1].y, sweeps[-1].unit, at_unit=True)
    if "." in named:
        trace = _reference_file(named, values, session)
        return None if trace is None else _Reference(trace.x, trace.y, trace.y_unit, at_unit=False)
    known = [name for kind, name in session.earlier if kind == "sweep" and name]
    message = f"No sweep '{named}' was made up to here."
    hint = did_you_mean(named, known) if known else "Name an earlier sweep, or a file."
    session.fault(values.place("reference"), "unknown-sweep", message, hint, named)
    return None


def _reference_file(file: str, values: Values, session: Session) -> Trace | None:
    kept = {key: values[key] for key in ("x", "of", "y") if key in values}
    places = {key: values.place("reference") for key in ("file", *kept)}
    return _file(file, Values({**kept, "file": file}, places, values.place("reference")), session)
