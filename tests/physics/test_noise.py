"""Noise of single stages and from outside, against printed values and integrals done by SciPy."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import integrate, signal

from logbook.physics import noise


@pytest.mark.parametrize(
    ("loss_db", "kelvin", "nf_db"),
    [
        (10 * math.log10(2), 290.0, 3.010),  # closed form, pad L = 2
        (10 * math.log10(2), 77.0, 1.023),  # closed form
        (1.0, 313.15, 1.071),  # closed form, cable at 40 degC
    ],
)
def test_passive_at_its_own_temperature(loss_db: float, kelvin: float, nf_db: float) -> None:
    own = noise.own_temperature_passive(loss_db, kelvin)
    assert noise.nf_from_temperature(own) == pytest.approx(nf_db, abs=0.0005)


def test_noise_figure_and_temperature() -> None:
    assert noise.temperature_from_nf(0.0) == 0.0
    # Closed form: 3.0103 dB is 290 K.
    assert noise.temperature_from_nf(10 * math.log10(2)) == pytest.approx(290.0)
    assert math.isnan(noise.nf_from_temperature(-400.0))


def test_input_floor_of_a_terminated_unit() -> None:
    # Closed form: k T0 F B with F 10 dB and 10 kHz is -123.98 dBm.
    density = noise.density_from_temperature(290.0 + noise.temperature_from_nf(10.0))
    assert noise.noise_power_dbm(density, 10e3) == pytest.approx(-123.98, abs=0.005)
    assert math.isnan(noise.noise_power_dbm(density, 0.0))
    assert math.isnan(noise.density_from_temperature(0.0))
    assert noise.temperature_from_density(density) == pytest.approx(2900.0)


def test_mixer_whose_figure_is_too_low_for_its_image() -> None:
    assert noise.own_temperature_from_nf(2.0, 1.0) < 0.0
    assert noise.own_temperature_from_nf(2.0, 0.0) > 0.0
    assert noise.image_from_rejection(math.inf) == 0.0
    assert noise.image_from_rejection(20.0) == pytest.approx(0.01)


def test_double_sideband_is_three_db_below_single() -> None:
    # Closed form: F_ssb = 2 F_dsb.
    single = noise.own_temperature_from_nf(7.0 + 10 * math.log10(2), 0.3)
    assert noise.own_temperature_from_nf_dsb(7.0, 0.3) == pytest.approx(single)


def test_noise_voltage_and_current() -> None:
    """Noise powers written out at the input: k = 1.380649e-23 J/K, R 50 ohm, e 1.5 nV/rtHz, i 10 pA/rtHz."""
    e, i, r, four_kt = 1.5e-9, 10e-12, 50.0, 4 * 1.380649e-23 * 290.0
    open_input = 1 + (e**2 + (i * r) ** 2) / (four_kt * r)
    assert 1 + noise.own_temperature_from_noise_voltage(e, i, r) / 290.0 == pytest.approx(open_input)
    terminated = 2 + 4 * e**2 / (four_kt * r) + i**2 * r / four_kt
    own = noise.own_temperature_from_noise_voltage(e, i, r, terminated=True)
    assert 1 + own / 290.0 == pytest.approx(terminated)
    assert math.isnan(noise.own_temperature_from_noise_voltage(e, i, 0.0))


def test_termination_costs_as_a_circuit_does() -> None:
    """The terminated formula against the circuit: source R and shunt R, noise referred to the input by the divider."""
    e, i, r, four_kt = 0.9e-9, 20e-12, 75.0, 4 * 1.380649e-23 * 290.0
    from_source = four_kt * r / 4  # the divider halves the source's voltage
    at_input = four_kt * (r / 2) + e**2 + (i * r / 2) ** 2
    own = noise.own_temperature_from_noise_voltage(e, i, r, terminated=True)
    assert 1 + own / 290.0 == pytest.approx(at_input / from_source)


def test_noise_voltage_over_arrays() -> None:
    voltages = np.array([1e-9, 2e-9, 0.0])
    own = noise.own_temperature_from_noise_voltage(voltages, 0.0, 50.0, terminated=True)
    assert own.shape == (3,)
    assert own[2] == pytest.approx(290.0)


def test_galactic_noise() -> None:
    # ITU-R P.372-16 eq. 13: Fam = 52 - 23 lg(f/MHz); 29.0 dB at 10 MHz.
    assert noise.galactic_fa_db(10e6) == pytest.approx(29.0, abs=0.05)
    assert noise.temperature_to_fa(noise.galactic_temperature(50e6)) == pytest.approx(52 - 23 * math.log10(50))
    assert noise.fa_to_temperature(0.0) == 290.0
    assert math.isnan(noise.galactic_fa_db(0.0))


def test_resistor_noise() -> None:
    # Common practice: 50 ohm at room temperature is 0.9 nV/rtHz.
    assert noise.spot_noise_voltage(290.0, 50.0) * 1e9 == pytest.approx(0.895, abs=0.0005)


@pytest.mark.parametrize(
    ("name", "ratio"),
    [
        ("synchronous_1", 1.5708),  # table, recomputed in closed form
        ("synchronous_2", 1.2203),
        ("synchronous_3", 1.1554),
        ("synchronous_4", 1.1285),
        ("synchronous_5", 1.1138),
        ("butterworth_2", 1.1107),  # pi/2n / sin(pi/2n)
        ("butterworth_3", 1.0472),
        ("butterworth_4", 1.0262),
        ("gaussian", 1.0645),  # sqrt(pi/ln 2)/2
        ("gaussian_6db", 0.7527),
        ("flat", 1.0),
    ],
)
def test_noise_bandwidth(name: str, ratio: float) -> None:
    assert noise.noise_bandwidth_ratio(name) == pytest.approx(ratio, abs=5e-5)


@pytest.mark.parametrize("poles", [1, 2, 3, 4, 5, 6])
def test_noise_bandwidth_of_butterworth_by_integration(poles: int) -> None:
    b, a = signal.butter(poles, 1.0, analog=True)
    area, _ = integrate.quad(lambda w: abs(signal.freqs(b, a, [w])[1][0]) ** 2, 0, np.inf)
    assert noise.noise_bandwidth_ratio(f"butterworth_{poles}") == pytest.approx(area, rel=1e-6)


@pytest.mark.parametrize("poles", [1, 2, 4, 5])
def test_noise_bandwidth_of_equal_poles_by_integration(poles: int) -> None:
    area, _ = integrate.quad(lambda w: (1 + w * w) ** -poles, -np.inf, np.inf)
    half_power_width = 2 * math.sqrt(2 ** (1 / poles) - 1)
    assert noise.noise_bandwidth_ratio(f"synchronous_{poles}") == pytest.approx(area / half_power_width, rel=1e-8)


@pytest.mark.parametrize("name", ["", "round", "synchronous", "synchronous_0", "synchronous_x", "butterworth_-1"])
def test_an_unknown_filter_has_no_ratio(name: str) -> None:
    assert math.isnan(noise.noise_bandwidth_ratio(name))
