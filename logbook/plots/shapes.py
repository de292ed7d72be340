"""A drawing as shapes on a sheet: x to the right, y downwards, in the units of the SVG's viewBox."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import NDArray

Points = NDArray[np.float64]
Anchor = Literal["start", "middle", "end"]
Cap = Literal["butt", "round", "projecting"]


@dataclass(frozen=True, slots=True)
class Look:
    """How a shape is drawn: `colour` names one of the stylesheet's colours, or is empty for the text's own."""

    colour: str = ""
    width: float = 1.0
    dash: tuple[float, ...] = ()
    opacity: float = 1.0
    fill: Literal["none", "paper", "colour"] = "none"
    cap: Cap = "butt"


@dataclass(frozen=True, slots=True)
class Stroke:
    """Lines in one look: each is a course of points, n by 2; `closed` joins its ends."""

    lines: tuple[Points, ...]
    look: Look
    closed: bool = False


@dataclass(frozen=True, slots=True)
class Words:
    """Text at a point of its baseline; `halo` keeps it legible over lines."""

    x: float
    y: float
    text: str
    anchor: Anchor = "start"
    angle: float = 0.0
    look: Look = field(default_factory=Look)
    halo: bool = False


Shape = Stroke | Words


@dataclass(frozen=True, slots=True)
class Sheet:
    """All shapes of a drawing, in the order they are drawn."""

    width: float
    height: float
    shapes: tuple[Shape, ...]


def line(*points: tuple[float, float]) -> Points:
    """A course through these points."""
    return np.array(points, dtype=float)


def strokes(lines: Iterable[Points], look: Look, closed: bool = False) -> list[Shape]:
    """Lines as one shape; nothing where there is no line."""
    kept = tuple(each for each in lines if len(each))
    return [Stroke(kept, look, closed)] if kept else []
