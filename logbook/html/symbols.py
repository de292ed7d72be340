"""The trade's symbols for stages, as small inline drawings."""

from __future__ import annotations

from logbook.html.elements import element

_LINE = '<path d="M-200 16h208m32 0h208"/>'
_SOCKET = '<circle cx="24" cy="16" r="5"/>'
_BOX = '<path d="M8 2h32v28H8z"/>'
_ZIGZAG = '<path d="M11 16h4l2-5 4 10 4-10 4 10 2-5h4"/>'
_WAVES = "".join(f'<path d="M14 {y}q5-5 10 0t10 0"/>' for y in (9, 16, 23))

# Drawn on 48 by 32 with the signal's line at height 16. The line comes last in each, and runs far out on both sides:
# what is beyond the stage's own room is cut off, so that it meets the next stage's line without a step.
_SHAPES = {
    "amplifier": '<path d="M10 2l30 14-30 14z"/><path d="M-200 16h210m30 0h208"/>',
    "filter": f'{_BOX}{_WAVES}<path d="M21 12l6-6m-6 20l6-6"/>{_LINE}',
    "pad": f"{_BOX}{_ZIGZAG}{_LINE}",
    "attenuator": f'{_BOX}{_ZIGZAG}<path d="M14 27L34 5m-5 1l5-1v5"/>{_LINE}',
    "mixer": '<circle cx="24" cy="16" r="13"/><path d="M15 7l18 18M33 7L15 25"/><path d="M-200 16h211m26 0h211"/>',
    "detector": '<path d="M14 4l20 12-20 12z"/><path d="M34 4v24"/><path d="M-200 16h214m20 0h214"/>',
    "stage": f"{_BOX}{_LINE}",
    "enters": f'{_SOCKET}<path d="M29 16h219"/>',
    "leaves": f'{_SOCKET}<path d="M-200 16h219"/>',
}


def symbol_html(symbol: str) -> str:
    """A stage's symbol; a plain box where the trade has none. It is looked at only: the stage's name is beside it."""
    shape = _SHAPES.get(symbol, _SHAPES["stage"])
    return element("svg", shape, "lb-symbol", viewBox="0 0 48 32", aria_hidden="true", focusable="false")
