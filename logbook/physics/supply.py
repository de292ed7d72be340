"""Noise of supplies and control lines, and what of it arrives in the signal path. Densities are rms, V/rtHz."""

from __future__ import annotations

import math
from collections.abc import Iterable

import numpy as np

from logbook.physics.constants import V
from logbook.physics.decibels import amplitude_from_db, db_from_amplitude, db_from_ratio, dbm_from_volt, positive_or_nan

_NEPER_PER_DB = math.log(10.0) / 20.0


def density_from_rms(rms_v: V, low_hz: V, high_hz: V) -> V:
    """e = V/sqrt(f2 - f1): V rms in a band (Hz) to V/rtHz, taken as white over it, any shape; nan for no band.

    20 uV in 10 Hz to 100 kHz: 63.2 nV/rtHz. Source: closed form.
    """
    result: V = rms_v / np.sqrt(positive_or_nan(high_hz - low_hz))
    return result


def rms_from_density(density: V, low_hz: V, high_hz: V) -> V:
    """V = e sqrt(f2 - f1): V/rtHz, white, to V rms in a band (Hz), any shape; nan for no band. Source: closed form."""
    result: V = density * np.sqrt(positive_or_nan(high_hz - low_hz))
    return result


def per_volt_of_output(value_per_volt: V, output_v: V) -> V:
    """Noise given per volt of output (V/V, or 1/rtHz) times the output (V): V or V/rtHz, any shape.

    Source: common practice; a regulator's loop multiplies its reference's noise with its output voltage.
    """
    noise: V = value_per_volt * np.abs(output_v)
    return noise


def after_rejection(density: V, psrr_db: V) -> V:
    """e 10^(-PSRR/20): V or V/rtHz on the supply to what of it stands at the load's output, any shape.

    Source: definition of PSRR.
    """
    return density * amplitude_from_db(-psrr_db)


def sum_of_densities(densities: Iterable[float]) -> float:
    """Root of the sum of squares of independent noises, V or V/rtHz; 0 for none. Source: closed form."""
    return math.sqrt(math.fsum(density * density for density in densities))


def noise_in_bandwidth(density: V, bandwidth_hz: V, impedance_ohm: V) -> V:
    """e^2 B/R in dBm: V/rtHz across R ohm in a noise bandwidth (Hz), any shape; nan for nothing.

    Source: closed form.
    """
    return dbm_from_volt(density, impedance_ohm) + db_from_ratio(bandwidth_hz)


def amplitude_noise(density: V, gain_slope_db_per_v: V) -> V:
    """10 lg((c k e)^2/2), c = ln 10/20: dBc/Hz in each sideband from noise (V/rtHz) on a gain control of k dB/V.

    Small modulation; any shape; nan for nothing. The offset is the noise's own frequency. Source: closed form, a tone
    of peak Vp gives modulation m = c k Vp and sidebands of m/2, and noise of density e stands for Vp^2 = 2 e^2 per Hz.
    """
    modulation: V = _NEPER_PER_DB * np.abs(gain_slope_db_per_v) * density
    return db_from_amplitude(modulation) + db_from_ratio(0.5)


def ripple_sidebands(ripple_rms_v: V, gain_slope_db_per_v: V) -> V:
    """The same for one tone of V rms on a gain control: level of each sideband, dBc, any shape. Source: closed form."""
    return amplitude_noise(ripple_rms_v, gain_slope_db_per_v)


def phase_noise_from_pushing(density: V, pushing_hz_per_v: V, offset_hz: V) -> V:
    """20 lg(K e/(sqrt 2 f)): dBc/Hz in each sideband from noise (V/rtHz) on an oscillator pushed by K Hz/V, at f.

    Small modulation; any shape; nan for nothing. Source: closed form, a phase deviation of K Vp/f gives sidebands
    of half of it.
    """
    deviation: V = np.abs(pushing_hz_per_v) * density / positive_or_nan(offset_hz)
    return db_from_amplitude(deviation) + db_from_ratio(0.5)
