"""Charts of courses over a number or over names."""

from __future__ import annotations

from logbook.pieces import Chart
from logbook.plots.courses import inside
from logbook.plots.frame import Panel, frame, tick_room, x_places, x_words, y_ticks
from logbook.plots.legend import legend
from logbook.plots.scales import x_scale, y_scale
from logbook.plots.shapes import Shape, Sheet
from logbook.plots.style import WIDTH

_HEAD = 28.0
_HEIGHT = 250.0
_LOWER_HEIGHT = 110.0
_RIGHT = WIDTH - 16.0


def chart_sheet(chart: Chart) -> Sheet:
    """A chart, the one beneath it on the same x axis, and the legend."""
    charts = [chart] if chart.below is None else [chart, chart.below]
    panels, bottom = _panels(chart, charts)
    empty = all(panel.empty for panel in panels) and chart.x.scale != "category"
    places = [] if empty else x_places(chart.x, panels[0].x)
    shapes: list[Shape] = []
    words: list[Shape] = []
    for panel in panels:
        shapes += frame(panel, places)
    for panel in panels:
        shapes += inside(panel)
    words, height = ([], 6.0) if empty else x_words(chart.x, panels[0].x, bottom)
    bottom += height
    named = [series for each in charts for series in each.series if series.name and not empty]
    if len(named) > 1:
        samples, height = legend(named, bottom)
        words += samples
        bottom += height
    return Sheet(WIDTH, round(bottom + 6.0), (*shapes, *words))


def _panels(chart: Chart, charts: list[Chart]) -> tuple[list[Panel], float]:
    scales = []
    bottom = 0.0
    for each, height in zip(charts, (_HEIGHT, _LOWER_HEIGHT), strict=False):
        top = bottom + _HEAD
        bottom = top + height
        scales.append(y_scale(each, bottom, top))
    bare = [Panel(each, scale, scale) for each, scale in zip(charts, scales, strict=True)]
    left = round(max(36.0, *(tick_room(y_ticks(panel)) for panel in bare)))
    across = x_scale(chart.x, charts, left, _RIGHT)
    return [Panel(panel.chart, across, panel.y) for panel in bare], bottom
