"""The next trial: which shift or drop tells the candidates that are left apart best, and what each outcome means."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import floor, isnan, log10

import numpy as np

from logbook.physics.constants import Array
from logbook.physics.experiments import best_experiment
from logbook.quantity_display import show_delta, show_frequency
from logbook.spurs.candidates import Candidate
from logbook.spurs.evidence import (
    INPUT,
    TUNING,
    UNSTATED,
    Drop,
    Move,
    decibels,
    expected_drop,
    expected_move,
    hertz,
)
from logbook.spurs.setting import SIGNAL, Setting

_DROP_DB, _DROP_RESOLUTION_DB = 10.0, 3.0


@dataclass(frozen=True, slots=True)
class Trial:
    """A trial to come: what to do, and for each outcome that can be told from the others whom it speaks for."""

    words: str
    outcomes: tuple[tuple[str, tuple[Candidate, ...]], ...]

    def outcome_of(self, candidate: Candidate) -> str:
        """What a candidate would do in the trial; nothing for one that was struck out before."""
        return next((words for words, found in self.outcomes if candidate in found), "")


@dataclass(frozen=True, slots=True)
class _Option:
    """A trial that could be made: of the input's level, the tuning, or a source; by how much, and what it tells."""

    name: str
    by: float
    said: Array
    resolution: float


def next_trial(
    found: Sequence[Candidate], setting: Setting, moves: Sequence[Move], drops: Sequence[Drop], tolerance_hz: float
) -> Trial | None:
    """The trial that tells the candidates left apart best; None where none does."""
    left = [each for each in found if not each.struck]
    if len(left) < 2:
        return None
    options = _options(left, setting, tolerance_hz)
    made = {move.source for move in moves} | {drop.source for drop in drops if drop.source == INPUT}
    options = [each for each in options if each.name not in made]
    choice = best_experiment([each.said for each in options], [each.resolution for each in options])
    if choice is None:
        return None
    option = options[choice.experiment]
    return Trial(_what_to_do(option, setting), _outcomes(left, option))


def _options(left: Sequence[Candidate], setting: Setting, tolerance_hz: float) -> list[_Option]:
    """What costs least to try comes first, and is taken where two trials tell as much."""
    options = [_Option(INPUT, _DROP_DB, expected_drop(left, setting, INPUT, _DROP_DB), _DROP_RESOLUTION_DB)]
    if setting.follows.any() or any(spot.follows for spot in setting.spots):
        by = tuning_step(setting, tolerance_hz)
        options.append(_Option(TUNING, by, expected_move(left, setting, TUNING, by), UNSTATED * by))
    by, resolution = shift_for(tolerance_hz)
    if not setting.display:
        # Nobody retunes the unit: the spur has to stay in the pass-band, and both readings are of one instrument.
        by = tuning_step(setting, tolerance_hz)
        resolution = UNSTATED * by
    for source in setting.sources:
        if source.movable:
            options.append(_Option(source.name, by, expected_move(left, setting, source.name, by), resolution))
    return options


def shift_for(tolerance_hz: float) -> tuple[float, float]:
    """A shift and what can be told apart with it (Hz): twice the tolerance, since both readings have it."""
    if tolerance_hz <= 0:
        return 1e3, UNSTATED * 1e3
    least = max(4.0 * tolerance_hz, 1e3)
    power = 10.0 ** floor(log10(least))
    by = next(step * power for step in (1.0, 2.0, 5.0, 10.0) if step * power >= least * (1 - 1e-9))
    return by, 2.0 * tolerance_hz


def tuning_step(setting: Setting, tolerance_hz: float) -> float:
    """A step of the tuning that leaves a spur of a few orders in the pass-band: an eighth of it at most (Hz)."""
    width = 2.0 * (min(spot.half_width_hz for spot in setting.spots) - tolerance_hz)
    if width < 8.0:
        return 1e3
    power = 10.0 ** floor(log10(width / 8.0))
    return max(step * power for step in (1.0, 2.0, 5.0) if step * power <= width / 8.0 * (1 + 1e-9))


def _what_to_do(option: _Option, setting: Setting) -> str:
    if option.name == INPUT:
        return f"Put {decibels(option.by)} ahead of the input."
    by = show_frequency(option.by)
    if option.name == TUNING:
        return f"Tune by {by} and listen how far the spur's tone moves."
    again = " and tune to the spur again" if setting.display else " and leave the instrument as it is"
    thing = "the signal that is fed in" if option.name == SIGNAL else option.name
    return f"Shift {thing} up by {by}{again}."


def _outcomes(left: Sequence[Candidate], option: _Option) -> tuple[tuple[str, tuple[Candidate, ...]], ...]:
    """Outcomes with a gap of no more than the resolution between them are one."""
    said = option.said
    groups: list[list[int]] = []
    for index in np.argsort(said, kind="stable").tolist():
        last = said[groups[-1][-1]] if groups else np.nan
        near = (isnan(said[index]) and isnan(last)) or said[index] - last <= option.resolution
        if groups and near:
            groups[-1].append(index)
        else:
            groups.append([index])
    return tuple(
        (_outcome_words([float(said[i]) for i in group], option.name), tuple(left[i] for i in group))
        for group in groups
    )


def _outcome_words(said: list[float], name: str) -> str:
    low, high = min(said), max(said)
    if isnan(low):
        return "is heard at every tuning"
    if not low and not high:
        return "stays"
    if name == INPUT:
        return f"falls by {decibels(low)}"
    words = [hertz(each) if name == TUNING else show_delta(round(each, 3), "Hz") for each in (low, high)]
    return f"moves by {words[0]}" if words[0] == words[1] else f"moves by {words[0]} to {words[1]}"
