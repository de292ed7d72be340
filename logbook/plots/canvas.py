"""A sheet drawn by Matplotlib as SVG."""

from __future__ import annotations

from io import StringIO
from typing import Any

import numpy as np

from logbook.plots.shapes import Points, Sheet, Stroke, Words
from logbook.plots.style import FONT
from logbook.plots.trim import trimmed

# Shorter courses are drawn point by point; markers are courses of no length, which simplifying would drop.
_LONG = 100
_SETTINGS: dict[Any, Any] = {
    "svg.fonttype": "none",
    "svg.hashsalt": "logbook",
    "path.simplify": True,
    "path.simplify_threshold": 0.5,
}
_NO_METADATA = {"Date": None, "Creator": None, "Format": None, "Type": None}


def sheet_svg(sheet: Sheet) -> str:
    """The sheet as inline SVG: no ids, no fonts, colours that follow the page."""
    return trimmed(_drawn(sheet), sheet)


def _drawn(sheet: Sheet) -> str:
    # Matplotlib takes a second to import, and a build whose drawings are all in the cache needs none of it.
    import matplotlib
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure
    from matplotlib.patches import PathPatch
    from matplotlib.path import Path
    from matplotlib.text import Text
    from matplotlib.transforms import Affine2D

    # Artists on the figure itself, without axes and their ticks: a quarter of the time. At 72 dots per inch a point of
    # Matplotlib is a unit of the sheet, and the sheet counts downwards.
    downwards = Affine2D.from_values(1, 0, 0, -1, 0, sheet.height)

    def patch(shape: Stroke) -> PathPatch:
        path = Path(*_joined(shape, Path))
        path.should_simplify = not shape.closed and any(len(line) > _LONG for line in shape.lines)
        return PathPatch(path, fill=shape.look.fill != "none", transform=downwards)

    def words(shape: Words) -> Text:
        made = Text(shape.x, shape.y, shape.text, fontsize=FONT, rotation=shape.angle, parse_math=False)
        made.set(ha=_SIDES[shape.anchor], va="baseline", rotation_mode="anchor", transform=downwards)
        return made

    with matplotlib.rc_context(_SETTINGS):
        figure = Figure(figsize=(sheet.width / 72, sheet.height / 72), dpi=72)
        figure.patch.set_visible(False)
        for number, shape in enumerate(sheet.shapes):
            artist = patch(shape) if isinstance(shape, Stroke) else words(shape)
            artist.set(gid=f"lb{number}", zorder=number)
            figure.add_artist(artist)
        out = StringIO()
        canvas: Any = FigureCanvasSVG(figure)
        canvas.print_svg(out, metadata=_NO_METADATA)
    return out.getvalue()


_SIDES = {"start": "left", "middle": "center", "end": "right"}


def _joined(stroke: Stroke, path: Any) -> tuple[Points, Points]:
    """All lines of a stroke as vertices and codes of one Matplotlib path."""
    ends = [np.vstack([line, line[:1]]) if stroke.closed else line for line in stroke.lines]
    codes = np.full(sum(len(line) for line in ends), path.LINETO, dtype=path.code_type)
    start = 0
    for line in ends:
        codes[start] = path.MOVETO
        start += len(line)
        if stroke.closed:
            codes[start - 1] = path.CLOSEPOLY
    return np.concatenate(ends), codes
