"""Charts and bars drawn with Matplotlib, one module for each sort of drawing."""

from logbook.plots.draw import draw
from logbook.plots.key import drawing_key

__all__ = ["draw", "drawing_key"]
