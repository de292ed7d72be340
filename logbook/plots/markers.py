"""Markers and error bars."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from logbook.plots.shapes import Look, Points, Shape, strokes
from logbook.plots.style import Marker

_POLYGONS = {
    "square": np.array([(-3.2, -3.2), (3.2, -3.2), (3.2, 3.2), (-3.2, 3.2)]),
    "box": np.array([(-3.6, -3.6), (3.6, -3.6), (3.6, 3.6), (-3.6, 3.6)]),
    "triangle": np.array([(-4.4, -3.2), (4.4, -3.2), (0.0, 4.4)]),
    "diamond": np.array([(0.0, -5.0), (5.0, 0.0), (0.0, 5.0), (-5.0, 0.0)]),
}
_HOLLOW = ("box", "diamond")
_MOST_BARS = 200
_CAP = 3.5


def markers(points: Points, marker: Marker, look: Look) -> list[Shape]:
    """A marker at each point."""
    if marker == "disc":
        return discs(points, look, 7.0)
    filled = replace(look, width=1.4, dash=(), fill="paper" if marker in _HOLLOW else "colour")
    return strokes([np.round(point + _POLYGONS[marker], 1) for point in points], filled, closed=True)


def discs(points: Points, look: Look, size: float) -> list[Shape]:
    """A disc at each point: a line of no length with round ends, the shortest way to write one."""
    return strokes([np.array([point, point]) for point in points], replace(look, width=size, dash=(), cap="round"))


def error_bars(points: Points, lows: Points, highs: Points, look: Look) -> list[Shape]:
    """Bars with caps, from lows to highs; of very many, every so manieth."""
    whole = np.isfinite(points).all(axis=1) & np.isfinite(lows).all(axis=1) & np.isfinite(highs).all(axis=1)
    places = np.flatnonzero(whole & (lows[:, 1] != highs[:, 1]))
    places = places[:: 1 + len(places) // _MOST_BARS]
    lines = [np.round(np.array([lows[i], highs[i]]), 1) for i in places]
    for end in (lows, highs):
        lines += [np.round(np.array([end[i] - (_CAP, 0), end[i] + (_CAP, 0)]), 1) for i in places]
    return strokes(lines, replace(look, width=1.2, dash=()))
