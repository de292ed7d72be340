"""Noise ahead of and after a gain control: SciPy's fit, exact data and Monte Carlo."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize

from logbook.physics import noise_split


def readings(settings: np.ndarray, ahead_dbm: float, after_dbm: float) -> np.ndarray:
    return 10 * np.log10(10 ** ((ahead_dbm + settings) / 10) + 10 ** (after_dbm / 10))


def test_exact_data_come_back() -> None:
    settings = np.array([0.0, 10.0, 20.0, 30.0])
    split = noise_split.split_noise(settings, readings(settings, -110.0, -95.0), np.full(4, 0.1))
    assert noise_split.noise_ahead_dbm(split) == pytest.approx(-110.0)
    assert noise_split.noise_ahead_dbm(split, 20.0) == pytest.approx(-90.0)
    assert noise_split.noise_after_dbm(split) == pytest.approx(-95.0)
    assert noise_split.equal_setting(split)[0] == pytest.approx(15.0)
    assert split.chi_square == pytest.approx(0.0, abs=1e-9)
    assert split.freedom == 2
    assert noise_split.told_apart(split)


@pytest.mark.parametrize("seed", range(5))
def test_against_scipy_least_squares(seed: int) -> None:
    rng = np.random.default_rng(seed)
    settings = np.linspace(-5, 25, 7)
    u_db = rng.uniform(0.05, 0.3, 7)
    shown = readings(settings, -100.0, -92.0) + u_db * rng.standard_normal(7)
    split = noise_split.split_noise(settings, shown, u_db)
    # In units of -100 dBm, so that the numbers SciPy steps through are near one.
    gain, power = 10 ** (settings / 10), 10 ** ((shown + 100) / 10)
    sigma = u_db * math.log(10) / 10 * (split.ahead_w * gain + split.after_w) * 1e13
    found, covariance = optimize.curve_fit(
        lambda g, a, b: a * g + b, gain, power, (1.0, 5.0), sigma=sigma, absolute_sigma=True
    )
    assert split.ahead_w * 1e13 == pytest.approx(found[0], rel=1e-5)
    assert split.after_w * 1e13 == pytest.approx(found[1], rel=1e-5)
    assert split.u_ahead_w * 1e13 == pytest.approx(math.sqrt(covariance[0, 0]), rel=1e-4)
    assert split.u_after_w * 1e13 == pytest.approx(math.sqrt(covariance[1, 1]), rel=1e-4)
    assert split.covariance_w2 * 1e26 == pytest.approx(covariance[0, 1], rel=1e-4)


def test_doubt_by_monte_carlo() -> None:
    rng = np.random.default_rng(4)
    settings = np.array([0.0, 6.0, 12.0, 18.0, 24.0])
    true, u_db = readings(settings, -108.0, -96.0), np.full(5, 0.15)
    drawn = [noise_split.split_noise(settings, true + u_db * rng.standard_normal(5), u_db) for _ in range(1500)]
    said = noise_split.split_noise(settings, true, u_db)
    u_ahead, u_after = noise_split.part_uncertainties_db(said)
    assert u_ahead == pytest.approx(np.std([noise_split.noise_ahead_dbm(s) for s in drawn]), rel=0.08)
    assert u_after == pytest.approx(np.std([noise_split.noise_after_dbm(s) for s in drawn]), rel=0.08)
    equal = [noise_split.equal_setting(s)[0] for s in drawn]
    assert noise_split.equal_setting(said)[1] == pytest.approx(np.std(equal), rel=0.08)
    assert np.mean([s.chi_square for s in drawn]) == pytest.approx(3.0, rel=0.1)


def test_unstated_doubt_is_judged_by_the_scatter() -> None:
    settings = np.array([0.0, 10.0, 20.0, 30.0])
    shown = readings(settings, -110.0, -95.0) + np.array([0.1, -0.1, 0.1, -0.1])
    stated = noise_split.split_noise(settings, shown, np.full(4, 0.1))
    unstated = noise_split.split_noise(settings, shown)
    assert unstated.ahead_w == pytest.approx(stated.ahead_w)
    assert unstated.u_ahead_w == pytest.approx(stated.u_ahead_w * math.sqrt(stated.chi_square / 2))
    assert math.isnan(unstated.chi_square)


def test_two_points_without_doubt_tell_nothing_apart() -> None:
    settings = np.array([0.0, 20.0])
    split = noise_split.split_noise(settings, readings(settings, -110.0, -95.0))
    assert noise_split.noise_after_dbm(split) == pytest.approx(-95.0)
    assert math.isnan(split.u_after_w)
    assert not noise_split.told_apart(split)


def test_noise_from_ahead_only_cannot_be_told_from_a_little_after() -> None:
    settings = np.array([0.0, 10.0, 20.0])
    shown = readings(settings, -100.0, -180.0) + np.array([-0.05, 0.1, -0.05])
    split = noise_split.split_noise(settings, shown, np.full(3, 0.2))
    assert not noise_split.told_apart(split)
    assert split.after_w < 0.0
    assert math.isnan(noise_split.noise_after_dbm(split))
    assert all(math.isnan(x) for x in noise_split.equal_setting(split))
    assert math.isnan(noise_split.part_uncertainties_db(split)[1])


@pytest.mark.parametrize("settings", [[], [3.0], [3.0, 3.0, 3.0]])
def test_one_setting_tells_nothing(settings: list[float]) -> None:
    split = noise_split.split_noise(np.array(settings), np.full(len(settings), -90.0))
    assert math.isnan(split.ahead_w)
    assert not noise_split.told_apart(split)


def test_a_doubt_of_zero_is_no_weight() -> None:
    settings = np.array([0.0, 10.0, 20.0])
    split = noise_split.split_noise(settings, readings(settings, -110.0, -95.0), np.array([0.1, 0.0, 0.1]))
    assert math.isnan(split.ahead_w)
