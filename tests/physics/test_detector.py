"""Lines through detectors: the guide's thermometer, SciPy, and simulated detectors."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize, stats

from logbook.physics import detector

# JCGM 100:2008 H.3, table H.6: thermometer readings t_k (degC) and corrections b_k (degC).
THERMOMETER = np.array(
    [
        (21.521, -0.171),
        (22.012, -0.169),
        (22.512, -0.166),
        (23.003, -0.159),
        (23.507, -0.164),
        (23.999, -0.165),
        (24.513, -0.156),
        (25.002, -0.157),
        (25.503, -0.159),
        (26.010, -0.161),
        (26.511, -0.160),
    ]
)


def test_thermometer_of_the_guide() -> None:
    # JCGM 100:2008 H.3.2, t0 = 20 degC: -0.1712(29) degC, 0.00218(67), r = -0.930, s = 0.0035 degC.
    fit = detector.fit_line(THERMOMETER[:, 0], THERMOMETER[:, 1], 20.0)
    assert fit.intercept == pytest.approx(-0.1712, abs=0.00005)
    assert fit.u_intercept == pytest.approx(0.0029, abs=0.00005)
    assert fit.slope == pytest.approx(0.00218, abs=0.000005)
    assert fit.u_slope == pytest.approx(0.00067, abs=0.000005)
    assert fit.correlation == pytest.approx(-0.930, abs=0.0005)
    assert fit.scatter == pytest.approx(0.0035, abs=0.00005)
    # H.3.4: correction at 30 degC -0.1494 degC with u = 0.0041 degC.
    assert fit.intercept + 10 * fit.slope == pytest.approx(-0.1494, abs=0.00005)
    u = math.hypot(fit.u_intercept, 10 * fit.u_slope)
    u = math.sqrt(u**2 + 2 * 10 * fit.correlation * fit.u_intercept * fit.u_slope)
    assert u == pytest.approx(0.0041, abs=0.00005)


@pytest.mark.parametrize("seed", range(4))
def test_line_against_scipy(seed: int) -> None:
    rng = np.random.default_rng(seed)
    x = np.sort(rng.uniform(-70, -10, 12))
    y = 0.025 * (x + 85) + rng.normal(0, 0.01, 12)
    ours, theirs = detector.fit_line(x, y), stats.linregress(x, y)
    assert ours.slope == pytest.approx(theirs.slope)
    assert ours.intercept == pytest.approx(theirs.intercept)
    assert ours.u_slope == pytest.approx(theirs.stderr)
    assert ours.u_intercept == pytest.approx(theirs.intercept_stderr)


@pytest.mark.parametrize("seed", range(4))
def test_detector_against_scipy_curve_fit(seed: int) -> None:
    """Slope and intercept fitted as such, without the detour over a height: same values, doubts and correlation."""
    rng = np.random.default_rng(seed)
    level = np.arange(-80.0, 5.0, 5.0)
    volts = 0.0243 * (level + 87.2) + rng.normal(0, 0.005, level.size)
    fit = detector.fit_detector(level, volts, (-70.0, -10.0))
    inside = (level >= -70) & (level <= -10)
    found, covariance = optimize.curve_fit(lambda x, s, i: s * (x - i), level[inside], volts[inside], (0.02, -80.0))
    assert fit.points == 13
    assert fit.slope == pytest.approx(found[0], rel=1e-5)
    assert fit.intercept_dbm == pytest.approx(found[1], rel=1e-5)
    assert fit.u_slope == pytest.approx(math.sqrt(covariance[0, 0]), rel=1e-3)
    assert fit.u_intercept_db == pytest.approx(math.sqrt(covariance[1, 1]), rel=1e-3)
    r = covariance[0, 1] / math.sqrt(covariance[0, 0] * covariance[1, 1])
    assert fit.correlation == pytest.approx(r, rel=1e-3)


def test_step_attenuator_on_a_display() -> None:
    # Common practice: 10 dB steps on a 10 dB/division display are one division each.
    level = np.arange(-70.0, 1.0, 10.0)
    divisions = np.arange(0.0, 8.0)
    fit = detector.fit_detector(level, divisions)
    assert fit.slope == pytest.approx(0.1)
    assert fit.intercept_dbm == pytest.approx(-70.0)
    assert detector.step_errors(fit, level, divisions) == pytest.approx(np.zeros(7), abs=1e-9)


def test_a_falling_detector_works_too() -> None:
    level = np.array([-60.0, -40.0, -20.0])
    fit = detector.fit_detector(level, -0.02 * level + 0.5)
    assert fit.slope == pytest.approx(-0.02)
    assert detector.level_from_output(fit, 0.9).level_dbm == pytest.approx(-20.0)


def test_errors_of_a_detector_that_saturates() -> None:
    level = np.arange(-90.0, 11.0, 10.0)
    volts = 0.025 * (level + 90.0)
    volts[0] += 0.05  # 2 dB high in its own noise
    volts[-1] -= 0.1  # 4 dB low in saturation
    fit = detector.fit_detector(level, volts, (-80.0, 0.0))
    errors = detector.conformance_errors(fit, level, volts)
    assert errors == pytest.approx([2.0] + [0.0] * 9 + [-4.0], abs=1e-9)
    assert detector.step_errors(fit, level, volts) == pytest.approx([-2.0] + [0.0] * 8 + [-4.0], abs=1e-9)
    # Interpolated: half the way down to -90 dBm, a quarter of the way up to +10 dBm.
    assert detector.range_within(level, errors, 1.0, (-80.0, 0.0)) == pytest.approx((-85.0, 2.5))
    assert detector.range_within(level, errors, 3.0) == pytest.approx((-90.0, 7.5))
    assert detector.range_within(level, errors, 5.0) == pytest.approx((-90.0, 10.0))


def test_range_is_one_piece_about_the_fit_window() -> None:
    level = np.arange(8.0)
    errors = np.array([0.0, 0.0, 0.0, 2.0, 0.0, 0.0, math.nan, 0.0])
    assert detector.range_within(level, errors, 1.0, (4.0, 5.0)) == pytest.approx((3.5, 5.0))
    assert detector.range_within(level[::-1], errors[::-1], 1.0, (0.0, 1.0)) == pytest.approx((0.0, 2.5))
    assert all(math.isnan(end) for end in detector.range_within(level, errors + 9.0, 1.0))


def test_level_and_its_doubt_by_monte_carlo() -> None:
    """Many calibrations of one detector read at the same output: spread of the level against the line's doubt."""
    rng = np.random.default_rng(2)
    level, scatter, output = np.arange(-70.0, -9.0, 5.0), 0.008, 1.9
    true = 0.024 * (level + 88.0)
    found = []
    for _ in range(4000):
        fit = detector.fit_detector(level, true + rng.normal(0, scatter, level.size))
        found.append(detector.level_from_output(fit, output).level_dbm)
    trend = detector.fit_line(level, true)
    ideal = detector.fit_detector(level, true + scatter * np.resize([1.0, -1.0], level.size))
    ratio = scatter / ideal.scatter
    said = detector.level_from_output(ideal, output, 0.024)
    assert trend.slope == pytest.approx(0.024)
    assert said.u_line_db * ratio == pytest.approx(np.std(found), rel=0.05)
    assert said.u_output_db == pytest.approx(1.0, rel=0.01)
    assert said.u_scatter_db == pytest.approx(ideal.scatter / abs(ideal.slope))
    assert detector.level_from_output(ideal, output).u_output_db is None


def test_a_perfect_line_has_no_doubt_of_its_own() -> None:
    exact = detector.DetectorFit(0.02, -80.0, 0.0, 0.0, math.nan, 0.0, 5)
    assert detector.level_from_output(exact, 1.0) == (-30.0, 0.0, 0.0, None)


@pytest.mark.parametrize("level", [[], [-10.0], [-10.0, -10.0]])
def test_no_line_through_one_point(level: list[float]) -> None:
    fit = detector.fit_detector(np.array(level), np.ones(len(level)))
    assert math.isnan(fit.slope)
    assert math.isnan(fit.intercept_dbm)
    assert fit.points == len(level)


def test_two_points_make_a_line_of_unknown_doubt() -> None:
    fit = detector.fit_detector(np.array([-40.0, -20.0]), np.array([1.0, 1.5]))
    assert fit.slope == pytest.approx(0.025)
    assert math.isnan(fit.u_slope)


def test_an_output_that_does_not_move_gives_no_intercept() -> None:
    assert math.isnan(detector.fit_detector(np.array([-40.0, -30.0, -20.0]), np.ones(3)).intercept_dbm)
