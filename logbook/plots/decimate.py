"""Courses of many points, made as short as the sheet can show them."""

from __future__ import annotations

import numpy as np

from logbook.plots.shapes import Points

# A line's width in sheet units is more than this: nothing that could be seen is lost.
_COLUMN = 1.0
_FEW = 400


def runs(points: Points) -> list[Points]:
    """The unbroken parts of a course: nan breaks it."""
    finite = np.isfinite(points).all(axis=1)
    if finite.all():
        return [points] if len(points) else []
    edges = np.flatnonzero(np.diff(finite.astype(np.int8), prepend=0, append=0))
    return [points[start:stop] for start, stop in zip(edges[::2], edges[1::2], strict=True)]


def decimated(points: Points) -> Points:
    """First, lowest, highest and last point in each column of the sheet, in the order they came.

    A spike of one point is the highest of its column: it stays.
    """
    if len(points) <= _FEW:
        return points
    column = np.floor(points[:, 0] / _COLUMN)
    starts = np.flatnonzero(np.diff(column, prepend=np.nan) != 0)
    if 4 * len(starts) >= len(points):
        return points
    group = np.repeat(np.arange(len(starts)), np.diff(starts, append=len(points)))
    order = np.lexsort((points[:, 1], group))
    ends = np.append(starts[1:], len(points)) - 1
    kept = np.unique(np.concatenate([starts, ends, order[starts], order[ends]]))
    short: Points = points[kept]
    return short


def short_courses(points: Points) -> list[Points]:
    """A course as unbroken parts, decimated and rounded to a tenth of a unit of the sheet."""
    return [np.round(decimated(run), 1) for run in runs(points)]
