"""The legend, beneath the chart."""

from __future__ import annotations

from collections.abc import Sequence

from logbook.pieces import Series
from logbook.plots.markers import markers
from logbook.plots.shapes import Shape, Words, line, strokes
from logbook.plots.style import TEXT, WIDTH, role_look, role_marker, shortened, text_width

_SAMPLE = 30.0
_ROW = 22.0
_LONGEST = 50


def legend(series: Sequence[Series], top: float) -> tuple[list[Shape], float]:
    """A sample and a name of each series, in rows, and how much height they take."""
    shapes: list[Shape] = []
    x, y = 8.0, top + 12.0
    for each in series:
        name = shortened(each.name, _LONGEST)
        width = _SAMPLE + 8.0 + text_width(name) + 16.0
        if x > 8.0 and x + width > WIDTH:
            x, y = 8.0, y + _ROW
        shapes += sample(each, x, y)
        shapes.append(Words(x + _SAMPLE + 7.0, y + 4.5, name, look=TEXT))
        x += width
    return shapes, y + 12.0 - top


def sample(series: Series, x: float, y: float) -> list[Shape]:
    """A short piece of a series as it is drawn."""
    look = role_look(series.role)
    shapes = strokes([line((x, y), (x + _SAMPLE, y))], look) if series.line else []
    if series.marker or not series.line:
        shapes += markers(line((x + _SAMPLE / 2, y)), role_marker(series.role), look)
    return shapes
