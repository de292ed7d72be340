"""How roles look: colour, dash and marker all differ, so that no one of them has to be seen."""

from __future__ import annotations

from typing import Literal

from logbook.pieces import Role
from logbook.plots.shapes import Look

# Part of every cached drawing's key: raise it when anything here or in the modules beside it draws differently.
DRAWING = "2"

WIDTH = 600.0
FONT = 13.0
# The stylesheet sets text larger on a phone, where the drawing is small; the layout leaves room for it.
PHONE_FONT = 18.0

FRAME = Look(opacity=0.55)
GRID = Look(opacity=0.14)
TEXT = Look()
QUIET = Look(opacity=0.8)
LEADER = Look(width=0.8, opacity=0.6)

Marker = Literal["disc", "square", "triangle", "diamond", "box"]

_LINES: dict[Role, Look] = {
    "signal": Look("signal", 2.2),
    "noise": Look("noise", 2.0, (2.0, 2.5)),
    "ceiling": Look("ceiling", 1.8, (9.0, 4.0)),
    "now": Look("now", 1.8),
    "before": Look("before", 1.6, (6.0, 3.0)),
    "other": Look("other", 1.6, (1.5, 3.0)),
    "difference": Look("difference", 1.6),
    "fit": Look("fit", 1.4, (12.0, 3.0, 2.0, 3.0)),
    "limit": Look("limit", 1.6),
    "share": Look("share", 1.6),
}

_MARKERS: dict[Role, Marker] = {
    "noise": "square",
    "ceiling": "triangle",
    "before": "diamond",
    "other": "box",
}

# What is compared stands behind what is looked at.
_BEHIND: tuple[Role, ...] = ("limit", "before", "other")


def role_look(role: Role) -> Look:
    """The line of a role."""
    return _LINES[role]


def role_marker(role: Role) -> Marker:
    """The marker of a role."""
    return _MARKERS.get(role, "disc")


def depth(role: Role) -> int:
    """Where a role stands in the order of drawing."""
    return _BEHIND.index(role) - len(_BEHIND) if role in _BEHIND else 0


def text_width(words: str, font: float = PHONE_FONT) -> float:
    """About how wide words are, on the wide side: 0.56 of the font's size a character of a common sans serif."""
    return 0.56 * font * len(words)


def shortened(words: str, most: int) -> str:
    """Words cut to a length, with an ellipsis where something is missing; the table has them whole."""
    return words if len(words) <= most else words[: most - 1].rstrip() + "\u2026"
