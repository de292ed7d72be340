"""Intercepts and what follows from them; and a two-tone test of a real cubic."""

from __future__ import annotations

import math

import numpy as np
import pytest

from logbook.physics import linearity, noise


def test_sfdr_of_the_textbook() -> None:
    # Razavi, RF Microelectronics 2.4, from memory: NF 9 dB, IIP3 -15 dBm, 200 kHz: 52.7 dB, counted from a floor 12 dB
    # SNR lower, with -174 dBm/Hz: 2/3 (IIP3 - floor) - SNR.
    floor = noise.noise_power_dbm(-174.0 + 9.0, 200e3)
    assert linearity.sfdr(-15.0, floor) - 12.0 == pytest.approx(52.7, abs=0.05)


def test_conversions_and_their_one_db() -> None:
    # Definition: at the 1 dB compression point the gain is 1 dB less.
    assert linearity.output_compression(-20.0, 15.0) == -6.0
    assert linearity.input_compression_from_output(-6.0, 15.0) == -20.0
    assert linearity.output_intercept(-5.0, 15.0) == 10.0
    assert linearity.input_intercept_from_output(10.0, 15.0) == -5.0


def test_ranges() -> None:
    # Closed form.
    assert linearity.linear_range(-20.0, -120.0) == 100.0
    assert linearity.sensitivity(-120.0, 10.0) == -110.0
    assert linearity.headroom(-20.0, -60.0) == 40.0
    assert linearity.second_order_sfdr(40.0, -120.0) == 80.0


def test_ideal_and_unknown_stay_so() -> None:
    assert linearity.sfdr(math.inf, -120.0) == math.inf
    assert math.isnan(linearity.sfdr(0.0, math.nan))


def test_at_the_sfdr_the_product_equals_the_floor() -> None:
    iip3, floor = 3.0, -117.0
    tone = floor + linearity.sfdr(iip3, floor)
    assert linearity.third_order_product(tone, iip3) == pytest.approx(floor)
    tone = floor + linearity.second_order_sfdr(40.0, floor)
    assert linearity.second_order_product(tone, 40.0) == pytest.approx(floor)


def test_intercept_of_a_simulated_two_tone_measurement() -> None:
    """A polynomial y = x - c x^3 driven with two tones and looked at with an FFT."""
    n, f1, f2, amplitude, c = 4096, 400, 421, 0.01, 0.2
    t = np.arange(n) / n
    x = amplitude * (np.cos(2 * np.pi * f1 * t) + np.cos(2 * np.pi * f2 * t))
    spectrum = np.abs(np.fft.rfft(x - c * x**3)) / (n / 2)

    def level(bin_number: int) -> float:
        return float(20 * np.log10(spectrum[bin_number]))

    measured = linearity.intercept_from_two_tones(level(f1), level(2 * f1 - f2), 3)
    # Closed form: tones meet their products at an amplitude of sqrt(4/(3 c)).
    assert measured == pytest.approx(10 * math.log10(4 / (3 * c)), abs=0.01)
    assert linearity.third_order_product(level(f1), measured) == pytest.approx(level(2 * f1 - f2))
