"""What was tried on a spur, what speaks against each candidate, and the next trial that tells the rest apart best."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import isnan

import numpy as np

from logbook.physics.constants import Array
from logbook.physics.experiments import (
    agrees,
    best_experiment,
    display_move,
    predicted_drop,
    predicted_move,
    tuning_move,
)
from logbook.quantity_display import show_delta, show_frequency
from logbook.spurs.candidates import Candidate, heard_row, rows_of
from logbook.spurs.setting import SIGNAL, Setting

TUNING, INPUT = "tuning", "input"

# What is told apart where no doubt is stated: a quarter of the step, so that whole orders are.
_UNSTATED = 0.25
_DROP_DB, _DROP_RESOLUTION_DB = 10.0, 3.0


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
        return _UNSTATED * abs(self.by_hz) if self.tolerance_hz is None else self.tolerance_hz


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
        return _UNSTATED * abs(self.by_db) if self.tolerance_db is None else self.tolerance_db


@dataclass(frozen=True, slots=True)
class Trial:
    """A trial to come: what to do, and for each outcome that can be told from the others whom it speaks for."""

    words: str
    outcomes: tuple[tuple[str, tuple[Candidate, ...]], ...]

    def outcome_of(self, candidate: Candidate) -> str:
        """What a candidate would do in the trial; nothing for one that was struck out before."""
        return next((words for words, found in self.outcomes if candidate in found), "")


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
        return f"tuning by {by} would move its tone by {_hz(said)}, not by {seen}"
    by, seen = show_delta(move.by_hz, "Hz"), show_delta(move.seen_hz, "Hz")
    if isnan(said):
        return f"it would be heard at every tuning, and moved by {seen}"
    would = f"move it by {show_delta(round(said, 3), 'Hz')}" if said else "not move it"
    moved = f"moved by {seen}" if abs(move.seen_hz) > move.within_hz else "stayed"
    return f"{move.source} shifted by {by} would {would}; it {moved}"


def _against_drop(drop: Drop, said: float) -> str:
    would = f"fall by {_db(said)}" if said else "stay as it is"
    fell = f"rose by {_db(-drop.seen_db)}" if drop.seen_db < 0 else f"fell by {_db(drop.seen_db)}"
    seen = fell if abs(drop.seen_db) > drop.within_db else "stayed"
    thing = "the input" if drop.source == INPUT else drop.source
    return f"with {thing} {_db(drop.by_db)} lower it would {would}; it {seen}"


def _db(db: float) -> str:
    return f"{db:.4g} dB"


def _hz(hz: float) -> str:
    return show_frequency(round(hz, 3))


def next_trial(
    found: Sequence[Candidate], setting: Setting, moves: Sequence[Move], drops: Sequence[Drop], tolerance_hz: float
) -> Trial | None:
    """The trial that tells the candidates left apart best; None where none does."""
    left = [each for each in found if not each.struck]
    if len(left) < 2:
        return None
    by, resolution = shift_for(tolerance_hz)
    # What costs least to try comes first, and is taken where two trials tell as much.
    trials: list[tuple[str, str, Array, float]] = []
    if INPUT not in {drop.source for drop in drops}:
        trials.append(("drop", INPUT, expected_drop(left, setting, INPUT, _DROP_DB), _DROP_RESOLUTION_DB))
    done = {move.source for move in moves}
    for name in _movable(setting, done):
        trials.append(("move", name, expected_move(left, setting, name, by), resolution))
    choice = best_experiment([each[2] for each in trials], [each[3] for each in trials])
    if choice is None:
        return None
    what, name, said, apart = trials[choice.experiment]
    return Trial(_what_to_do(what, name, by, setting), _outcomes(left, said, apart, what, name))


def shift_for(tolerance_hz: float) -> tuple[float, float]:
    """A shift and what can be told apart with it (Hz): twice the tolerance, since both readings have it."""
    if tolerance_hz <= 0:
        return 1e3, _UNSTATED * 1e3
    least = max(4.0 * tolerance_hz, 1e3)
    power = 10.0 ** np.floor(np.log10(least))
    by = float(next(step * power for step in (1.0, 2.0, 5.0, 10.0) if step * power >= least * (1 - 1e-9)))
    return by, 2.0 * tolerance_hz


def _movable(setting: Setting, done: set[str]) -> list[str]:
    """What can be shifted and has not been: the tuning, then each source that anybody can move."""
    tuned = [TUNING] if setting.follows.any() or any(spot.follows for spot in setting.spots) else []
    names = [*tuned, *(each.name for each in setting.sources if each.movable)]
    return [name for name in names if name not in done]


def _what_to_do(what: str, name: str, by_hz: float, setting: Setting) -> str:
    if what == "drop":
        return f"Put {_db(_DROP_DB)} ahead of the input."
    by = show_frequency(by_hz)
    if name == TUNING:
        return f"Tune by {by} and watch how far the spur moves in the pass-band."
    again = " and tune to the spur again" if setting.display else " and follow the spur with the instrument"
    thing = "the signal that is fed in" if name == SIGNAL else name
    return f"Shift {thing} up by {by}{again}."


def _outcomes(
    left: Sequence[Candidate], said: Array, apart: float, what: str, name: str
) -> tuple[tuple[str, tuple[Candidate, ...]], ...]:
    order = np.argsort(said, kind="stable")
    groups: list[list[int]] = []
    for index in order.tolist():
        last = said[groups[-1][-1]] if groups else np.nan
        near = (isnan(said[index]) and isnan(last)) or said[index] - last <= apart
        if groups and near:
            groups[-1].append(index)
        else:
            groups.append([index])
    return tuple(
        (_outcome_words([float(said[i]) for i in group], what, name), tuple(left[i] for i in group)) for group in groups
    )


def _outcome_words(said: list[float], what: str, name: str) -> str:
    low, high = min(said), max(said)
    if isnan(low):
        return "is heard at every tuning"
    if what == "drop":
        return f"falls by {_db(low)}" if high else "stays"
    if name == TUNING:
        return f"moves by {_hz(low)}" if low == high else f"moves by {_hz(low)} to {_hz(high)}"
    if not low and not high:
        return "stays"
    words = [show_delta(round(each, 3), "Hz") for each in (low, high)]
    return f"moves by {words[0]}" if words[0] == words[1] else f"moves by {words[0]} to {words[1]}"
