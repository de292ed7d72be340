"""Names along a category axis: side by side, on two lines, or aslant; of very many, some."""

from __future__ import annotations

from math import ceil, cos, radians, sin

from logbook.plots.scales import Scale
from logbook.plots.shapes import Shape, Words
from logbook.plots.style import FONT, PHONE_FONT, TEXT, shortened, text_width

_LINE = 16.0
_SLOPE = 35.0
_LONGEST = 20
_APART = 21.0


def category_names(names: tuple[str, ...], scale: Scale, top: float) -> tuple[list[Shape], float]:
    """The names under the axis, and how much height they take."""
    room = (scale.stop - scale.start) / max(len(names), 1) - 6.0
    wrapped = [_wrapped(name, room) for name in names]
    if all(wrapped):
        shapes: list[Shape] = [
            Words(round(scale.at(i), 1), top + _LINE * (row + 1), text, "middle", look=TEXT)
            for i, lines in enumerate(wrapped)
            for row, text in enumerate(lines)
        ]
        return shapes, _LINE * max(map(len, wrapped), default=0) + 6.0
    return _aslant(names, scale, top)


def _aslant(names: tuple[str, ...], scale: Scale, top: float) -> tuple[list[Shape], float]:
    shown = {i: shortened(names[i], _LONGEST) for i in shown_categories(names, scale)}
    down = sin(radians(_SLOPE))
    # Those at the left must not run off the sheet.
    longest = {i: (scale.at(i) - 2.0) / cos(radians(_SLOPE)) / (0.56 * PHONE_FONT) for i in shown}
    fitting = {i: shortened(text, max(4, int(longest[i]))) for i, text in shown.items()}
    shapes: list[Shape] = [
        Words(round(scale.at(i) + 4.0, 1), top + 14.0, text, "end", _SLOPE, TEXT) for i, text in sorted(fitting.items())
    ]
    return shapes, 14.0 + down * max(text_width(text, FONT + 1.0) for text in fitting.values())


def shown_categories(names: tuple[str, ...], scale: Scale) -> list[int]:
    """Which positions bear a name: all where there is room; else every so manieth, the last one always."""
    every = max(1, ceil(_APART * len(names) / (scale.stop - scale.start)))
    return sorted(range(len(names) - 1, -1, -every))


def _wrapped(name: str, room: float) -> tuple[str, ...]:
    """The name on one line or two; empty where it does not fit."""
    if text_width(name) <= room:
        return (name,)
    cuts = [i + 1 for i, letter in enumerate(name[:-1]) if letter in " -_/"]
    for cut in sorted(cuts, key=lambda at: abs(at - len(name) / 2)):
        parts = (name[:cut].rstrip(), name[cut:])
        if all(text_width(part) <= room for part in parts):
            return parts
    return ()
