"""Supply noise: closed forms, and sidebands looked at with an FFT."""

from __future__ import annotations

import math

import numpy as np
import pytest

from logbook.physics import noise, supply


def test_density_of_a_regulator() -> None:
    # Closed form: 20 uV rms in 10 Hz to 100 kHz: 63.2 nV/rtHz.
    density = supply.density_from_rms(20e-6, 10.0, 100e3)
    assert density * 1e9 == pytest.approx(63.2, abs=0.05)
    assert supply.rms_from_density(density, 10.0, 100e3) == pytest.approx(20e-6)
    assert math.isnan(supply.density_from_rms(20e-6, 100.0, 100.0))


def test_per_volt_of_output() -> None:
    # Closed form: 10 uV per volt at 5 V and at -5 V.
    assert supply.per_volt_of_output(10e-6, 5.0) == pytest.approx(50e-6)
    assert supply.per_volt_of_output(10e-6, -5.0) == pytest.approx(50e-6)


def test_rejection_and_sum() -> None:
    # Closed form: 40 dB is a hundredth; 3 and 4 make 5.
    assert supply.after_rejection(1e-6, 40.0) == pytest.approx(10e-9)
    assert supply.sum_of_densities([3e-9, 4e-9]) == pytest.approx(5e-9)
    assert supply.sum_of_densities([]) == 0.0


def test_half_the_voltage_of_a_resistor_is_thermal_noise() -> None:
    """A matched 50 ohm source at 290 K: the noise across the load is k T0 B."""
    density = noise.spot_noise_voltage(290.0, 50.0) / 2
    assert supply.noise_in_bandwidth(density, 10e3, 50.0) == pytest.approx(-173.975 + 40.0, abs=0.0005)
    assert math.isnan(supply.noise_in_bandwidth(0.0, 10e3, 50.0))


def sidebands(envelope: np.ndarray, phase: np.ndarray, offset: int) -> float:
    n = len(envelope)
    t = np.arange(n) / n
    carrier = 256
    spectrum = np.abs(np.fft.rfft(envelope * np.cos(2 * np.pi * carrier * t + phase)))
    return float(20 * np.log10(spectrum[carrier + offset] / spectrum[carrier]))


def test_ripple_on_a_gain_control() -> None:
    """10 mV rms on 30 dB/V, as a real exponential gain control does it."""
    t = np.arange(4096) / 4096
    volts = 10e-3 * math.sqrt(2) * np.cos(2 * np.pi * 20 * t)
    envelope = 10 ** (30.0 * volts / 20)
    seen = sidebands(envelope, np.zeros_like(t), 20)
    assert supply.ripple_sidebands(10e-3, 30.0) == pytest.approx(seen, abs=0.01)
    assert supply.ripple_sidebands(10e-3, -30.0) == pytest.approx(seen, abs=0.01)


def test_noise_on_a_gain_control_is_ripple_in_one_hertz() -> None:
    # Closed form: (ln10/20 * 20 dB/V * 100 nV/rtHz)^2/2 = -135.8 dBc/Hz.
    assert supply.amplitude_noise(100e-9, 20.0) == pytest.approx(-135.77, abs=0.01)


def test_pushing_of_an_oscillator() -> None:
    """1 mV rms at 20 Hz on 1 kHz/V, as a real frequency modulation does it."""
    t = np.arange(4096) / 4096
    peak_phase = 1e-3 * math.sqrt(2) * 1e3 / 20.0
    seen = sidebands(np.ones_like(t), peak_phase * np.sin(2 * np.pi * 20 * t), 20)
    assert supply.phase_noise_from_pushing(1e-3, 1e3, 20.0) == pytest.approx(seen, abs=0.02)
    assert math.isnan(supply.phase_noise_from_pushing(1e-3, 1e3, 0.0))
