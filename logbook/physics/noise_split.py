"""Output noise at several settings of a gain control, split into what comes from ahead of it and from after it."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from logbook.physics.constants import DB_PER_NEPER_POWER, Array
from logbook.physics.decibels import db_from_ratio, dbm_from_watt, positive_or_nan, relative_from_u_db, watt_from_dbm

_ROUNDS = 20


class NoiseSplit(NamedTuple):
    """N = a g + b: a (W, from ahead, at 0 dB setting) and b (W, from after), with their covariance (W^2).

    chi_square is the sum of squared residuals over their stated uncertainties, nan where none were stated; freedom is
    points minus two.
    """

    ahead_w: float
    after_w: float
    u_ahead_w: float
    u_after_w: float
    covariance_w2: float
    chi_square: float
    freedom: int


def split_noise(setting_db: Array, noise_dbm: Array, u_db: Array | None = None) -> NoiseSplit:
    """Least squares of N = a g + b in linear power, weighted by relative uncertainty: settings dB, noise dBm, [n].

    u_db [n]: standard uncertainties of the readings in dB. None: all alike, judged by the scatter, which takes three
    points; nan uncertainties with two. nan all through for fewer than two different settings and for an uncertainty of
    zero, which would leave the others no weight.
    Source: JCGM 100:2008 H.3 for the line; weights from the fitted values, repeated until they stand.
    """
    gain = np.asarray(np.power(10.0, np.asarray(setting_db, dtype=np.float64) / 10.0))
    noise = np.asarray(watt_from_dbm(np.asarray(noise_dbm, dtype=np.float64)))
    freedom = len(gain) - 2
    if freedom < 0 or not np.ptp(gain) > 0.0:
        nan = math.nan
        return NoiseSplit(nan, nan, nan, nan, nan, nan, freedom)
    relative = (
        np.ones_like(noise) if u_db is None else relative_from_u_db(positive_or_nan(np.asarray(u_db, dtype=np.float64)))
    )
    expected = noise
    for _ in range(_ROUNDS):
        found, inverse = _weighted(gain, noise, relative * expected)
        line = found[0] * gain + found[1]
        # A line that dips below zero has no relative error to go by; the readings do then.
        before, expected = expected, np.where(line > 0.0, line, noise)
        if np.allclose(before, expected, rtol=1e-9, atol=0.0):
            break
    chi_square = float(np.sum(((noise - line) / (relative * expected)) ** 2))
    scale = 1.0 if u_db is not None else (chi_square / freedom if freedom else math.nan)
    a, b = float(found[0]), float(found[1])
    u_a, u_b = (math.sqrt(float(inverse[i, i]) * scale) for i in (0, 1))
    return NoiseSplit(a, b, u_a, u_b, float(inverse[0, 1]) * scale, math.nan if u_db is None else chi_square, freedom)


def _weighted(gain: Array, noise: Array, sigma: Array) -> tuple[Array, Array]:
    """Solution [2] and inverse normal matrix [2, 2] of the weighted line, written out so that no power underflows."""
    unit = float(noise.max())
    rows = np.stack([gain, np.ones_like(gain)], axis=-1) * (unit / sigma)[:, np.newaxis]
    orthogonal, upper = np.linalg.qr(rows)
    root = np.linalg.inv(upper)
    found: Array = root @ (orthogonal.T @ (noise / sigma)) * unit
    inverse: Array = root @ root.T * unit**2
    return found, inverse


def told_apart(split: NoiseSplit, k: float = 2.0) -> bool:
    """Whether both parts stand above k times their own doubt, so that the split means something; False for nan.

    Source: common practice, a part within its expanded uncertainty of zero is not seen.
    """
    return split.ahead_w > k * split.u_ahead_w and split.after_w > k * split.u_after_w


def noise_ahead_dbm(split: NoiseSplit, setting_db: float = 0.0) -> float:
    """a g in dBm at a setting (dB): what comes from ahead of the control, at the output; nan for a <= 0.

    Source: definition.
    """
    return dbm_from_watt(split.ahead_w) + setting_db


def noise_after_dbm(split: NoiseSplit) -> float:
    """b in dBm: what comes from after the control, at the output; nan for b <= 0. Source: definition."""
    return dbm_from_watt(split.after_w)


def part_uncertainties_db(split: NoiseSplit) -> tuple[float, float]:
    """Standard uncertainties of `noise_ahead_dbm` and `noise_after_dbm` in dB, first order; nan for parts <= 0.

    Source: JCGM 100:2008 5.1.
    """
    ahead, after = (_relative(part, u) for part, u in _parts(split))
    return DB_PER_NEPER_POWER * ahead, DB_PER_NEPER_POWER * after


def equal_setting(split: NoiseSplit) -> tuple[float, float]:
    """10 lg(b/a): setting (dB) at which both parts are equal, and its standard uncertainty (dB); nan for parts <= 0.

    Above it the noise from ahead is the greater. Source: JCGM 100:2008 5.2, with the covariance of a and b.
    """
    (a, u_a), (b, u_b) = _parts(split)
    if not (a > 0.0 and b > 0.0):
        return math.nan, math.nan
    variance = (u_a / a) ** 2 + (u_b / b) ** 2 - 2.0 * (split.covariance_w2 / a / b)
    return db_from_ratio(b / a), DB_PER_NEPER_POWER * math.sqrt(max(variance, 0.0))


def _parts(split: NoiseSplit) -> tuple[tuple[float, float], tuple[float, float]]:
    return (split.ahead_w, split.u_ahead_w), (split.after_w, split.u_after_w)


def _relative(part: float, u: float) -> float:
    return u / part if part > 0.0 else math.nan
