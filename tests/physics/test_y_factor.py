"""Noise figure from hot and cold, by closed form, finite differences and Monte Carlo."""

from __future__ import annotations

import math

import numpy as np
import pytest

from logbook.physics import y_factor


def test_hot_temperature() -> None:
    # Closed form, T0 (1 + ENR): 1207 K for 5 dB; 9461 K for 15 dB (a printed 9171 K leaves the cold out).
    assert y_factor.hot_temperature(5.0) == pytest.approx(1207.0, abs=0.5)
    assert y_factor.hot_temperature(15.0) == pytest.approx(9461.0, abs=0.5)


@pytest.mark.parametrize(("cold", "nf"), [(290.0, 5.458), (296.15, 5.428)])
def test_noise_figure(cold: float, nf: float) -> None:
    # Closed form: ENR 15 dB, Y 10 dB.
    assert y_factor.noise_figure(15.0, 10.0, cold).nf_db == pytest.approx(nf, abs=0.0005)


def test_second_stage() -> None:
    # Closed form: NF 10 dB behind NF 3 dB, G 20 dB: 3.19 dB.
    total = y_factor.with_second_stage(3.0, 10.0, 20.0)
    assert total == pytest.approx(3.19, abs=0.005)
    assert y_factor.without_second_stage(total, 10.0, 20.0).nf_db == pytest.approx(3.0)


def test_hot_and_cold_powers_of_a_known_unit() -> None:
    """k (Th + Te) over k (Tc + Te) written out for Te = 120 K."""
    hot, cold = y_factor.hot_temperature(6.0), 300.0
    y_db = 10 * math.log10((hot + 120.0) / (cold + 120.0))
    found = y_factor.noise_figure(6.0, y_db, cold)
    assert found.temperature_k == pytest.approx(120.0)
    assert found.nf_db == pytest.approx(10 * math.log10(1 + 120.0 / 290.0))


@pytest.mark.parametrize(("enr", "y", "cold"), [(15.0, 10.0, 296.15), (5.2, 3.0, 77.0), (14.7, 1.2, 300.0)])
def test_sensitivities_against_finite_differences(enr: float, y: float, cold: float) -> None:
    found, h = y_factor.noise_figure(enr, y, cold), 1e-4

    def slope(*step: float) -> float:
        up = y_factor.noise_figure(enr + step[0], y + step[1], cold + step[2]).nf_db
        down = y_factor.noise_figure(enr - step[0], y - step[1], cold - step[2]).nf_db
        return (up - down) / (2 * h)

    assert found.per_enr == pytest.approx(slope(h, 0, 0), rel=1e-5)
    assert found.per_y == pytest.approx(slope(0, h, 0), rel=1e-5)
    assert found.per_cold == pytest.approx(slope(0, 0, h), rel=1e-5)


def test_sensitivities_of_the_second_stage_against_finite_differences() -> None:
    total, second, gain, h = 4.0, 9.0, 12.0, 1e-4
    found = y_factor.without_second_stage(total, second, gain)
    steps = np.eye(3) * h
    slopes = [
        (
            y_factor.without_second_stage(total + s[0], second + s[1], gain + s[2]).nf_db
            - y_factor.without_second_stage(total - s[0], second - s[1], gain - s[2]).nf_db
        )
        / (2 * h)
        for s in steps
    ]
    assert [found.per_total, found.per_second, found.per_gain] == pytest.approx(slopes, rel=1e-6)


def test_doubt_by_monte_carlo() -> None:
    rng = np.random.default_rng(1)
    found = y_factor.noise_figure(14.8, 9.0, 295.0)
    u = math.sqrt((found.per_enr * 0.15) ** 2 + (found.per_y * 0.05) ** 2 + (found.per_cold * 2.0) ** 2)
    draws = zip(rng.normal(14.8, 0.15, 5000), rng.normal(9.0, 0.05, 5000), rng.normal(295, 2, 5000), strict=True)
    spread = np.std([y_factor.noise_figure(*draw).nf_db for draw in draws])
    assert u == pytest.approx(spread, rel=0.03)


def test_what_cannot_be_is_nan() -> None:
    assert all(math.isnan(part) for part in y_factor.noise_figure(15.0, 0.0))
    assert all(math.isnan(part) for part in y_factor.noise_figure(0.0, 10.0, 2000.0))
    assert all(math.isnan(part) for part in y_factor.without_second_stage(1.0, 15.0, 3.0))
