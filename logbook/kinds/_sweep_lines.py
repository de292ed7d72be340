"""The lines of a spectrum: the carrier, its harmonics and what else stands above the threshold, with lasting keys."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from logbook.kinds._sweep_reports import Curve
from logbook.physics.spectrum import harmonic_orders, spectrum_lines, strongest
from logbook.quantity_display import show_frequency
from logbook.sweep import Found

# Without a threshold, lines are what stands so far above the middle of all levels (dB).
_ABOVE_MEDIAN = 12.0
_MOST = 40


@dataclass(frozen=True, slots=True)
class SpectrumLines:
    """What was found, the frequency under which each line is kept, and notes."""

    found: tuple[Found, ...]
    kept: Mapping[str, float]
    notes: tuple[str, ...]


def find_lines(
    curve: Curve, threshold_dbm: float | None, carrier_hz: float | None, width_hz: float, earlier: Iterable[float]
) -> SpectrumLines:
    """Every line above the threshold (dBm). `carrier_hz` None: the strongest is the carrier; `width_hz` its tolerance.

    A harmonic is kept under its exact multiple of the carrier, another line under the frequency of the same line in an
    earlier sweep if there is one, else rounded to the width; so that small differences of reading do not part them.
    """
    threshold = threshold_dbm if threshold_dbm is not None else float(np.median(curve.y)) + _ABOVE_MEDIAN
    lines = spectrum_lines(curve.x, curve.y, threshold)
    top = strongest(lines)
    if top is None:
        return SpectrumLines((), {}, (f"no line stands above {threshold:.1f} dBm",))
    known = sorted(earlier)
    nominal = carrier_hz if carrier_hz is not None else _settled(float(lines.frequency[top]), width_hz, known)
    orders = harmonic_orders(lines.frequency, nominal, width_hz, width_hz)
    carrier = next((float(lines.level[i]) for i in range(len(orders)) if orders[i] == 1), None)
    notes = [] if carrier is not None else [f"no line stands at the carrier, {show_frequency(nominal)}"]
    found: list[Found] = []
    kept: dict[str, float] = {}
    loudest = sorted(range(len(orders)), key=lambda i: -float(lines.level[i]))[:_MOST]
    if len(orders) > _MOST:
        notes.append(f"{len(orders)} lines stand above {threshold:.1f} dBm; the {_MOST} loudest are kept")
    for i in sorted(loudest):
        level, order = float(lines.level[i]), int(orders[i])
        at = order * nominal if order else _settled(float(lines.frequency[i]), width_hz, known)
        each = _line(at, level, order, carrier, curve)
        found.append(each)
        kept[f"{each.quantity}@{at}"] = at
    return SpectrumLines(tuple(found), kept, tuple(notes))


def _line(at: float, level: float, order: int, carrier: float | None, curve: Curve) -> Found:
    mark = ((at, level, show_frequency(at)),)
    if order == 1:
        return Found("output_level", level, "dBm", curve.u_db, at, marks=mark)
    if order > 1 and carrier is not None:
        return Found("harmonic", level - carrier, "dBc", curve.u_ratio, at, marks=mark)
    return Found("spur_level", level, "dBm", curve.u_db, at, marks=mark)


def _settled(frequency_hz: float, width_hz: float, known: list[float]) -> float:
    near = [each for each in known if abs(each - frequency_hz) <= width_hz]
    return min(near, key=lambda each: abs(each - frequency_hz)) if near else _rounded(frequency_hz, width_hz)


def _rounded(frequency_hz: float, width_hz: float) -> float:
    """The frequency to the power of ten at or below the width."""
    step = 10.0 ** np.floor(np.log10(width_hz))
    return float(f"{round(frequency_hz / step) * step:.12g}")
