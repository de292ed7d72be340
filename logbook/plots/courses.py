"""What stands in a chart's panel: courses, limits, and points worth a word."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from logbook.pieces import Mark, Series
from logbook.plots.decimate import decimated, short_courses
from logbook.plots.frame import Panel
from logbook.plots.markers import discs, error_bars, markers
from logbook.plots.placing import Room, inked
from logbook.plots.scales import same_length
from logbook.plots.shapes import Look, Points, Shape, Stroke, Words, line, strokes
from logbook.plots.style import LEADER, QUIET, depth, role_look, role_marker, shortened

_MOST_MARKERS = 60
_LIMIT = role_look("limit")
_HATCH = replace(_LIMIT, width=1.0, opacity=0.55)
_LONGEST = 48


def inside(panel: Panel) -> list[Shape]:
    """Limits, courses and marks of a panel, with their words placed last."""
    courses = [
        shape for each in sorted(panel.chart.series, key=lambda s: depth(s.role)) for shape in _course(each, panel)
    ]
    limits = _limits(panel)
    drawn = [each for shape in (*limits, *courses) if isinstance(shape, Stroke) for each in shape.lines]
    room = Room(panel.box, inked(drawn))
    shapes = [*limits, *courses]
    if not courses:
        left, top, right, bottom = panel.box
        shapes.append(Words((left + right) / 2, (top + bottom) / 2, "nothing to draw", "middle", look=QUIET, halo=True))
    return [*shapes, *_marks(panel, room), *_limit_words(panel, room)]


def _course(series: Series, panel: Panel) -> list[Shape]:
    x, y, error = same_length(series)
    look, places = role_look(series.role), panel.x.place(x)
    points = np.column_stack([places, panel.y.place(y)])
    shapes: list[Shape] = []
    if np.isfinite(error).any():
        lows, highs = (np.column_stack([places, panel.y.place(end)]) for end in (y - error, y + error))
        shapes += error_bars(points, lows, highs, look)
    if series.line:
        lines = short_courses(points)
        shapes += strokes([each for each in lines if len(each) > 1], look)
        alone = [each[0] for each in lines if len(each) == 1]
        if alone and not series.marker:
            # A point between two gaps has no line to be seen by.
            shapes += discs(np.array(alone), look, 2.2 * look.width)
    if series.marker or not series.line:
        shapes += _points(points[np.isfinite(points).all(axis=1)], series, look)
    return shapes


def _points(points: Points, series: Series, look: Look) -> list[Shape]:
    if len(points) <= _MOST_MARKERS:
        return markers(np.round(points, 1), role_marker(series.role), look)
    return [] if series.line else discs(np.round(decimated(points), 1), look, 3.0)


def _limits(panel: Panel) -> list[Shape]:
    shapes: list[Shape] = []
    left, _, right, _ = panel.box
    for limit in panel.chart.limits:
        for value, way in ((limit.low, 1.0), (limit.high, -1.0)):
            y = float("nan") if value is None else round(panel.y.at(value), 1)
            if np.isfinite(y):
                shapes += strokes([line((left, y), (right, y))], _LIMIT)
                # Teeth point to the side where a value must not be.
                teeth = np.arange(left + 7.0, right, 9.0)
                shapes += strokes([line((x, y), (x - 5.0, y + way * 7.0)) for x in teeth], _HATCH)
    return shapes


def _limit_words(panel: Panel, room: Room) -> list[Shape]:
    shapes: list[Shape] = []
    left, _, right, _ = panel.box
    for limit in panel.chart.limits:
        value, below = (limit.high, True) if limit.high is not None else (limit.low, False)
        y = float("nan") if value is None else panel.y.at(value)
        if limit.text and np.isfinite(y):
            # Clear of the teeth: on the side where values may be, and only then beyond them.
            heights = (y + 16.0, y - 13.0) if below else (y - 7.0, y + 23.0)
            text = shortened(limit.text, _LONGEST)
            sides = ((right - 4.0, "end"), (left + 6.0, "start"), ((left + right) / 2, "middle"))
            shapes.append(room.put(text, [(x, h, anchor) for h in heights for x, anchor in sides]))  # type: ignore[misc]
    return shapes


def _marks(panel: Panel, room: Room) -> list[Shape]:
    shapes: list[Shape] = []
    for mark, x, y in _placed(panel):
        words = room.put_beside(shortened(mark.text, _LONGEST), x, y)
        if abs(words.y - y) > 25:
            shapes += strokes([line((x, y), (words.x, words.y + (4.0 if words.y < y else -13.0)))], LEADER)
        shapes += discs(line((x, y)), Look(), 5.0)
        shapes.append(words)
    return shapes


def _placed(panel: Panel) -> list[tuple[Mark, float, float]]:
    placed = [(m, round(panel.x.at(m.x), 1), round(panel.y.at(m.y), 1)) for m in panel.chart.marks]
    return [each for each in placed if np.isfinite(each[1]) and np.isfinite(each[2])]
