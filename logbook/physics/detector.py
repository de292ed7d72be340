"""Detectors and displays that answer in volts or divisions per dB: the line, its errors, and levels read through it."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from logbook.physics.constants import Array

_NAN = math.nan


class LineFit(NamedTuple):
    """y = intercept + slope (x - x0): standard uncertainties, their correlation (1) and the scatter of y about it."""

    slope: float
    intercept: float
    u_slope: float
    u_intercept: float
    correlation: float
    scatter: float
    points: int


class DetectorFit(NamedTuple):
    """output = slope (level - intercept): slope in output units per dB, intercept in dBm, their correlation (1).

    scatter is that of the output about the line, in output units; points is how many were fitted.
    """

    slope: float
    intercept_dbm: float
    u_slope: float
    u_intercept_db: float
    correlation: float
    scatter: float
    points: int


class Reading(NamedTuple):
    """A level (dBm) read through a detector; doubt (dB) of its line, of its departure from it and of the output read.

    u_output_db is None where the doubt of the output is not stated.
    """

    level_dbm: float
    u_line_db: float
    u_scatter_db: float
    u_output_db: float | None


def fit_line(x: Array, y: Array, x0: float = 0.0) -> LineFit:
    """Least squares of y = a + b (x - x0), all points alike; [n] and [n], any units.

    Uncertainties from the scatter s^2 = sum of squares/(n - 2): nan for fewer than three points; all nan for fewer than
    two different x. Source: JCGM 100:2008 H.3.
    """
    shifted = np.asarray(x, dtype=np.float64) - x0
    values = np.asarray(y, dtype=np.float64)
    n = len(shifted)
    if n < 2 or not np.ptp(shifted) > 0.0:
        return LineFit(_NAN, _NAN, _NAN, _NAN, _NAN, _NAN, n)
    mean = float(shifted.mean())
    spread = float(np.sum((shifted - mean) ** 2))
    slope = float(np.sum((shifted - mean) * values)) / spread
    intercept = float(values.mean()) - slope * mean
    left = float(np.sum((values - intercept - slope * shifted) ** 2))
    scatter = math.sqrt(left / (n - 2)) if n > 2 else math.nan
    root_mean_square = math.sqrt(float(np.mean(shifted**2)))
    u_slope = scatter / math.sqrt(spread)
    correlation = -mean / root_mean_square if root_mean_square > 0.0 else 0.0
    return LineFit(slope, intercept, u_slope, u_slope * root_mean_square, correlation, scatter, n)


def fit_detector(
    input_dbm: Array, output: Array, window_dbm: tuple[float, float] = (-math.inf, math.inf)
) -> DetectorFit:
    """Least squares over the points whose input lies in the window (bounds included): dBm [n], output [n].

    intercept = level at which the line's output is zero = -a/b, with its doubt and its correlation with the slope by
    first-order propagation. nan where there is no line, or one without slope. Source: JCGM 100:2008 H.3, 5.2.
    """
    levels = np.asarray(input_dbm, dtype=np.float64)
    inside = (levels >= window_dbm[0]) & (levels <= window_dbm[1])
    middle = float(levels[inside].mean()) if inside.any() else 0.0
    # About the middle of the window slope and height are not correlated, which keeps the propagation short.
    line = fit_line(levels[inside], np.asarray(output, dtype=np.float64)[inside], middle)
    if not abs(line.slope) > 0.0:
        return DetectorFit(_NAN, _NAN, _NAN, _NAN, _NAN, _NAN, line.points)
    arm = line.intercept / line.slope
    per_height, per_slope = -1.0 / line.slope, arm / line.slope
    u_intercept = math.hypot(per_height * line.u_intercept, per_slope * line.u_slope)
    correlation = per_slope * line.u_slope / u_intercept if u_intercept > 0.0 else math.nan
    return DetectorFit(line.slope, middle - arm, line.u_slope, u_intercept, correlation, line.scatter, line.points)


def conformance_errors(fit: DetectorFit, input_dbm: Array, output: Array) -> Array:
    """output/slope + intercept - input: what the line reads minus what was put in, dB, [n]. Source: definition."""
    errors: Array = np.asarray(output, dtype=np.float64) / fit.slope + fit.intercept_dbm - input_dbm
    return errors


def step_errors(fit: DetectorFit, input_dbm: Array, output: Array) -> Array:
    """(step of the output)/slope - step of the input, dB, [n] to [n - 1], in the order given. Source: definition."""
    errors: Array = np.diff(conformance_errors(fit, input_dbm, output))
    return errors


def range_within(
    input_dbm: Array, errors_db: Array, limit_db: float, window_dbm: tuple[float, float] = (-math.inf, math.inf)
) -> tuple[float, float]:
    """Lowest and highest input (dBm) between which |error| stays within the limit (dB), in one piece; nan for none.

    Of several such pieces the one with most points in the fit window, then the longest. Its ends are interpolated
    linearly towards the next point beyond the limit, and never lie outside the points. Source: definition.
    """
    order = np.argsort(input_dbm)
    x = np.asarray(input_dbm, dtype=np.float64)[order]
    errors = np.asarray(errors_db, dtype=np.float64)[order]
    inside = np.flatnonzero(np.abs(errors) <= limit_db)
    if not inside.size:
        return math.nan, math.nan
    pieces = np.split(inside, np.flatnonzero(np.diff(inside) > 1) + 1)
    fitted = (x >= window_dbm[0]) & (x <= window_dbm[1])
    best = max(pieces, key=lambda piece: (int(fitted[piece].sum()), float(x[piece[-1]] - x[piece[0]])))
    return _end(x, errors, int(best[0]), -1, limit_db), _end(x, errors, int(best[-1]), +1, limit_db)


def _end(x: Array, errors: Array, inside: int, step: int, limit_db: float) -> float:
    beyond = inside + step
    if not 0 <= beyond < len(x) or math.isnan(errors[beyond]):
        return float(x[inside])
    limit = math.copysign(limit_db, errors[beyond])
    part = (limit - errors[inside]) / (errors[beyond] - errors[inside])
    return float(x[inside] + part * (x[beyond] - x[inside]))


def level_from_output(fit: DetectorFit, output: float, u_output: float | None = None) -> Reading:
    """level = output/slope + intercept: volts (or divisions) to dBm with its doubt in dB, by what it comes from.

    The line's part uses the correlation of slope and intercept; the scatter stands for the detector's departure
    from its line. Source: JCGM 100:2008 5.2, H.3.
    """
    level = output / fit.slope + fit.intercept_dbm
    by_slope = -output / fit.slope**2 * fit.u_slope
    variance = by_slope**2 + fit.u_intercept_db**2 + 2.0 * fit.correlation * by_slope * fit.u_intercept_db
    # Where the line is known exactly the correlation is nan and there is nothing to correlate.
    exact = fit.u_slope == 0.0 and fit.u_intercept_db == 0.0
    u_line = 0.0 if exact else math.sqrt(max(variance, 0.0))
    u_read = None if u_output is None else abs(u_output / fit.slope)
    return Reading(level, u_line, fit.scatter / abs(fit.slope), u_read)


def line_parts(fit: DetectorFit, output: float) -> tuple[float, float]:
    """The doubt (dB) of a level read through a line, taken apart: of the line's height, and of its slope with sign.

    At the output where the slope's error does nothing, v0 = r u_intercept slope^2/u_slope, both are independent: u of
    the height is u_intercept sqrt(1 - r^2), and the slope adds (v0 - v) u_slope/slope^2. Two readings through one line
    share the error of either, so that levels far apart differ by what the slope is wrong.
    Source: JCGM 100:2008 5.2.2, H.3.5; the orthogonal form of the fit in `fit_detector`.
    """
    if not fit.u_slope > 0.0:
        return fit.u_intercept_db, 0.0
    middle = fit.correlation * fit.u_intercept_db * fit.slope**2 / fit.u_slope
    height = fit.u_intercept_db * math.sqrt(max(1.0 - fit.correlation**2, 0.0))
    return height, (middle - output) * fit.u_slope / fit.slope**2
