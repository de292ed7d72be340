"""A sweep as read and what is asked of it; what was found in it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from logbook.model import Result
from logbook.physics.constants import Array
from logbook.problems import Place


@dataclass(frozen=True, slots=True)
class Request:
    """One thing that `report` asks for: its word, and the numbers that go with it in base units."""

    word: str
    numbers: tuple[float, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class Found:
    """One number found in a sweep: base unit, standard uncertainty where stated; nan with the reason in words.

    `marks` are points (x, y, text) worth showing in the picture; `width_hz` is the band of a noise power.
    """

    quantity: str
    value: float
    unit: str
    u: float | None = None
    at_hz: float | None = None
    words: str = ""
    better: str = ""
    marks: tuple[tuple[float, float, str], ...] = ()
    width_hz: float = 0.0


@dataclass(frozen=True, slots=True, eq=False)
class Sweep:
    """A curve, x in Hz and y in `unit`, both (N,), on equal terms: less its reference, at the unit, power average.

    `noise_bandwidth_hz` is that of each point of a noise sweep. `lines` are the frequencies under which the lines of a
    spectrum are kept, by key.
    """

    name: str
    of: str
    x: Array
    y: Array
    unit: str
    reference: str
    marks: tuple[tuple[float, float, str], ...]
    notes: tuple[str, ...]
    results: tuple[Result, ...]
    lines: Mapping[str, float]
