"""Lines and noise in a measured spectrum: level in dBm over rising frequency in Hz, both (N,)."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from logbook.physics.constants import Array, V
from logbook.physics.curves import maxima, parabola_top, value_at
from logbook.physics.decibels import db_from_ratio, ratio_from_db


class Lines(NamedTuple):
    """Spectral lines by rising frequency: `frequency` (Hz) and `level` (dBm), (K,) each."""

    frequency: Array
    level: Array


def spectrum_lines(x: Array, y: Array, threshold: float, excursion_db: float = 6.0) -> Lines:
    """The maxima of a spectrum at or above a threshold (dBm), each refined by the parabola on dB: Hz and dBm, (K,).

    The curve must fall by excursion_db on both sides of a line, so that the ripples of noise are none; a line at the
    edge of the trace is none either. nan counts as the lowest level. Source: `curves.maxima`, `curves.parabola_top`.
    """
    # What lies deeper than the excursion beneath the threshold decides nothing and would only take time.
    tops = maxima(np.fmax(y, threshold - excursion_db), excursion_db)
    tops = tops[y[tops] >= threshold]
    return Lines(*parabola_top(x, y, tops))


def strongest(lines: Lines) -> int | None:
    """The index of the line with the highest level, the first of equals; None where there is no line.

    Source: definition; the fundamental when none is named.
    """
    return int(np.argmax(lines.level)) if len(lines.level) else None


def harmonic_orders(
    frequency_hz: Array, fundamental_hz: float, tolerance_hz: float, fundamental_tolerance_hz: float = 0.0
) -> npt.NDArray[np.intp]:
    """n of each frequency (Hz, (K,)) within tolerance_hz + n fundamental_tolerance_hz of n fundamental_hz, 0 for none.

    1 is the fundamental itself. Of several frequencies that would be the same harmonic only the nearest is. Where the
    tolerance reaches half of the fundamental every frequency would be one, so none is. All 0 for a fundamental that is
    not positive. Source: definition.
    """
    orders: npt.NDArray[np.intp] = np.zeros(len(frequency_hz), dtype=np.intp)
    if not fundamental_hz > 0:
        return orders
    nearest = np.rint(np.nan_to_num(frequency_hz) / fundamental_hz)
    off = np.abs(frequency_hz - nearest * fundamental_hz)
    allowed = tolerance_hz + nearest * fundamental_tolerance_hz
    candidates = np.flatnonzero((nearest >= 1) & (off <= allowed) & (allowed < fundamental_hz / 2.0))
    by_nearness = candidates[np.argsort(off[candidates], kind="stable")]
    kept = by_nearness[np.unique(nearest[by_nearness], return_index=True)[1]]
    orders[kept] = nearest[kept].astype(np.intp)
    return orders


def noise_density(level_dbm: V, noise_bandwidth_hz: V) -> V:
    """level - 10 lg Bn: dBm in a noise bandwidth (Hz) to dBm/Hz, any shape; nan for Bn of zero or less.

    For power averages; others are corrected first (`averaging.averaging_correction_db`). Source: closed form.
    """
    return level_dbm - db_from_ratio(noise_bandwidth_hz)


def band_power(x: Array, y: Array, noise_bandwidth_hz: float, lower_hz: float, upper_hz: float) -> float:
    """10 lg(sum of 10^(y_i/10) w_i / Bn): power of noise (dBm) between two frequencies, y in dBm in Bn (Hz).

    w_i (Hz) is the part of sample i's bin inside the band; a bin reaches half-way to its neighbours, those at the ends
    as far outward as inward. nan for fewer than two samples, a band that is empty or reaches out of the bins, a nan
    within it, and Bn of zero or less. Source: common practice; for a band from sample to sample the trapezoidal rule.
    """
    if len(x) < 2 or not lower_hz < upper_hz:
        return np.nan
    middles = (x[1:] + x[:-1]) / 2.0
    bounds = np.concatenate([[2.0 * x[0] - middles[0]], middles, [2.0 * x[-1] - middles[-1]]])
    if lower_hz < bounds[0] or upper_hz > bounds[-1]:
        return np.nan
    widths = np.minimum(bounds[1:], upper_hz) - np.maximum(bounds[:-1], lower_hz)
    inside = widths > 0
    total = float(np.sum(ratio_from_db(y[inside]) * widths[inside]))
    return float(db_from_ratio(total)) - float(db_from_ratio(noise_bandwidth_hz))


def band_density(x: Array, y: Array, noise_bandwidth_hz: float, lower_hz: float, upper_hz: float) -> float:
    """`band_power` - 10 lg(upper - lower): the mean density of a band (dBm/Hz); nan as there. Source: closed form."""
    if not lower_hz < upper_hz:
        return np.nan
    power = band_power(x, y, noise_bandwidth_hz, lower_hz, upper_hz)
    return power - float(db_from_ratio(upper_hz - lower_hz))


def spot_density(x: Array, y: Array, noise_bandwidth_hz: float, at_hz: float, span_hz: float = 0.0) -> float:
    """The density at a frequency (dBm/Hz): the mean of `band_density` over span_hz about it, y in dBm in Bn (Hz).

    A single sample of noise scatters; a span takes the mean of power over several. Without a span the curve is
    interpolated in dB. nan out of range. Source: `band_density`, `curves.value_at`.
    """
    if span_hz > 0:
        return band_density(x, y, noise_bandwidth_hz, at_hz - span_hz / 2.0, at_hz + span_hz / 2.0)
    return noise_density(value_at(x, y, at_hz), noise_bandwidth_hz)
