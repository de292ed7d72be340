"""A drawing as SVG, from the cache where it is there."""

from __future__ import annotations

from logbook.cache import Cache
from logbook.pieces import Bars, Chart
from logbook.plots.bars import bars_sheet
from logbook.plots.canvas import sheet_svg
from logbook.plots.chart import chart_sheet
from logbook.plots.key import drawing_key


def draw(drawing: Chart | Bars, cache: Cache | None = None) -> str:
    """The drawing as inline SVG: it scales with the page, follows its colours, and bears no ids."""
    if cache is None:
        return _drawn(drawing)
    key = drawing_key(drawing)
    stored = cache.get(key)
    if stored is not None:
        return stored.decode()
    svg = _drawn(drawing)
    cache.put(key, svg.encode())
    return svg


def _drawn(drawing: Chart | Bars) -> str:
    return sheet_svg(chart_sheet(drawing) if isinstance(drawing, Chart) else bars_sheet(drawing))
