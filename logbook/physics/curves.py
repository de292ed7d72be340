"""What is read off a measured curve: y in dB (or dBm) over rising x in Hz, both (N,); nan in y is a point not known.

Between the points a curve runs straight in dB.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from logbook.physics.constants import Array, V
from logbook.physics.decibels import positive_or_nan

Indices = npt.NDArray[np.intp]


class Peak(NamedTuple):
    """The top of a curve: x (Hz), y (dB); `at_edge`: the first or last sample, more may lie beyond."""

    x: float
    y: float
    at_edge: bool


class Edges(NamedTuple):
    """Where a curve crosses a level on either side of its peak: Hz, or arrays of it; nan where it does not."""

    lower: Array
    upper: Array


def parabola_top(x: Array, y: Array, index: Indices) -> tuple[Array, Array]:
    """Top of the parabola through samples i-1, i, i+1, uneven steps allowed: x (Hz) and y (dB), each as `index` (int).

    p(x) = y_i + b (x - x_i) + a (x - x_i)^2; top at x_i - b/2a, y_i - b^2/4a. The sample itself where i is the first
    or last, where a neighbour is nan or higher, and where the three are level.
    Source: Smith, Spectral Audio Signal Processing, eq. 6.29, 6.30; here by divided differences for uneven steps.
    """
    i = np.clip(index, 1, max(len(x) - 2, 0))
    before, after = np.maximum(i - 1, 0), np.minimum(i + 1, len(x) - 1)
    with np.errstate(divide="ignore", invalid="ignore"):
        rise = (y[i] - y[before]) / (x[i] - x[before])
        fall = (y[after] - y[i]) / (x[after] - x[i])
        a = (fall - rise) / (x[after] - x[before])
        b = rise + a * (x[i] - x[before])
        within = (i == index) & (rise >= 0) & (fall <= 0) & (a < 0)
        along = np.where(within, -b / (2.0 * a), 0.0)
        up = np.where(within, -b * b / (4.0 * a), 0.0)
    return x[index] + along, y[index] + up


def find_peak(x: Array, y: Array) -> Peak:
    """The highest sample of a curve (N,), refined by `parabola_top`; x in Hz, y in dB.

    At an edge it is the sample itself and says so. Of samples equally high the first counts, and where it has equals
    beside it the middle one of them. nan where all y are nan or there are none. Source: `parabola_top`.
    """
    if not np.any(np.isfinite(y)):
        return Peak(np.nan, np.nan, False)
    first = int(np.nanargmax(y))
    last = first + int(np.argmin(np.append(y[first:] == y[first], False))) - 1
    index = (first + last) // 2
    if first == 0 or last == len(y) - 1:
        return Peak(float(x[index]), float(y[index]), True)
    top_x, top_y = parabola_top(x, y, np.array([index]))
    return Peak(float(top_x[0]), float(top_y[0]), False)


def edges_at(x: Array, y: Array, level_db: Array) -> Edges:
    """The crossings of levels (dB, (K,)) nearest to the highest sample on each side: Hz, (K,) each.

    x_j + (L - y_j) (x_j+1 - x_j)/(y_j+1 - y_j) between the last sample above the level and the first that is not. nan
    where the curve ends or has a nan before it falls to the level, and where no sample is above it.
    Source: linear interpolation in dB, common practice.
    """
    levels = np.atleast_1d(np.asarray(level_db, dtype=np.float64))
    if not np.any(np.isfinite(y)):
        return Edges(np.full(levels.shape, np.nan), np.full(levels.shape, np.nan))
    top = int(np.nanargmax(y))
    lower = [_first_crossing(x[top::-1], y[top::-1], level) for level in levels]
    upper = [_first_crossing(x[top:], y[top:], level) for level in levels]
    return Edges(np.array(lower), np.array(upper))


def _first_crossing(x: Array, y: Array, level_db: float) -> float:
    """Where a curve that begins at its peak first comes down to a level."""
    outside = ~(y > level_db)
    j = int(np.argmax(outside))
    if not outside[j] or j == 0:
        return np.nan
    return float(x[j - 1] + (level_db - y[j - 1]) * (x[j] - x[j - 1]) / (y[j] - y[j - 1]))


def edges_below_peak(x: Array, y: Array, below_db: Array) -> Edges:
    """`edges_at` the levels peak - below_db (dB, (K,), positive), the peak being that of `find_peak`: Hz, (K,) each.

    nan as in `edges_at`. Source: definition of a band-pass filter's bandwidth, common practice.
    """
    return edges_at(x, y, find_peak(x, y).y - np.atleast_1d(np.asarray(below_db, dtype=np.float64)))


def bandwidth(edges: Edges) -> Array:
    """upper - lower (Hz), (K,); nan where either edge is. Source: definition."""
    return edges.upper - edges.lower


def arithmetic_centre(edges: Edges) -> Array:
    """(lower + upper)/2 (Hz), (K,); nan where either edge is. Source: definition."""
    return (edges.lower + edges.upper) / 2.0


def geometric_centre(edges: Edges) -> Array:
    """sqrt(lower upper) (Hz), (K,): the centre of a band-pass made from a low-pass; nan for a lower edge at or below 0.

    Source: the low-pass to band-pass transformation, closed form.
    """
    return np.sqrt(positive_or_nan(edges.lower)) * np.sqrt(positive_or_nan(edges.upper))


def shape_factor(wide_hz: V, narrow_hz: V) -> V:
    """wide/narrow (1): bandwidth at the lower level (60 dB) over that at the upper (3 or 6 dB), Hz, any shape.

    nan where either is nan or the narrow one is not positive. Source: definition.
    """
    return wide_hz / positive_or_nan(narrow_hz)


def skirt_balance(edges: Edges, centre_hz: float) -> Array:
    """(upper - centre) - (centre - lower) (Hz), (K,): positive where the upper skirt is wider; nan where an edge is.

    `centre_hz` should be the arithmetic centre at the smallest level asked for (-3 dB), not the peak: in a pass-band
    with ripple the peak is whichever bump happens to be highest, so that half-widths about it differ in a filter with
    equal skirts. About the centre the balance at that smallest level is 0 by definition, and what is left at the lower
    levels is the skirts' own. Source: common practice.
    """
    return edges.upper + edges.lower - 2.0 * centre_hz


def value_at(x: Array, y: Array, at: V) -> V:
    """The curve at `at` (Hz, any shape) by linear interpolation in dB; nan outside of the curve and beside a nan.

    A wanted x that is a sample's gives that sample, even beside a nan. Source: linear interpolation, common practice.
    """
    if not len(x):
        return np.add(at, np.nan)  # type: ignore[no-any-return]
    found: V = np.interp(at, x, y, left=np.nan, right=np.nan)
    return found


def less_reference(x: Array, y: Array, reference_x: Array, reference_y: Array) -> Array:
    """y - reference at the curve's own x (dB, (N,)): the reference sweep (M,) is interpolated, nan outside of it.

    Source: substitution: the difference of two readings through the same set-up, common practice.
    """
    return y - value_at(reference_x, reference_y, x)


def flatness(x: Array, y: Array, lower_hz: float, upper_hz: float) -> float:
    """Highest less lowest value within a band (dB), its two ends interpolated; this is the ripple of a given band.

    nan where the band is not within the curve, has a nan in it, or is empty. Source: definition.
    """
    if not lower_hz < upper_hz:
        return np.nan
    ends = value_at(x, y, np.array([lower_hz, upper_hz]))
    inside = y[(x > lower_hz) & (x < upper_hz)]
    return float(np.ptp(np.concatenate([ends, inside])))


def passband_ripple(x: Array, y: Array, below_db: float, excursion_db: float = 0.1) -> float:
    """Highest less lowest value (dB) between the outermost maxima of the pass-band at peak - below_db; 0 with only one.

    Between the band's edges themselves it would be below_db at least, whatever the filter. A maximum counts when the
    curve falls by excursion_db on both sides of it, so that noise on the skirts makes none. nan where the band has no
    edge on a side. Source: peak to valley, common practice; Chebyshev responses have it equal to their design ripple.
    """
    edges = edges_below_peak(x, y, np.array([below_db]))
    if not np.isfinite(bandwidth(edges)[0]):
        return np.nan
    tops = maxima(y, excursion_db)
    tops = tops[(x[tops] > edges.lower[0]) & (x[tops] < edges.upper[0])]
    if len(tops) < 2:
        return 0.0
    between = slice(int(tops[0]), int(tops[-1]) + 1)
    return float(np.max(parabola_top(x, y, tops)[1]) - np.min(y[between]))


def maxima(y: Array, excursion_db: float) -> Indices:
    """Indices (int) of the local maxima from which y (dB, (N,)) falls by excursion_db at least before it rises higher.

    So on both sides: a sample at an edge is none. Where several samples are level the middle one stands for them; nan
    counts as the lowest value there is. Of maxima equally high without such a fall between them the first counts.
    Source: peak excursion as on spectrum analysers; a topographic prominence of excursion_db or more.
    """
    known = y[np.isfinite(y)]
    if not len(known):
        return np.empty(0, dtype=np.intp)
    level = np.where(np.isnan(y), known.min(), y)
    starts = np.flatnonzero(np.concatenate([[True], np.diff(level) != 0]))
    middles = (starts + np.concatenate([starts[1:], [len(level)]]) - 1) // 2
    runs = level[starts]
    steps = np.sign(np.diff(runs))
    turns = np.concatenate([[0], np.flatnonzero(np.diff(steps)) + 1, [len(runs) - 1]])
    tops = _tops(runs[turns].tolist(), excursion_db)
    found: Indices = middles[turns[tops]]
    return found


def _tops(values: list[float], excursion_db: float) -> list[int]:
    """Which turning points are maxima: a rise by the excursion leads to each, a fall by it comes after."""
    found: list[int] = []
    lowest, top = values[0], -1
    for index, value in enumerate(values):
        if top < 0:
            lowest = min(lowest, value)
            if value > lowest and value - lowest >= excursion_db:
                top = index
        elif value > values[top]:
            top = index
        elif values[top] - value >= excursion_db and value < values[top]:
            found.append(top)
            lowest, top = value, -1
    return found
