"""Decibels and back. The dB of a zero or negative power is nan, without a warning, never a made-up floor."""

from __future__ import annotations

from typing import Any

import numpy as np

from logbook.physics.constants import DB_PER_NEPER_POWER, ZERO_CELSIUS, V


def positive_or_nan(value: V) -> V:
    """The value where it is above zero, nan elsewhere; any unit, any shape. Source: convention of this package."""
    kept: Any = np.where(np.greater(value, 0.0), value, np.nan)
    result: V = kept[()]
    return result


def db_from_ratio(ratio: V) -> V:
    """10 lg(ratio): power ratio (1) to dB, any shape; nan for zero, negative, nan; inf for inf. Source: definition."""
    result: V = 10.0 * np.log10(positive_or_nan(ratio))
    return result


def ratio_from_db(value_db: V) -> V:
    """10^(x/10): dB to a power ratio (1), any shape; 0 for -inf, inf for +inf. Source: closed form."""
    with np.errstate(over="ignore", under="ignore"):
        result: V = np.power(10.0, np.divide(value_db, 10.0))
    return result


def db_from_amplitude(ratio: V) -> V:
    """20 lg(ratio): voltage ratio (V/V) to dB, any shape; nan for zero and negative. Source: closed form."""
    return 2.0 * db_from_ratio(ratio)


def amplitude_from_db(value_db: V) -> V:
    """10^(x/20): dB to a voltage ratio (V/V), any shape. Source: closed form."""
    return ratio_from_db(value_db / 2.0)


def dbm_from_watt(watt: V) -> V:
    """10 lg(P / 1 mW): W to dBm (or W/Hz to dBm/Hz), any shape; nan for zero and negative. Source: closed form."""
    return db_from_ratio(watt) + 30.0


def watt_from_dbm(level_dbm: V) -> V:
    """1 mW 10^(x/10): dBm to W (or dBm/Hz to W/Hz), any shape. Source: closed form."""
    return ratio_from_db(level_dbm - 30.0)


def dbm_from_volt(volt: V, impedance_ohm: V) -> V:
    """V^2/R in dBm for V rms across R ohm (V/rtHz gives dBm/Hz); nan for zero or negative. Source: closed form."""
    return db_from_amplitude(volt) - db_from_ratio(impedance_ohm) + 30.0


def volt_from_dbm(level_dbm: V, impedance_ohm: V) -> V:
    """sqrt(P R): dBm into R ohm to V rms (dBm/Hz to V/rtHz), any shape. Source: closed form."""
    with np.errstate(invalid="ignore"):
        result: V = np.sqrt(watt_from_dbm(level_dbm) * impedance_ohm)
    return result


def dbm_from_dbuv(level_dbuv: V, impedance_ohm: V) -> V:
    """dBm = dBuV - 90 - 10 lg R (dBuV over R ohm; -107 dB at 50 ohm), any shape. Source: closed form."""
    return level_dbuv - 90.0 - db_from_ratio(impedance_ohm)


def sum_powers_db(levels_db: V) -> float:
    """10 lg(sum of 10^(x/10)) over all levels given (dB or dBm); nan when there are none. Source: closed form."""
    return float(db_from_ratio(float(np.sum(ratio_from_db(np.asarray(levels_db, dtype=np.float64))))))


def u_db_from_relative(relative: V) -> V:
    """(10/ln 10) u: a small relative uncertainty of a power (1) in dB, first order. Source: JCGM 100:2008 5.1."""
    return DB_PER_NEPER_POWER * relative


def relative_from_u_db(u_db: V) -> V:
    """u ln 10 / 10: a standard uncertainty in dB as a relative one of the power (1). Source: JCGM 100:2008 5.1."""
    return u_db / DB_PER_NEPER_POWER


def kelvin_from_celsius(celsius: V) -> V:
    """t + 273.15: degC to K, any shape. Source: SI."""
    return celsius + ZERO_CELSIUS


def celsius_from_kelvin(kelvin: V) -> V:
    """T - 273.15: K to degC, any shape. Source: SI."""
    return kelvin - ZERO_CELSIUS
