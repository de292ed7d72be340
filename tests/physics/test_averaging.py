"""Averaging against simulated noise and SciPy's exponential integral."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import integrate, special, stats

from logbook.physics import averaging


@pytest.mark.parametrize(("name", "printed"), [("power", 0.0), ("log", 2.507), ("voltage", 1.049)])
def test_corrections(name: str, printed: float) -> None:
    # Closed form: 10 lg e^gamma and 10 lg(4/pi).
    assert averaging.averaging_correction_db(name) == pytest.approx(printed, abs=0.0005)


def test_peak_converts_to_nothing() -> None:
    assert math.isnan(averaging.averaging_correction_db("peak"))


def test_corrections_by_integration() -> None:
    """Means over the exponential distribution of the power of Gaussian noise, done by SciPy."""
    log, _ = integrate.quad(lambda p: 10 * math.log10(p) * math.exp(-p), 0, 50, limit=200)
    assert averaging.averaging_correction_db("log") == pytest.approx(-log, abs=1e-6)
    root, _ = integrate.quad(lambda p: math.sqrt(p) * math.exp(-p), 0, 50)
    assert averaging.averaging_correction_db("voltage") == pytest.approx(-20 * math.log10(root), abs=1e-6)


def test_density_of_a_reading() -> None:
    # Closed form: -100 dBm in 10 kHz Gaussian RBW, log average: -100 - 40 - 0.2714 + 2.5068.
    assert averaging.noise_density_from_reading(-100.0, 10e3, 1.0645, "log") == pytest.approx(-137.765, abs=0.0005)
    assert math.isnan(averaging.noise_density_from_reading(-100.0, 10e3, 1.0645, "peak"))


@pytest.mark.parametrize("x", [1e-12, 1e-6, 0.01, 0.5, 0.999, 1.0, 1.001, 1.5, 3.0, 10.0, 50.0, 700.0])
def test_exponential_integral_against_scipy(x: float) -> None:
    assert averaging.exponential_integral(x) == pytest.approx(float(special.exp1(x)), rel=1e-12)


def test_exponential_integral_at_the_edges() -> None:
    assert averaging.exponential_integral(0.0) == math.inf
    assert math.isnan(averaging.exponential_integral(-1.0))


def test_carrier_equal_to_noise() -> None:
    # Moulthrop and Muha 1991, formula: log average 0.953 dB; power average 3.01 dB.
    assert averaging.log_average_excess_db(1.0) == pytest.approx(0.953, abs=0.0005)
    assert 10 * math.log10(2.0) == pytest.approx(3.01, abs=0.005)


def test_noise_alone_is_the_log_correction() -> None:
    assert averaging.log_average_excess_db(0.0) == pytest.approx(-averaging.averaging_correction_db("log"))
    assert math.isnan(averaging.log_average_excess_db(-0.1))


@pytest.mark.parametrize("x", [0.1, 1.0, 4.0, 30.0])
def test_excess_by_integration_over_the_rice_distribution(x: float) -> None:
    """The mean log of carrier plus noise: power of mean 1 + x, twice it non-central chi-square of two degrees."""
    law = stats.ncx2(2, 2 * x)
    mean, _ = integrate.quad(lambda p: 10 * math.log10(p / 2) * law.pdf(p), 0, 2 * x + 200, limit=400)
    assert averaging.log_average_excess_db(x) == pytest.approx(mean, abs=1e-4)


@pytest.mark.parametrize("carrier", [-40.0, -20.0, -5.0, 0.0, 3.0, 10.0, 60.0])
def test_carrier_comes_back(carrier: float) -> None:
    reading = -100.0 + averaging.log_average_excess_db(10 ** (carrier / 10))
    assert averaging.carrier_from_log_average(reading, -100.0).value_dbm == pytest.approx(-100.0 + carrier, abs=1e-6)
    power = -100.0 + 10 * math.log10(1 + 10 ** (carrier / 10))
    assert averaging.subtract_power(power, -100.0).value_dbm == pytest.approx(-100.0 + carrier, abs=1e-6)


@pytest.mark.parametrize("correct", [averaging.carrier_from_log_average, averaging.subtract_power])
@pytest.mark.parametrize("above", [0.5, 3.0, 12.0])
def test_sensitivities_against_finite_differences(correct: object, above: float) -> None:
    assert callable(correct)
    step = 1e-5
    found = correct(above, 0.0)
    by_reading = (correct(above + step, 0.0).value_dbm - correct(above - step, 0.0).value_dbm) / (2 * step)
    by_noise = (correct(above, step).value_dbm - correct(above, -step).value_dbm) / (2 * step)
    assert found.per_reading == pytest.approx(by_reading, rel=1e-5)
    assert found.per_noise == pytest.approx(by_noise, rel=1e-5, abs=1e-8)


def test_power_subtraction() -> None:
    # Closed form: S+N 10 dB above N: -0.46 dB.
    assert averaging.subtract_power(10.0, 0.0).value_dbm - 10.0 == pytest.approx(-0.46, abs=0.005)


def test_power_subtraction_overcorrects_a_log_average() -> None:
    """As PHYSICS says, by more than 1 dB near the floor: the reason why log averages have their own law."""
    reading = averaging.log_average_excess_db(1.0)
    assert averaging.carrier_from_log_average(reading, 0.0).value_dbm == pytest.approx(0.0, abs=1e-9)
    assert averaging.subtract_power(reading, 0.0).value_dbm < -1.0


def test_nothing_is_left_below_the_noise() -> None:
    assert all(math.isnan(part) for part in averaging.subtract_power(0.0, 0.0))
    assert all(math.isnan(part) for part in averaging.carrier_from_log_average(-2.6, 0.0))
    assert all(math.isnan(part) for part in averaging.carrier_from_log_average(float("nan"), 0.0))


def test_simulated_carrier_in_noise() -> None:
    rng = np.random.default_rng(11)
    noise = (rng.standard_normal(400_000) + 1j * rng.standard_normal(400_000)) / math.sqrt(2)
    shown = np.mean(20 * np.log10(np.abs(math.sqrt(2.0) + noise)))
    assert averaging.carrier_from_log_average(float(shown), 0.0).value_dbm == pytest.approx(3.01, abs=0.05)
