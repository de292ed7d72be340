"""What averaging does to noise on a display, and to a carrier that stands near it."""

from __future__ import annotations

import math
from typing import NamedTuple

from logbook.physics.constants import DB_PER_NEPER_POWER, EULER_GAMMA
from logbook.physics.decibels import db_from_ratio, ratio_from_db

_CORRECTIONS_DB = {
    "power": 0.0,
    "log": DB_PER_NEPER_POWER * EULER_GAMMA,
    "voltage": 10.0 * math.log10(4.0 / math.pi),
}


class Corrected(NamedTuple):
    """A level freed of the noise beneath it (dBm), and its change per dB of the reading and per dB of the noise (1)."""

    value_dbm: float
    per_reading: float
    per_noise: float


NOT_KNOWN = Corrected(math.nan, math.nan, math.nan)


def averaging_correction_db(averaging: str) -> float:
    """dB to add to averaged Gaussian noise behind an envelope detector for its power; nan for any other averaging.

    power 0; log 10 lg e^gamma = 2.507; voltage 10 lg(4/pi) = 1.049; peak converts to nothing.
    Source: closed form, means of log and root of an exponentially distributed power.
    """
    return _CORRECTIONS_DB.get(averaging, math.nan)


def noise_density_from_reading(reading_dbm: float, rbw_hz: float, bandwidth_ratio: float, averaging: str) -> float:
    """N0 = reading - 10 lg(RBW ratio) + correction: dBm in RBW (Hz) to power-averaged dBm/Hz; nan for peak.

    Source: closed form; `averaging_correction_db`, `noise.noise_bandwidth_ratio`.
    """
    return reading_dbm - db_from_ratio(rbw_hz * bandwidth_ratio) + averaging_correction_db(averaging)


def subtract_power(reading_dbm: float, noise_dbm: float) -> Corrected:
    """P = M - N in linear power: a power-averaged reading (dBm) less power-averaged noise (dBm); nan where M <= N.

    dP/dM = 1/(1 - n/m), dP/dN = 1 - dP/dM in dB per dB. Source: closed form; independent powers add.
    """
    left = 1.0 - ratio_from_db(noise_dbm - reading_dbm)
    if not left > 0.0:
        return NOT_KNOWN
    return Corrected(reading_dbm + db_from_ratio(left), 1.0 / left, 1.0 - 1.0 / left)


def log_average_excess_db(carrier_to_noise: float) -> float:
    """4.343 [ln x + E1(x)]: log average of carrier plus noise over the true noise power (dB), x = P/N linear power.

    0.953 dB at x = 1; -2.507 dB at x = 0, noise alone; nan for negative x. Source: Moulthrop and Muha 1991.
    """
    return DB_PER_NEPER_POWER * _log_plus_e1(carrier_to_noise)


def carrier_from_log_average(reading_dbm: float, noise_dbm: float) -> Corrected:
    """The carrier (dBm) in a log-averaged reading M (dBm) over true (power-averaged) noise N (dBm).

    Solves M = N + 4.343 [ln x + E1(x)] for x = P/N; dP/dM = 1/(1 - e^-x), dP/dN = 1 - dP/dM in dB per dB.
    nan where M is not above the log average of the noise alone, N - 2.507 dB. Source: Moulthrop and Muha 1991.
    """
    target = (reading_dbm - noise_dbm) / DB_PER_NEPER_POWER
    x = _solve_log_plus_e1(target)
    if not x > 0.0:
        return NOT_KNOWN
    per_reading = -1.0 / math.expm1(-x)
    return Corrected(noise_dbm + db_from_ratio(x), per_reading, 1.0 - per_reading)


def exponential_integral(x: float) -> float:
    """E1(x) = integral of e^-t/t from x to infinity (1), x > 0; inf at 0, nan below.

    Source: Abramowitz and Stegun 5.1.
    """
    if not x >= 0.0:
        return math.nan
    if x == 0.0:
        return math.inf
    return -EULER_GAMMA - math.log(x) + _entire_part(x) if x <= 1.0 else _continued_fraction(x)


def _log_plus_e1(x: float) -> float:
    # ln x + E1(x) is smooth at zero although both terms run away: below one the sum is taken in closed form.
    if not x >= 0.0:
        return math.nan
    return _entire_part(x) - EULER_GAMMA if x <= 1.0 else math.log(x) + _continued_fraction(x)


def _entire_part(x: float) -> float:
    """Sum of (-1)^(k+1) x^k/(k k!), Abramowitz and Stegun 5.1.11; for x up to 1."""
    total, power = 0.0, -1.0
    for k in range(1, 30):
        power *= -x / k
        total += power / k
    return total


def _continued_fraction(x: float) -> float:
    """E1 by its continued fraction from the tail, Abramowitz and Stegun 5.1.22; for x from 1 up."""
    tail = 0.0
    for k in range(120, 0, -1):
        tail = k / (1.0 + k / (x + tail))
    return math.exp(-x) / (x + tail)


def _solve_log_plus_e1(target: float) -> float:
    # The function is rising and concave and lies below x - gamma: Newton from there climbs to the root from the left.
    if not target > -EULER_GAMMA:
        return math.nan
    if target > 40.0:
        return math.exp(min(target, 700.0)) if target <= 700.0 else math.inf
    x = target + EULER_GAMMA
    for _ in range(100):
        step = (target - _log_plus_e1(x)) * x / -math.expm1(-x)
        x += step
        if abs(step) <= 1e-14 * x:
            break
    return x
