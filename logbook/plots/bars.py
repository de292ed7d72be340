"""Bars across, for shares of a whole."""

from __future__ import annotations

from dataclasses import replace
from math import ceil, isfinite

import numpy as np

from logbook.pieces import Bars
from logbook.plots.scales import Scale
from logbook.plots.shapes import Look, Shape, Sheet, Words, line, strokes
from logbook.plots.style import FRAME, GRID, QUIET, TEXT, WIDTH, shortened, text_width

# A bar's row is as high as its words are on a phone, so that the shares of two groups do not run into each other.
_BAR = 18.0
_ROOM = 3.0
_BASELINE = 13.5
_BETWEEN = 8.0
_LONGEST = 22
_VALUE_ROOM = 74.0
_FOOT = 24.0

# The second group is open with slanting lines in it, the third open with none: told apart without colour.
_LOOKS = (Look("now", fill="colour"), Look("noise", fill="paper"), Look("ceiling", fill="paper"))
_SLANTS = (0.0, 5.0, 0.0)


def bars_sheet(bars: Bars) -> Sheet:
    """A row for each label, in it a bar for each group, its share written at its end."""
    if not bars.labels or not bars.groups:
        return Sheet(WIDTH, 60, (Words(WIDTH / 2, 34.0, "nothing to draw", "middle", look=QUIET),))
    names = [shortened(label, _LONGEST) for label in bars.labels]
    left = round(max(map(text_width, names)) + 12.0)
    scale = Scale(0.0, _whole(bars), left, WIDTH - _VALUE_ROOM)
    shapes, top = _legend(bars.groups) if len(bars.groups) > 1 else ([], 6.0)
    height = max(len(bars.groups) * _BAR + _BETWEEN, 24.0)
    bottom = top + height * len(names)
    shapes += _grid(scale, top, bottom)
    for number, name in enumerate(names):
        middle = top + height * (number + 0.5)
        shapes.append(Words(left - 8.0, middle + 4.5, name, "end", look=TEXT))
        first = middle - len(bars.groups) * _BAR / 2
        for group, values in enumerate(bars.values[: len(bars.groups)]):
            value = values[number] if number < len(values) else float("nan")
            shapes += _bar(scale, value, first + group * _BAR, group)
    return Sheet(WIDTH, round(bottom + _FOOT), tuple(shapes))


def _whole(bars: Bars) -> float:
    """The end of the axis: quarters, so that a small share is not lost in an empty sheet."""
    values = [v for group in bars.values for v in group if isfinite(v)]
    return max(1, ceil(round(4 * max(values, default=1.0), 6))) / 4


def _grid(scale: Scale, top: float, bottom: float) -> list[Shape]:
    step = 0.25 if scale.high > 0.5 else 0.1 if scale.high > 0.25 else 0.05
    shares = [step * i for i in range(int(scale.high / step + 1e-6) + 1)]
    places = [round(scale.at(share), 1) for share in shares]
    shapes = strokes([line((x, top), (x, bottom)) for x in places[1:]], GRID)
    shapes += strokes([line((places[0], top), (places[0], bottom))], FRAME)
    texts = zip(places, shares, strict=True)
    return shapes + [Words(x, bottom + 16.0, f"{100 * share:.0f} %", "middle", look=QUIET) for x, share in texts]


def _bar(scale: Scale, value: float, top: float, group: int) -> list[Shape]:
    if not isfinite(value):
        return [Words(scale.start + 6.0, top + _BASELINE, "not known", look=QUIET)]
    end = round(scale.at(max(value, 0.0)), 1)
    shapes = _block(scale.start, end, top + _ROOM, top + _BAR - _ROOM, group)
    percent = 100 * value
    words = f"{percent:.1f} %" if abs(percent) < 10 else f"{percent:.0f} %"
    return [*shapes, Words(end + 6.0, top + _BASELINE, words, look=TEXT)]


def _block(left: float, right: float, top: float, bottom: float, group: int) -> list[Shape]:
    look, apart = _LOOKS[group % len(_LOOKS)], _SLANTS[group % len(_SLANTS)]
    shapes = strokes([line((left, top), (right, top), (right, bottom), (left, bottom))], look, closed=True)
    if not apart:
        return shapes
    height = bottom - top
    slants = []
    for foot in np.arange(left - height + apart, right, apart):
        start, stop = max(foot, left), min(foot + height, right)
        if stop > start:
            slants.append(np.round(line((start, bottom - (start - foot)), (stop, bottom - (stop - foot))), 1))
    return shapes + strokes(slants, replace(look, fill="none"))


def _legend(groups: tuple[str, ...]) -> tuple[list[Shape], float]:
    shapes: list[Shape] = []
    x = 8.0
    for number, group in enumerate(groups):
        shapes += _block(x, x + 26.0, 6.0, 17.0, number)
        shapes.append(Words(x + 33.0, 16.0, group, look=TEXT))
        x += 33.0 + text_width(group) + 20.0
    return shapes, 32.0
