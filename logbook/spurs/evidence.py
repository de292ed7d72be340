"""What was tried on a spur, and what speaks against each candidate."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import isnan

import numpy as np

from logbook.physics.constants import Array
from logbook.physics.experiments import (
    agrees,
    display_move,
    predicted_drop,
    predicted_move,
    tuning_move,
)
from logbook.quantity_display import show_delta, show_frequency
from logbook.spurs.candidates import Candidate, heard_row, rows_of
from logbook.spurs.setting import Setting

TUNING, INPUT = "tuning", "input"

# What is told apart where no doubt is stated: a quarter of the step, so that whole orders are.
UNSTATED = 0.25


@dataclass(frozen=True, slots=True)
class Move:
    """A source was shifted by `by_hz` and the spur was seen to move by `seen_hz`. None: no doubt stated."""

    source: str
    by_hz: float
    seen_hz: float
    tolerance_hz: float | None = None

    @property
    def within_hz(self) -> float:
        """How far a prediction may be off."""
        return UNSTATED * abs(self.by_hz) if self.tolerance_hz is None else self.tolerance_hz


@dataclass(frozen=True, slots=True)
class Drop:
    """A source's level, or the whole input's, was lowered by `by_db` and the spur was seen to fall by `seen_db`."""

    source: str
    by_db: float
    seen_db: float
    tolerance_db: float | None = None

    @property
    def within_db(self) -> float:
        """How far a prediction may be off."""
        return UNSTATED * abs(self.by_db) if self.tolerance_db is None else self.tolerance_db


def expected_move(found: Sequence[Candidate], setting: Setting, source: str, by_hz: float) -> Array:
    """How far each candidate would move when a source, or the tuning, is shifted; Hz, [candidates]."""
    hz = setting.frequencies_hz
    rows = np.array([heard_row(each, setting) for each in found], dtype=np.int64)
    last = setting.spots[-1].follows if setting.display else 0.0
    if source == TUNING:
        return tuning_move(rows, hz, setting.follows, np.full(len(rows), last), by_hz)
    index = _index(setting, source)
    if setting.display:
        return display_move(rows, hz, setting.follows, np.full(len(rows), last), index, by_hz)
    return predicted_move(rows, hz, index, by_hz)


def expected_drop(found: Sequence[Candidate], setting: Setting, source: str, by_db: float) -> Array:
    """How far each candidate would fall when a source, or all that comes in by the input, is lowered; dB, [c]."""
    rows = rows_of(found)
    entering = [i for i, each in enumerate(setting.sources) if each.enters]
    lowered = entering if source == INPUT else [_index(setting, source)]
    total: Array = np.sum([predicted_drop(rows, index, by_db) for index in lowered], axis=0)
    return total + np.zeros(len(rows))


def _index(setting: Setting, source: str) -> int:
    return next(i for i, each in enumerate(setting.sources) if each.name == source)


def judged(
    found: Sequence[Candidate], setting: Setting, moves: Sequence[Move], drops: Sequence[Drop]
) -> list[Candidate]:
    """The candidates with what strikes them out and how much agrees with them, ranked anew."""
    if not found:
        return []
    against: list[list[str]] = [[] for _ in found]
    agreed = [0] * len(found)
    for move in moves:
        said = expected_move(found, setting, move.source, move.by_hz)
        seen = abs(move.seen_hz) if move.source == TUNING else move.seen_hz
        fits = agrees(said, seen, move.within_hz)
        _note(against, agreed, fits, [_against_move(move, each) for each in said.tolist()], seen, move.within_hz)
    for drop in drops:
        said = expected_drop(found, setting, drop.source, drop.by_db)
        fits = agrees(said, drop.seen_db, drop.within_db)
        _note(against, agreed, fits, [_against_drop(drop, each) for each in said.tolist()], drop.seen_db, 0.0)
    made = [replace(c, struck=tuple(a), agreed=n) for c, a, n in zip(found, against, agreed, strict=True)]
    return sorted(made, key=lambda each: each.rank)


def _note(
    against: list[list[str]], agreed: list[int], fits: Array, words: list[str], seen: float, within: float
) -> None:
    """A candidate that stands at no place on the display contradicts a move that was seen, and nothing else."""
    for index, fit in enumerate(fits.tolist()):
        if isnan(fit):
            fit = 0.0 if abs(seen) > within else float("nan")
        if fit == 0.0:
            against[index].append(words[index])
        elif fit == 1.0:
            agreed[index] += 1


def _against_move(move: Move, said: float) -> str:
    if move.source == TUNING:
        by, seen = show_frequency(abs(move.by_hz)), show_frequency(abs(move.seen_hz))
        would = f"move its tone by {hertz(said)}" if said else "leave its tone where it is"
        return f"tuning by {by} would {would}; it moved by {seen}"
    by, seen = show_delta(move.by_hz, "Hz"), show_delta(move.seen_hz, "Hz")
    if isnan(said):
        return f"it would be heard at every tuning, and moved by {seen}"
    would = f"move it by {show_delta(round(said, 3), 'Hz')}" if said else "not move it"
    moved = f"moved by {seen}" if abs(move.seen_hz) > move.within_hz else "stayed"
    return f"{move.source} shifted by {by} would {would}; it {moved}"


def _against_drop(drop: Drop, said: float) -> str:
    would = f"fall by {decibels(said)}" if said else "stay as it is"
    fell = f"rose by {decibels(-drop.seen_db)}" if drop.seen_db < 0 else f"fell by {decibels(drop.seen_db)}"
    seen = fell if abs(drop.seen_db) > drop.within_db else "stayed"
    thing = "the input" if drop.source == INPUT else drop.source
    return f"with {thing} {decibels(drop.by_db)} lower it would {would}; it {seen}"


def decibels(db: float) -> str:
    """A drop as it is set on an attenuator."""
    return f"{db:.4g} dB"


def hertz(hz: float) -> str:
    """A frequency without the dust of its sums."""
    return show_frequency(round(hz, 3))
