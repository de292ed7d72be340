"""The trade's symbols for stages, as small inline drawings."""

from __future__ import annotations

from logbook.html.elements import element

_BOX = '<path d="M8 2h32v28H8z"/>'
_ZIGZAG = '<path d="M11 16h4l2-5 4 10 4-10 4 10 2-5h4"/>'
_WAVES = "".join(f'<path d="M14 {y}q5-5 10 0t10 0"/>' for y in (9, 16, 23))

# Drawn on 48 by 32 with the signal's line at height 16; the line runs on to both sides of the drawing.
_SHAPES = {
    "amplifier": '<path d="M10 2l30 14-30 14z"/><path d="M0 16h10m30 0h8"/>',
    "filter": f'{_BOX}{_WAVES}<path d="M21 12l6-6m-6 20l6-6"/><path d="M0 16h8m32 0h8"/>',
    "pad": f'{_BOX}{_ZIGZAG}<path d="M0 16h8m32 0h8"/>',
    "attenuator": f'{_BOX}{_ZIGZAG}<path d="M14 27L34 5m-5 1l5-1v5"/><path d="M0 16h8m32 0h8"/>',
    "mixer": '<circle cx="24" cy="16" r="13"/><path d="M15 7l18 18M33 7L15 25"/><path d="M0 16h11m26 0h11"/>',
    "detector": '<path d="M14 4l20 12-20 12z"/><path d="M34 4v24"/><path d="M0 16h14m20 0h14"/>',
    "stage": f'{_BOX}<path d="M0 16h8m32 0h8"/>',
}


def symbol_html(symbol: str) -> str:
    """A stage's symbol; a plain box where the trade has none. It is looked at only: the stage's name is beside it."""
    shape = _SHAPES.get(symbol, _SHAPES["stage"])
    return element("svg", shape, "lb-symbol", viewBox="0 0 48 32", aria_hidden="true", focusable="false")
