"""From what a sweep block names to its curve: read, less its reference, and as it is shown at the unit."""

from __future__ import annotations

from dataclasses import dataclass
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
from logbook.traces.touchstone import magnitude_db, read_touchstone
from logbook.traces.trace import Trace

# What may stand on the y axis, by what the sweep is of.
_Y = {
    "bandpass": ("ratio", "level"),
    "response": ("ratio", "level"),
    "spectrum": ("level",),
    "noise": ("level", "density"),
}
_UNIT_DIMENSION = {"dB": "ratio", "dBm": "level", "dBm/Hz": "density"}


@dataclass(frozen=True, slots=True, eq=False)
class Read:
    """A curve as the instrument showed it, and the same as it is shown: at the unit, `offset_db` higher."""

    curve: Curve
    shown: Curve
    offset_db: float
    notes: tuple[str, ...]


def read_curve(values: Values, setting: Setting, session: Session) -> Read | None:
    """The curve that a block names; None with faults."""
    of = values["of"]
    trace = _trace(values, session)
    reference = _reference(values, session) if "reference" in values else None
    if trace is None or ("reference" in values and reference is None):
        return None
    if _UNIT_DIMENSION.get(trace.y_unit) not in _Y[of]:
        message = f"A sweep of a {of} needs {' or '.join(_Y[of])}s over frequency; this one is in {trace.y_unit}."
        session.fault(values.place("y" if "y" in values else "of"), "dimension", message)
        return None
    return _noise(trace, values, setting, session) if of == "noise" else _level(trace, reference, values, setting)


def _level(trace: Trace, reference: tuple[Array, Array, str] | None, values: Values, setting: Setting) -> Read:
    y, unit, calibrated, notes = trace.y, trace.y_unit, trace.y_unit == "dB", []
    x = trace.x
    if reference is not None:
        y = less_reference(x, y, reference[0], reference[1])
        known = np.isfinite(y)
        if not known.all():
            notes.append("the reference does not cover the whole sweep; only what it covers is used")
            x, y = x[known], y[known]
        unit, calibrated = "dB", True
    u = setting.bench.linearity_u if setting.bench is not None else None
    curve = Curve(x, y, unit, u, calibrated)
    if unit != "dBm":
        return Read(curve, curve, 0.0, tuple(notes))
    offset = _path_loss(setting)
    return Read(curve, Curve(x, y + offset, unit), offset, tuple(notes))


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
    if len(points) < 3 or not np.all(np.diff(x) > 0):
        session.fault(place, "points", "The points' frequencies must rise, and three are needed at least.")
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
    found = None if data is None else read_touchstone(data, file, session.problems)
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
    y = np.asarray(magnitude_db(found, out, into), dtype=np.float64)
    return Trace(name, file, found.frequency_hz, "Hz", np.where(np.isfinite(y), y, nan), "dB")


def _reference(values: Values, session: Session) -> tuple[Array, Array, str] | None:
    """The curve to subtract: an earlier sweep by its name, or a file."""
    named = values["reference"]
    earlier = [each.outcome.data for each in session.earlier.get(("sweep", named), ())]
    sweeps = [each for each in earlier if isinstance(each, Sweep)]
    if sweeps:
        return sweeps[-1].x, sweeps[-1].y, named
    if "." in named:
        trace = _reference_file(named, values, session)
        return None if trace is None else (trace.x, trace.y, named)
    known = [name for kind, name in session.earlier if kind == "sweep" and name]
    message = f"No sweep '{named}' was made up to here."
    hint = did_you_mean(named, known) if known else "Name an earlier sweep, or a file."
    session.fault(values.place("reference"), "unknown-sweep", message, hint, named)
    return None


def _reference_file(file: str, values: Values, session: Session) -> Trace | None:
    kept = {key: values[key] for key in ("x", "of", "y") if key in values}
    places = {key: values.place("reference") for key in ("file", *kept)}
    return _file(file, Values({**kept, "file": file}, places, values.place("reference")), session)
