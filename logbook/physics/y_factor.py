"""Noise figure from a hot and a cold source, and what the instrument behind adds to it."""

from __future__ import annotations

import math
from typing import NamedTuple

from logbook.physics.constants import DB_PER_NEPER_POWER, T0, V
from logbook.physics.decibels import db_from_ratio, ratio_from_db


class YFactor(NamedTuple):
    """Noise figure (dB), noise temperature (K); its change per dB of ENR and of Y (1) and per K of cold (dB/K)."""

    nf_db: float
    temperature_k: float
    per_enr: float
    per_y: float
    per_cold: float


class FirstStage(NamedTuple):
    """Noise figure (dB) freed of the second stage; its change per dB of the total, second figure and gain (1)."""

    nf_db: float
    per_total: float
    per_second: float
    per_gain: float


def hot_temperature(enr_db: V) -> V:
    """Th = T0 (1 + ENR): dB to K, any shape; 1207 K for 5 dB. Source: definition of ENR, cold at T0."""
    return T0 * (1.0 + ratio_from_db(enr_db))


def noise_figure(enr_db: float, y_db: float, cold_k: float = T0) -> YFactor:
    """Te = (Th - Y Tc)/(Y - 1), F = 1 + Te/T0, with Y the hot over the cold reading (dB) and Tc in K.

    nan for Y of 0 dB and below, and where F would not be positive. Source: closed form; IEEE definition.
    """
    y, enr, cold = ratio_from_db(y_db), ratio_from_db(enr_db), cold_k / T0
    if not y > 1.0:
        return YFactor(*([math.nan] * 5))
    excess = (1.0 + enr - y * cold) / (y - 1.0)
    factor = 1.0 + excess
    if not factor > 0.0:
        return YFactor(*([math.nan] * 5))
    per_y = y * (cold - 1.0 - enr) / (y - 1.0) ** 2 / factor
    per_cold = -DB_PER_NEPER_POWER * y / (y - 1.0) / T0 / factor
    return YFactor(db_from_ratio(factor), T0 * excess, enr / (y - 1.0) / factor, per_y, per_cold)


def without_second_stage(total_nf_db: float, second_nf_db: float, gain_db: float) -> FirstStage:
    """F1 = F12 - (F2 - 1)/G1: dB, with G1 the available gain of the first; nan where F1 would not be positive.

    Source: Friis 1944, solved for the first stage.
    """
    total, second, gain = (ratio_from_db(value) for value in (total_nf_db, second_nf_db, gain_db))
    added = (second - 1.0) / gain
    first = total - added
    if not first > 0.0:
        return FirstStage(*([math.nan] * 4))
    return FirstStage(db_from_ratio(first), total / first, -second / gain / first, added / first)


def with_second_stage(first_nf_db: V, second_nf_db: V, gain_db: V) -> V:
    """F12 = F1 + (F2 - 1)/G1: dB, any shape; 3.19 dB for 3, 10 and 20 dB. Source: Friis 1944."""
    return db_from_ratio(ratio_from_db(first_nf_db) + (ratio_from_db(second_nf_db) - 1.0) / ratio_from_db(gain_db))
