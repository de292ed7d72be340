"""The noise of one stage as a temperature at its input, and the noise that comes from outside.

`image` is 1/R, linear: the part of the noise ahead of a mixer that reaches the output a second time through the image;
0 means that the image is fully rejected, 1 that nothing rejects it.
"""

from __future__ import annotations

import math

import numpy as np

from logbook.physics.constants import BOLTZMANN, T0, V
from logbook.physics.decibels import db_from_ratio, dbm_from_watt, positive_or_nan, ratio_from_db


def temperature_from_nf(nf_db: V) -> V:
    """Te = T0 (F - 1): dB to K, any shape; 0 K for 0 dB. Source: IEEE definition of noise figure."""
    return T0 * (ratio_from_db(nf_db) - 1.0)


def nf_from_temperature(temperature_k: V) -> V:
    """F = 1 + Te/T0: K to dB, any shape; nan at and below -T0. Source: IEEE definition of noise figure."""
    return db_from_ratio(1.0 + temperature_k / T0)


def image_from_rejection(rejection_db: V) -> V:
    """1/R: image rejection of what stands ahead (dB, inf = full) to its linear inverse (1). Source: closed form."""
    return ratio_from_db(-rejection_db)


def own_temperature_from_nf(nf_db: V, image: V) -> V:
    """(F - 1) T0 - image T0: single-sideband nf (dB) to a stage's own temperature (K), any shape.

    The figure is taken with the image port terminated at T0, so that the image's noise is part of it. Negative when the
    figure is lower than the image alone makes it: no such stage can be, and the caller says so.
    Source: closed form from the IEEE definition; common practice for mixers.
    """
    return temperature_from_nf(nf_db) - T0 * image


def own_temperature_from_nf_dsb(nf_dsb_db: V, image: V) -> V:
    """F_ssb = 2 F_dsb, then as `own_temperature_from_nf`: dB to K, any shape; negative means impossible.

    Source: common practice; equal gain and noise on both sidebands.
    """
    return T0 * (2.0 * ratio_from_db(nf_dsb_db) - 1.0) - T0 * image


def own_temperature_passive(loss_db: V, temperature_k: V) -> V:
    """(L - 1) T: a matched passive of loss L (dB) at temperature T (K), any shape; negative for a negative loss.

    F = 1 + (L - 1) T/T0 equals L at 290 K only. Source: Pozar, Microwave Engineering, noise of a lossy line.
    """
    return (ratio_from_db(loss_db) - 1.0) * temperature_k


def own_temperature_from_noise_voltage(
    voltage_density: V, current_density: V, resistance_ohm: V, *, terminated: bool = False
) -> V:
    """Noise voltage (V/rtHz) and current (A/rtHz) at a source of R ohm as a stage's own temperature (K), any shape.

    High-impedance input: F = 1 + (e^2 + (i R)^2) / (4 k T0 R). terminated, by a resistor equal to R at T0 across the
    input: F = 2 + 4 e^2/(4 k T0 R) + i^2 R/(4 k T0). The temperature is T0 (F - 1); nan for R of zero or less.
    Source: Motchenbacher, Low-Noise Electronic System Design.
    """
    resistance = positive_or_nan(resistance_ohm)
    voltage = np.square(voltage_density) / (4.0 * BOLTZMANN * resistance)
    current = np.square(current_density) * resistance / (4.0 * BOLTZMANN)
    result: V = T0 + 4.0 * voltage + current if terminated else voltage + current
    return result


def density_from_temperature(temperature_k: V) -> V:
    """k T in dBm/Hz, any shape; -173.975 at 290 K; nan for 0 K and below. Source: SI 2019."""
    return dbm_from_watt(BOLTZMANN * temperature_k)


def temperature_from_density(density_dbm_hz: V) -> V:
    """T = p/k: dBm/Hz to K, any shape. Source: SI 2019."""
    return ratio_from_db(density_dbm_hz - 30.0) / BOLTZMANN


def noise_power_dbm(density_dbm_hz: V, bandwidth_hz: V) -> V:
    """density + 10 lg B: dBm/Hz in a noise bandwidth (Hz) to dBm, any shape; nan for B of zero or less.

    Source: closed form.
    """
    return density_dbm_hz + db_from_ratio(bandwidth_hz)


def fa_to_temperature(fa_db: V) -> V:
    """Ta = T0 10^(Fa/10): external noise Fa (dB above k T0) to K, any shape. Source: ITU-R P.372-16, fa = Ta/T0."""
    return T0 * ratio_from_db(fa_db)


def temperature_to_fa(temperature_k: V) -> V:
    """Fa = 10 lg(Ta/T0): K to dB above k T0, any shape; nan for 0 K and below. Source: ITU-R P.372-16, fa = Ta/T0."""
    return db_from_ratio(temperature_k / T0)


def galactic_fa_db(frequency_hz: V) -> V:
    """Fam = 52 - 23 lg(f/MHz): median galactic noise, Hz to dB above k T0, any shape; nan for f of zero or less.

    29.0 dB at 10 MHz. Holds from about 10 MHz (below, the ionosphere may shut it out) to 100 MHz and not far beyond.
    Source: ITU-R P.372-16 eq. 13.
    """
    return 52.0 - 2.3 * db_from_ratio(frequency_hz / 1e6)


def galactic_temperature(frequency_hz: V) -> V:
    """T0 10^(Fam/10): median galactic noise, Hz to K, any shape; see `galactic_fa_db`.

    Source: ITU-R P.372-16 eq. 13.
    """
    return fa_to_temperature(galactic_fa_db(frequency_hz))


def noise_bandwidth_ratio(rbw_filter: str) -> float:
    """Noise bandwidth over RBW (1) of a filter by name; RBW is the -3 dB width, for gaussian_6db the -6 dB width.

    flat 1; gaussian sqrt(pi/ln 2)/2 = 1.0645; gaussian_6db 0.7527; synchronous_n, n equal poles, sqrt(pi) G(n-1/2) /
    (2 G(n) sqrt(2^(1/n) - 1)); butterworth_n (pi/2n)/sin(pi/2n). nan for any other name.
    Source: closed form, the integral of the power response over its half-power width.
    """
    gaussian = math.sqrt(math.pi / math.log(2.0)) / 2.0
    named = {"flat": 1.0, "gaussian": gaussian, "gaussian_6db": gaussian / math.sqrt(2.0)}
    if rbw_filter in named:
        return named[rbw_filter]
    family, _, poles = rbw_filter.rpartition("_")
    shapes = {"synchronous": _synchronous, "butterworth": _butterworth}
    if family not in shapes or not (poles.isascii() and poles.isdigit() and 1 <= int(poles) <= 100):
        return math.nan
    return shapes[family](int(poles))


def _synchronous(poles: int) -> float:
    gammas = math.gamma(poles - 0.5) / math.gamma(poles)
    return math.sqrt(math.pi) * gammas / (2.0 * math.sqrt(2.0 ** (1.0 / poles) - 1.0))


def _butterworth(poles: int) -> float:
    angle = math.pi / (2.0 * poles)
    return angle / math.sin(angle)


def spot_noise_voltage(temperature_k: float, resistance_ohm: float) -> float:
    """sqrt(4 k T R): open-circuit noise of a resistor, K and ohm to V/rtHz; nan if negative. Source: Nyquist 1928."""
    product = 4.0 * BOLTZMANN * temperature_k * resistance_ohm
    return math.sqrt(product) if product >= 0.0 else math.nan
