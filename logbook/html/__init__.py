"""Pieces as HTML: with `terminal`, the only place that writes what a reader sees.

Classes all begin with `lb-`; an id stands only where a piece names one, as it is named.
"""

from logbook.html.render import render

__all__ = ["render"]
