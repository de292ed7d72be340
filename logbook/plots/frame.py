"""A chart's frame: grid, ticks, and what is written along the axes."""

from __future__ import annotations

from dataclasses import dataclass

from logbook.pieces import Axis, Chart
from logbook.plots.categories import category_names, shown_categories
from logbook.plots.scales import Scale, drawable
from logbook.plots.shapes import Shape, Words, line, strokes
from logbook.plots.style import FRAME, GRID, TEXT, WIDTH, text_width
from logbook.plots.ticks import Ticks, linear_ticks, log_ticks


@dataclass(frozen=True, slots=True)
class Panel:
    """One chart on the sheet with its scales; y counts downwards from top to bottom."""

    chart: Chart
    x: Scale
    y: Scale

    @property
    def box(self) -> tuple[float, float, float, float]:
        """Left, top, right, bottom."""
        return self.x.start, self.y.stop, self.x.stop, self.y.start

    @property
    def empty(self) -> bool:
        """Nothing has a place here, so the axes' numbers would mean nothing."""
        return not drawable(self.chart) and not self.chart.limits


def axis_ticks(axis: Axis, scale: Scale, most: int) -> Ticks:
    """The ticks of a numeric axis."""
    return (log_ticks if scale.log else linear_ticks)(scale.low, scale.high, axis.label, most)


def y_ticks(panel: Panel) -> Ticks:
    """As many ticks as the panel's height bears."""
    return axis_ticks(panel.chart.y, panel.y, max(2, int(abs(panel.y.stop - panel.y.start) / 32)))


def tick_room(ticks: Ticks) -> float:
    """The width that an axis' numbers take to its left."""
    return max(map(text_width, ticks.texts), default=0.0) + 12.0


def frame(panel: Panel, x_places: list[float]) -> list[Shape]:
    """Grid, axes, the numbers of the y axis, and its label above it: nothing has to be read sideways."""
    left, top, right, bottom = panel.box
    ticks = y_ticks(panel) if not panel.empty else Ticks((), (), panel.chart.y.label)
    heights = [round(panel.y.at(value), 1) for value in ticks.values]
    grid = [line((left, y), (right, y)) for y in heights] + [line((x, top), (x, bottom)) for x in x_places]
    shapes = strokes(grid, GRID)
    shapes += strokes([line((left, top), (left, bottom), (right, bottom))], FRAME)
    shapes += [Words(left - 7.0, y + 4.5, text, "end", look=TEXT) for y, text in zip(heights, ticks.texts, strict=True)]
    if ticks.label:
        shapes.append(Words(4.0, top - 10.0, ticks.label, look=TEXT))
    return shapes


def x_places(axis: Axis, scale: Scale) -> list[float]:
    """Where the x axis has its grid."""
    if axis.scale == "category":
        return [round(scale.at(i), 1) for i in shown_categories(axis.ticks, scale)]
    return [round(scale.at(value), 1) for value in x_ticks(axis, scale).values]


def x_words(axis: Axis, scale: Scale, bottom: float) -> tuple[list[Shape], float]:
    """What is written along the x axis, and how much height it takes."""
    if axis.scale == "category":
        shapes, height = category_names(axis.ticks, scale, bottom)
        label = axis.label
    else:
        ticks = x_ticks(axis, scale)
        shapes = [
            Words(_on_sheet(scale.at(value), text), bottom + 18.0, text, "middle", look=TEXT)
            for value, text in zip(ticks.values, ticks.texts, strict=True)
        ]
        height, label = 24.0, ticks.label
    if label:
        shapes.append(Words(scale.stop, bottom + height + 14.0, label, "end", look=TEXT))
        height += 20.0
    return shapes, height


def _on_sheet(x: float, text: str) -> float:
    # The last number of an axis is moved inwards by what would stand beyond the sheet.
    return round(min(x, WIDTH - text_width(text) / 2), 1)


def x_ticks(axis: Axis, scale: Scale) -> Ticks:
    """As many ticks as have room beside each other."""
    width = scale.stop - scale.start
    ticks = axis_ticks(axis, scale, 8)
    for most in (7, 6, 5, 4, 3):
        if max(map(text_width, ticks.texts), default=0.0) + 3.0 <= width / max(len(ticks.texts), 1):
            break
        ticks = axis_ticks(axis, scale, most)
    return ticks
