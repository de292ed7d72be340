"""Reflection, mismatch, and the pad that joins two impedances."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

import numpy as np

from logbook.physics.constants import V
from logbook.physics.decibels import amplitude_from_db, db_from_amplitude, db_from_ratio, positive_or_nan


class Pad(NamedTuple):
    """Minimum-loss pad: loss (dB), series resistor on the high side and shunt on the low side (ohm)."""

    loss_db: float
    series_ohm: float
    shunt_ohm: float


def reflection_from_vswr(vswr: V) -> V:
    """rho = (s - 1)/(s + 1), magnitude (1), any shape; nan below 1. Source: definition."""
    return _magnitude((vswr - 1.0) / (vswr + 1.0))


def vswr_from_reflection(reflection: V) -> V:
    """s = (1 + rho)/(1 - rho), any shape; nan for a magnitude below 0 or from 1 up. Source: definition."""
    return (1.0 + _magnitude(reflection)) / positive_or_nan(1.0 - reflection)


def reflection_from_return_loss(return_loss_db: V) -> V:
    """rho = 10^(-RL/20), magnitude (1), any shape; nan for a negative return loss. Source: definition."""
    return _magnitude(amplitude_from_db(-return_loss_db))


def return_loss_from_reflection(reflection: V) -> V:
    """RL = -20 lg rho, dB, any shape; 13.98 dB at VSWR 1.5; nan for rho of 0 (no end to it). Source: definition."""
    return -db_from_amplitude(reflection)


def reflection_from_impedance(impedance_ohm: complex, reference_ohm: float) -> float:
    """rho = |(Z - R)/(Z + R)|, ohm to magnitude (1); nan where Z = -R. Source: definition."""
    total = impedance_ohm + reference_ohm
    return abs((impedance_ohm - reference_ohm) / total) if total else math.nan


def mismatch_loss(reflection: V) -> V:
    """-10 lg(1 - rho^2), dB, any shape: what one reflection keeps back; nan from total reflection up.

    0.512 dB at VSWR 2. Source: definition.
    """
    return -db_from_ratio(1.0 - reflection * reflection)


def mismatch_limits(reflection_a: float, reflection_b: float) -> tuple[float, float]:
    """20 lg(1 - rho1 rho2), 20 lg(1 + rho1 rho2): lowest and highest error in dB of two ports of unknown phase.

    nan where the product reaches 1. Source: common practice; closed form.
    """
    product = reflection_a * reflection_b
    return db_from_amplitude(1.0 - product), db_from_amplitude(1.0 + product)


def mismatch_uncertainty(reflection_a: float, reflection_b: float) -> float:
    """Half the width of `mismatch_limits` over sqrt 2: standard uncertainty in dB, U-shaped distribution.

    The magnitudes are taken as fixed and the phase as unknown. Source: common practice.
    """
    low, high = mismatch_limits(reflection_a, reflection_b)
    return (high - low) / 2.0 / math.sqrt(2.0)


def minimum_loss_pad(high_ohm: float, low_ohm: float) -> Pad:
    """The two-resistor pad that matches both sides with least loss; ohm, in either order; nan if not positive.

    Rs = sqrt(R1 (R1 - R2)), Rp = R2 sqrt(R1/(R1 - R2)), loss = 20 lg(sqrt(r) + sqrt(r - 1)), r = R1/R2.
    Equal impedances need no pad: 0 dB, 0 ohm, no shunt (inf). Source: closed form.
    """
    high, low = max(high_ohm, low_ohm), min(high_ohm, low_ohm)
    if not low > 0.0:
        return Pad(math.nan, math.nan, math.nan)
    if high == low:
        return Pad(0.0, 0.0, math.inf)
    ratio = high / low
    loss_db = 20.0 * math.log10(math.sqrt(ratio) + math.sqrt(ratio - 1.0))
    return Pad(loss_db, math.sqrt(high * (high - low)), low * math.sqrt(high / (high - low)))


def _magnitude(value: V) -> V:
    """The value where a reflection can have it, 0 to 1, nan elsewhere."""
    kept: Any = np.where(np.greater_equal(value, 0.0) & np.less_equal(value, 1.0), value, np.nan)
    result: V = kept[()]
    return result
