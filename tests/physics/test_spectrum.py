"""Lines, harmonics and noise of synthetic spectra, against what they were made from and against SciPy."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt
import pytest
from scipy import integrate, signal

from logbook.physics import spectrum

Array = npt.NDArray[np.float64]


def gaussian_lines(x: Array, lines: dict[float, float], rbw_hz: float, floor_dbm: float, scatter_db: float) -> Array:
    """Lines (Hz: dBm) through a Gaussian filter, on noise whose level scatters."""
    rng = np.random.default_rng(5)
    power = 10 ** ((floor_dbm + rng.normal(0.0, scatter_db, len(x))) / 10)
    for frequency, level in lines.items():
        power += 10 ** ((level - 12.04 * ((x - frequency) / rbw_hz) ** 2) / 10)  # -3.01 dB at rbw/2
    return 10 * np.log10(power)


LINES = {10.013e6: -10.0, 20.026e6: -45.2, 30.039e6: -38.7, 33.3e6: -60.1, 47.777e6: -71.0}


def test_lines_are_found_between_the_samples() -> None:
    x = np.linspace(1e6, 50e6, 10001)
    y = gaussian_lines(x, LINES, 30e3, -100.0, 1.0)
    found = spectrum.spectrum_lines(x, y, -90.0)
    np.testing.assert_allclose(found.frequency, list(LINES), atol=0.15 * (x[1] - x[0]))
    np.testing.assert_allclose(found.level, list(LINES.values()), atol=0.05)
    assert spectrum.strongest(found) == 0
    assert len(spectrum.spectrum_lines(x, y, -65.0).level) == 4
    assert spectrum.strongest(spectrum.spectrum_lines(x, y, 0.0)) is None


@pytest.mark.parametrize(("threshold", "excursion_db"), [(-99.0, 6.0), (-101.0, 3.0), (-200.0, 10.0), (-60.0, 6.0)])
def test_lines_as_scipy_finds_them(threshold: float, excursion_db: float) -> None:
    x = np.linspace(1e6, 50e6, 20001)
    y = gaussian_lines(x, LINES, 30e3, -100.0, 3.0)
    found = spectrum.spectrum_lines(x, y, threshold, excursion_db)
    expected = signal.find_peaks(y, height=threshold, prominence=excursion_db)[0]
    assert len(found.level) == len(expected)
    np.testing.assert_allclose(found.frequency, x[expected], atol=0.51 * (x[1] - x[0]))
    assert np.all(found.level >= y[expected])


def test_a_line_at_the_edge_is_none_and_nan_is_no_signal() -> None:
    x = np.arange(7.0)
    y = np.array([0.0, -50, -50, -20, -50, -50, 0])
    assert spectrum.spectrum_lines(x, y, -30.0).frequency.tolist() == [3.0]
    assert len(spectrum.spectrum_lines(x, np.full(7, np.nan), -30.0).level) == 0


def test_harmonics() -> None:
    frequencies = np.array([10.0, 19.99, 20.3, 30.04, 33.0, 40.2, 5.0, np.nan])
    orders = spectrum.harmonic_orders(frequencies, 10.0, 0.05)
    assert orders.tolist() == [1, 2, 0, 3, 0, 0, 0, 0]
    # What the fundamental is off by counts n times.
    assert spectrum.harmonic_orders(frequencies, 10.0, 0.05, 0.05).tolist() == [1, 2, 0, 3, 0, 4, 0, 0]
    # 19.99 and 20.3 are both near enough: the nearer is the harmonic.
    assert spectrum.harmonic_orders(frequencies, 10.0, 0.4).tolist() == [1, 2, 0, 3, 0, 4, 0, 0]
    for fundamental, tolerance in ((0.0, 0.1), (-1.0, 0.1), (np.nan, 0.1), (10.0, 5.0)):
        assert not spectrum.harmonic_orders(frequencies, fundamental, tolerance).any()


def test_harmonics_of_a_spectrum() -> None:
    x = np.linspace(1e6, 50e6, 10001)
    found = spectrum.spectrum_lines(x, gaussian_lines(x, LINES, 30e3, -100.0, 1.0), -90.0)
    strongest = spectrum.strongest(found)
    assert strongest is not None
    orders = spectrum.harmonic_orders(found.frequency, float(found.frequency[strongest]), 2e3, 1e3)
    assert orders.tolist() == [1, 2, 3, 0, 0]


def test_noise_in_a_band() -> None:
    # Closed form: -100 dBm in 1 kHz over 10 kHz is -90 dBm; -130 dBm/Hz.
    x = np.arange(0.0, 100e3, 100.0)
    y = np.full(x.shape, -100.0)
    assert spectrum.band_power(x, y, 1e3, 20e3, 30e3) == pytest.approx(-90.0)
    assert spectrum.band_power(x, y, 1e3, 20.033e3, 30.033e3) == pytest.approx(-90.0)
    assert spectrum.band_density(x, y, 1e3, 20e3, 31e3) == pytest.approx(-130.0)
    assert spectrum.noise_density(-100.0, 1e3) == pytest.approx(-130.0)
    assert spectrum.spot_density(x, y, 1e3, 25.05e3) == pytest.approx(-130.0)
    assert spectrum.spot_density(x, y, 1e3, 25.05e3, 3e3) == pytest.approx(-130.0)


def test_noise_with_uneven_steps_as_scipy_integrates_it() -> None:
    rng = np.random.default_rng(11)
    x = 1e6 + np.cumsum(rng.uniform(50.0, 500.0, 400))
    y = -110.0 + rng.normal(0.0, 4.0, 400)
    for low, high in ((0, 399), (17, 300), (100, 101)):
        part = slice(low, high + 1)
        expected = 10 * np.log10(integrate.trapezoid(10 ** (y[part] / 10), x[part]) / 300.0)
        assert spectrum.band_power(x, y, 300.0, x[low], x[high]) == pytest.approx(expected, abs=1e-6)


def test_noise_by_a_direct_sum_over_part_bins() -> None:
    # By hand: bins of 0, 1, 3 are (-0.5, 0.5), (0.5, 2), (2, 4); powers 1, 2, 4 mW in 1 Hz.
    x, y = np.array([0.0, 1.0, 3.0]), 10 * np.log10(np.array([1.0, 2.0, 4.0]))
    for low, high, milliwatt in ((-0.5, 4.0, 0.0 + 1 + 3 + 8), (0.25, 0.75, 0.25 + 0.5), (1.0, 2.5, 2.0 + 2.0)):
        assert 10 ** (spectrum.band_power(x, y, 1.0, low, high) / 10) == pytest.approx(milliwatt)


def test_a_sloping_density_against_its_integral() -> None:
    """1/f noise: the integral of c/f is c ln(f2/f1)."""
    x = np.linspace(1e3, 101e3, 5001)
    y = -100.0 - 10 * np.log10(x / 1e3)
    expected = -100.0 + 10 * math.log10(1e3 * math.log(50.0 / 2.0) / 10.0)
    assert spectrum.band_power(x, y, 10.0, 2e3, 50e3) == pytest.approx(expected, abs=0.001)


def test_noise_that_is_not_known() -> None:
    x, y = np.array([0.0, 1.0, 2.0]), np.array([-90.0, np.nan, -90.0])
    whole = np.full(3, -90.0)
    for low, high in ((-0.6, 1.0), (1.0, 2.6), (1.0, 1.0), (2.0, 1.0)):
        assert math.isnan(spectrum.band_power(x, whole, 1.0, low, high))
        assert math.isnan(spectrum.band_density(x, whole, 1.0, low, high))
    assert math.isnan(spectrum.band_power(x, y, 1.0, 0.0, 1.0))
    assert spectrum.band_power(x, y, 1.0, 1.5, 2.0) == pytest.approx(-93.0103)
    assert math.isnan(spectrum.band_power(x, whole, 0.0, 0.0, 1.0))
    assert math.isnan(spectrum.band_power(x[:1], whole[:1], 1.0, 0.0, 0.1))
    assert math.isnan(spectrum.spot_density(x, y, 1.0, 0.5))
    assert math.isnan(spectrum.spot_density(x, whole, 1.0, 3.0))
