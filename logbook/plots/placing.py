"""Labels put where they cover least of the drawing and none of each other."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

import numpy as np

from logbook.plots.shapes import Anchor, Points, Words
from logbook.plots.style import PHONE_FONT, TEXT, text_width

Box = tuple[float, float, float, float]
Place = tuple[float, float, Anchor]

_ABOUT: tuple[Place, ...] = (
    (0, -11, "middle"),
    (0, 21, "middle"),
    (10, 5, "start"),
    (-10, 5, "end"),
    (9, -10, "start"),
    (-9, -10, "end"),
    (9, 20, "start"),
    (-9, 20, "end"),
    (0, -30, "middle"),
    (0, 40, "middle"),
    (22, -28, "start"),
    (-22, -28, "end"),
    (22, 38, "start"),
    (-22, 38, "end"),
    (0, -50, "middle"),
    (0, 60, "middle"),
)


@dataclass
class Room:
    """What is taken of a panel already: points of what is drawn, and boxes of labels."""

    panel: Box
    ink: Points
    taken: list[Box] = field(default_factory=list)

    def put(self, text: str, places: Iterable[Place]) -> Words:
        """The words at the place that costs least; earlier places win where several cost the same."""
        best = min(places, key=lambda place: self._cost(text, place))
        x, y, anchor = best
        box = _box(text, best)
        left, _, right, _ = self.panel
        # A label longer than the room is moved inwards as far as it goes.
        shift = max(left - box[0], 0.0) + min(right - box[2], 0.0)
        self.taken.append((box[0] + shift, box[1], box[2] + shift, box[3]))
        return Words(round(x + shift, 1), round(y, 1), text, anchor, look=TEXT, halo=True)

    def put_beside(self, text: str, x: float, y: float) -> Words:
        """The words beside a point."""
        return self.put(text, ((x + dx, y + dy, anchor) for dx, dy, anchor in _ABOUT))

    def _cost(self, text: str, place: Place) -> float:
        box = _box(text, place)
        left, top, right, bottom = self.panel
        outside = (
            max(left - box[0], 0) + max(box[2] - right, 0) + 4 * max(top - box[1], 0) + 4 * max(box[3] - bottom, 0)
        )
        overlap = sum(_overlap(box, other) for other in self.taken)
        x, y = self.ink[:, 0], self.ink[:, 1]
        covered = np.count_nonzero((x > box[0] - 2) & (x < box[2] + 2) & (y > box[1] - 1) & (y < box[3] + 1))
        return outside * 5 + overlap + covered * 3.0


def _box(text: str, place: Place) -> Box:
    x, y, anchor = place
    width = text_width(text)
    left = {"start": x, "middle": x - width / 2, "end": x - width}[anchor]
    return left, y - 0.8 * PHONE_FONT, left + width, y + 0.25 * PHONE_FONT


def _overlap(one: Box, other: Box) -> float:
    width = min(one[2], other[2]) - max(one[0], other[0])
    height = min(one[3], other[3]) - max(one[1], other[1])
    return width * height if width > 0 and height > 0 else 0.0


def inked(lines: Iterable[Points], apart: float = 5.0) -> Points:
    """Points along lines, near enough to each other to tell whether a label covers the line."""
    parts = [np.empty((0, 2))]
    for line in lines:
        if len(line) < 2:
            parts.append(line)
            continue
        along = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(line, axis=0).T))])
        wanted = np.linspace(0.0, along[-1], min(int(along[-1] / apart) + 2, 20_000))
        parts.append(np.column_stack([np.interp(wanted, along, line[:, 0]), np.interp(wanted, along, line[:, 1])]))
    return np.concatenate(parts)
