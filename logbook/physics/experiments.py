"""What candidates for a spur predict when something is changed, and which change tells them apart best."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from logbook.physics.constants import Array
from logbook.physics.mixing import Orders


class Choice(NamedTuple):
    """An experiment by its index, the number of different outcomes and the size of the largest group of equal ones."""

    experiment: int
    outcomes: int
    largest: int


def predicted_move(orders: Orders, sources_hz: Array, shifted: int, delta_hz: float) -> Array:
    """n_i delta, in the sense in which the product's frequency moves: Hz, [candidates, sources] to [candidates].

    Exact through zero: |sum n f + n_i delta| - |sum n f|. Source: derivative of f = |sum n_i f_i|.
    """
    signed = orders @ np.asarray(sources_hz, dtype=np.float64)
    move: Array = np.abs(signed + orders[:, shifted] * delta_hz) - np.abs(signed)
    return move


def display_move(
    orders: Orders, sources_hz: Array, follows: Array, target_follows: Array, shifted: int, delta_hz: float
) -> Array:
    """How far a spur moves on the display when a source is shifted by delta and the unit is retuned to it; Hz, [c].

    follows [sources]: Hz an oscillator moves per Hz of tuning (+1 or -1 if it follows, else 0); target_follows [c]: 1
    where the product lands on the signal frequency, 0 on a fixed IF. With s the sign of sum n f, the product moves by
    s (n_i delta + D sum n_j follows_j) for a retuning D and the target by D target_follows: solved for D. nan where
    retuning moves product and target alike, so that the spur stands at no place on the display.
    Source: closed form, derivative of f = |sum n_i f_i|.
    """
    sense = np.sign(orders @ np.asarray(sources_hz, dtype=np.float64))
    rate = np.asarray(target_follows, dtype=np.float64) - sense * (orders @ np.asarray(follows, dtype=np.float64))
    moves = sense * orders[:, shifted] * delta_hz
    with np.errstate(divide="ignore", invalid="ignore"):
        display: Array = np.where(rate == 0.0, np.nan, moves / rate)
    return display


def tuning_move(orders: Orders, sources_hz: Array, follows: Array, target_follows: Array, delta_hz: float) -> Array:
    """How far a spur moves in the pass-band, as its tone does, when the unit is tuned by delta; Hz, no sign, [c].

    |s sum n_j follows_j - target_follows| |delta|, with s the sign of sum n f: a true signal moves by delta, what meets
    the n-th harmonic of the oscillator by n delta. Source: closed form, derivative of f = |sum n_i f_i|.
    """
    sense = np.sign(orders @ np.asarray(sources_hz, dtype=np.float64))
    rate = sense * (orders @ np.asarray(follows, dtype=np.float64)) - np.asarray(target_follows, dtype=np.float64)
    move: Array = np.abs(rate * delta_hz)
    return move


def predicted_drop(orders: Orders, source: int, drop_db: float) -> Array:
    """|n_i| d: dB by which each product falls when one source's level falls by d dB, [c]; a source of order 0: none.

    Holds well below compression. Source: definition of the order.
    """
    drop: Array = np.abs(orders[:, source]) * float(drop_db)
    return drop


def agrees(predicted: Array, seen: float, tolerance: float) -> Array:
    """1.0 where |predicted - seen| <= tolerance, 0.0 where not, nan where nothing is predicted; one unit, [c].

    Source: definition.
    """
    close: Array = np.where(np.isnan(predicted), np.nan, np.abs(predicted - seen) <= tolerance)
    return close


def outcome_groups(predicted: Array, resolution: float) -> list[int]:
    """Sizes of the groups of outcomes that cannot be told apart, one unit, [c]; nan (no outcome) is a group of its own.

    Sorted outcomes belong together while the gap to the next is at most `resolution`. Source: definition.
    """
    known = np.sort(predicted[~np.isnan(predicted)])
    cuts = np.flatnonzero(np.diff(known) > resolution) + 1
    sizes = [len(group) for group in np.split(known, cuts) if len(group)]
    unknown = len(predicted) - len(known)
    return [*sizes, unknown] if unknown else sizes


def best_experiment(predictions: list[Array], resolutions: list[float]) -> Choice | None:
    """The experiment with the most different outcomes, then the smallest largest group, then the first in the list.

    predictions: one array [candidates] per experiment, resolutions: what can be told apart, in its unit. None when no
    experiment tells any two candidates apart. Source: definition.
    """
    choices = []
    for index, (predicted, resolution) in enumerate(zip(predictions, resolutions, strict=True)):
        sizes = outcome_groups(predicted, resolution)
        if len(sizes) > 1:
            choices.append(Choice(index, len(sizes), max(sizes)))
    return min(choices, key=lambda c: (-c.outcomes, c.largest, c.experiment)) if choices else None
