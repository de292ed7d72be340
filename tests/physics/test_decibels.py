"""Decibels: printed values, and that there is no dB of nothing."""

from __future__ import annotations

import math
import warnings

import numpy as np
import pytest

from logbook.physics import constants, decibels


def test_thermal_noise_of_the_convention() -> None:
    # SI 2019 and IEEE convention: k T0 = -173.98 dBm/Hz, not -174.
    assert round(constants.KT0_DBM_HZ, 2) == -173.98
    assert decibels.dbm_from_watt(constants.BOLTZMANN * constants.T0) == pytest.approx(constants.KT0_DBM_HZ, abs=1e-12)


@pytest.mark.parametrize(
    ("function", "given", "printed"),
    [
        (decibels.dbm_from_watt, 1.0, 30.0),  # common practice
        (decibels.db_from_ratio, 2.0, 3.0103),  # closed form
        (decibels.db_from_amplitude, 10.0, 20.0),  # closed form
        (decibels.kelvin_from_celsius, 40.0, 313.15),  # SI
    ],
)
def test_printed_values(function: object, given: float, printed: float) -> None:
    assert callable(function)
    assert function(given) == pytest.approx(printed, abs=5e-5)


def test_a_watt_behind_a_tap_of_40_db() -> None:
    # Common practice: 1 W is +30 dBm, and -10 dBm behind a 40 dB tap.
    assert decibels.dbm_from_watt(1.0) - 40.0 == -10.0


def test_signal_of_the_textbook_in_volts() -> None:
    # Pozar, Microwave Engineering 4th ed., Ex. 10.2: -82.8 dBm is 16.2 uV at 50 ohm.
    assert decibels.volt_from_dbm(-82.8, 50.0) * 1e6 == pytest.approx(16.2, abs=0.05)


def test_microvolts_at_fifty_ohm() -> None:
    # Common practice: 0 dBuV at 50 ohm is -107 dBm (-106.99).
    assert decibels.dbm_from_dbuv(0.0, 50.0) == pytest.approx(-106.99, abs=0.005)
    assert decibels.dbm_from_volt(1e-6, 50.0) == pytest.approx(-106.99, abs=0.005)


@pytest.mark.parametrize("bad", [0.0, -1.0, float("nan"), -math.inf])
def test_there_is_no_db_of_nothing(bad: float) -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        assert math.isnan(decibels.db_from_ratio(bad))
        assert math.isnan(decibels.dbm_from_watt(bad))
        assert math.isnan(decibels.dbm_from_volt(bad, 50.0))
        assert np.isnan(decibels.db_from_ratio(np.array([1.0, bad]))).tolist() == [False, True]


def test_there_and_back_on_arrays() -> None:
    levels = np.linspace(-200.0, 60.0, 27)
    assert decibels.dbm_from_watt(decibels.watt_from_dbm(levels)) == pytest.approx(levels)
    assert decibels.dbm_from_volt(decibels.volt_from_dbm(levels, 75.0), 75.0) == pytest.approx(levels)
    assert decibels.db_from_amplitude(decibels.amplitude_from_db(levels)) == pytest.approx(levels)
    assert decibels.celsius_from_kelvin(decibels.kelvin_from_celsius(levels)) == pytest.approx(levels)


def test_huge_values_run_to_infinity_in_silence() -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        assert decibels.ratio_from_db(1e5) == math.inf
        assert decibels.ratio_from_db(-1e5) == 0.0
        assert decibels.db_from_ratio(math.inf) == math.inf


def test_powers_add() -> None:
    # Closed form: two equal powers are 3.01 dB more.
    assert decibels.sum_powers_db(np.array([-10.0, -10.0])) == pytest.approx(-6.9897, abs=5e-5)
    assert math.isnan(decibels.sum_powers_db(np.array([])))


def test_relative_uncertainty_against_a_finite_difference() -> None:
    step = 1e-6
    slope = (decibels.db_from_ratio(1.0 + step) - decibels.db_from_ratio(1.0 - step)) / (2 * step)
    assert decibels.u_db_from_relative(1.0) == pytest.approx(slope, rel=1e-9)
    assert decibels.relative_from_u_db(decibels.u_db_from_relative(0.2)) == pytest.approx(0.2)
