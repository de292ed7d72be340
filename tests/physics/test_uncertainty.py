"""Doubt against the examples of the JCGM guides, SciPy, the uncertainties library and Monte Carlo."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats
from uncertainties import ufloat

from logbook.physics import uncertainty
from logbook.physics.cascade import Stages, cascade
from logbook.physics.noise import own_temperature_from_nf


def test_divisors_by_monte_carlo() -> None:
    rng = np.random.default_rng(5)
    uniform = rng.uniform(-1, 1, 400_000)
    assert uncertainty.rectangular(1.0) == pytest.approx(np.std(uniform), rel=0.005)
    assert uncertainty.triangular(1.0) == pytest.approx(np.std((uniform + rng.permutation(uniform)) / 2), rel=0.005)
    assert uncertainty.u_shaped(1.0) == pytest.approx(np.std(np.sin(np.pi * uniform)), rel=0.005)


def test_ten_resistors() -> None:
    # JCGM 100:2008 5.2.2: u = 100 mOhm each; r = +1: 1 Ohm; r = 0: 0.32 Ohm.
    assert uncertainty.combine_correlated([0.1] * 10, 1.0) == pytest.approx(1.0)
    assert uncertainty.combine_correlated([0.1] * 10, 0.0) == pytest.approx(0.32, abs=0.005)
    shared = uncertainty.linear_sum([(1.0, {"standard": 0.1})] * 10)
    assert uncertainty.combine(shared) == pytest.approx(1.0)
    apart = uncertainty.linear_sum([(1.0, {n: 0.1}) for n in range(10)])
    assert uncertainty.combine(apart) == pytest.approx(0.32, abs=0.005)
    assert math.isnan(uncertainty.combine_correlated([1.0, 1.0], -1.5))


def test_voltmeter() -> None:
    # JCGM 100:2008 5.1.5: 12 uV and 8.7 uV: 15 uV.
    assert uncertainty.combine({"repeats": 12.0, "accuracy": 8.7}) == pytest.approx(15.0, abs=0.5)


def test_gauge_block() -> None:
    # JCGM 100:2008 H.1: 25, 9.7, 2.9, 16.6 nm: 32 nm; nu_eff 16; t99 2.92; U99 93 nm.
    u = uncertainty.combine(dict(enumerate([25.0, 9.7, 2.9, 16.6])))
    assert u == pytest.approx(32.0, abs=0.5)
    freedom = uncertainty.effective_freedom([(25.0, 18), (9.7, 25.6), (2.9, 50), (16.6, 2)])
    assert int(freedom) == 16
    k = uncertainty.coverage_factor(0.99, freedom)
    assert k == pytest.approx(2.92, abs=0.005)
    assert k * 32.0 == pytest.approx(93.0, abs=0.5)


def test_not_stated_is_neither_zero_nor_a_guess() -> None:
    assert uncertainty.combine(None) is None
    assert uncertainty.combine({}) is None
    assert uncertainty.combine({"accuracy": 0.0}) == 0.0
    assert uncertainty.difference(None, None) is None
    assert uncertainty.difference({"a": 0.3}, None) == {"a": 0.3}
    assert uncertainty.difference(None, {"a": 0.3}) == {"a": -0.3}
    assert uncertainty.conformity(1.0, None, upper=2.0) is None


def test_two_readings_that_share_an_accuracy() -> None:
    # Closed form: 0.5 dB shared, 0.10 dB fresh each: 0.141 dB; 0.721 dB if taken as independent.
    before, after = {"meter": 0.5, "before": 0.1}, {"meter": 0.5, "after": 0.1}
    parts = uncertainty.difference(after, before)
    assert uncertainty.combine(parts) == pytest.approx(0.141, abs=0.0005)
    assert parts is not None
    assert parts["meter"] == 0.0
    independent = math.hypot(uncertainty.combine(before) or 0.0, uncertainty.combine(after) or 0.0)
    assert independent == pytest.approx(0.721, abs=0.0005)


@pytest.mark.parametrize("seed", range(5))
def test_correlated_sums_against_the_uncertainties_library(seed: int) -> None:
    rng = np.random.default_rng(seed)
    names = [f"source {i}" for i in range(6)]
    errors = {name: ufloat(0.0, 1.0) for name in names}
    numbers = [{n: float(rng.normal()) for n in rng.choice(names, 3, replace=False)} for _ in range(4)]
    factors = [float(f) for f in rng.normal(size=4)]
    ours = uncertainty.linear_sum(zip(factors, numbers, strict=True))
    values = [sum(c * errors[n] for n, c in parts.items()) for parts in numbers]
    theirs = sum(f * v for f, v in zip(factors, values, strict=True))
    assert uncertainty.combine(ours) == pytest.approx(theirs.std_dev)
    gap = values[0] - values[1]
    assert uncertainty.combine(uncertainty.difference(numbers[0], numbers[1])) == pytest.approx(gap.std_dev)
    both = (values[0] + values[1]).std_dev ** 2 - gap.std_dev**2
    assert uncertainty.covariance(numbers[0], numbers[1]) == pytest.approx(both / 4, abs=1e-12)
    r = uncertainty.correlation(numbers[0], numbers[1])
    assert r == pytest.approx(both / 4 / values[0].std_dev / values[1].std_dev, abs=1e-12)


def test_no_correlation_without_doubt() -> None:
    assert math.isnan(uncertainty.correlation({"a": 1.0}, None))
    assert uncertainty.covariance({"a": 1.0}, {"b": 1.0}) == 0.0


def test_repeats_against_scipy() -> None:
    values = [41.8, 41.9, 41.7]
    mean, u = uncertainty.mean_of_repeats(values)
    assert mean == pytest.approx(41.8)
    assert u == pytest.approx(stats.sem(values))
    assert uncertainty.mean_of_repeats([3.0]) == (3.0, None)
    assert math.isnan(uncertainty.mean_of_repeats([])[0])


@pytest.mark.parametrize("value", [-3.0, -0.4, 0.0, 1.9, 5.0])
def test_conformity_against_scipy(value: float) -> None:
    law = stats.norm(value, 0.7)
    assert uncertainty.conformity(value, 0.7, upper=1.0) == pytest.approx(law.cdf(1.0), abs=1e-14)
    assert uncertainty.conformity(value, 0.7, lower=-0.5) == pytest.approx(law.sf(-0.5), abs=1e-14)
    both = uncertainty.conformity(value, 0.7, -0.5, 1.0)
    assert both == pytest.approx(law.cdf(1.0) - law.cdf(-0.5), abs=1e-14)


def test_conformity_without_doubt_is_certain() -> None:
    assert uncertainty.conformity(1.0, 0.0, upper=1.0) == 1.0
    assert uncertainty.conformity(1.1, 0.0, 0.0, 1.0) == 0.0
    assert math.isnan(uncertainty.conformity(math.nan, 0.1, upper=1.0) or 0.0)


def test_coverage_of_the_guide() -> None:
    # JCGM 100:2008 table G.1: k = 2: 95.45 %, k = 3: 99.73 %.
    assert 100 * uncertainty.coverage(2.0) == pytest.approx(95.45, abs=0.005)
    assert 100 * uncertainty.coverage(3.0) == pytest.approx(99.73, abs=0.005)


@pytest.mark.parametrize("freedom", [1, 2, 3, 4, 7, 16, 50, 333])
@pytest.mark.parametrize("probability", [0.6827, 0.95, 0.99])
def test_coverage_factor_against_scipy(freedom: int, probability: float) -> None:
    expected = stats.t.ppf(0.5 + probability / 2, freedom)
    assert uncertainty.coverage_factor(probability, freedom + 0.6) == pytest.approx(expected, rel=1e-9)


def test_coverage_factor_at_the_edges() -> None:
    assert uncertainty.coverage_factor(0.95, math.inf) == pytest.approx(stats.norm.ppf(0.975))
    assert math.isnan(uncertainty.coverage_factor(0.95, 0.5))
    assert math.isnan(uncertainty.coverage_factor(1.0, 5))
    assert uncertainty.effective_freedom([(1.0, math.inf)]) == math.inf


def test_en_number_by_hand() -> None:
    # By hand: difference 1.0, U 0.6 and 0.8: E_n = 1.
    assert uncertainty.en_number(-1.0, 0.6, 0.8) == pytest.approx(1.0)
    assert math.isnan(uncertainty.en_number(1.0, 0.0, 0.0))


def test_explanation_is_the_least_squares_solution() -> None:
    """The most likely shifts minimise sum (shift/u)^2 + (rest/u_meas)^2; solved here by numpy."""
    inputs = {"lna gain": (-0.8, 0.3), "mixer nf": (0.2, 0.5), "pad loss": (1.0, 0.1)}
    found = uncertainty.explain(1.2, inputs, 0.25)
    c = np.array([v[0] for v in inputs.values()])
    u = np.array([v[1] for v in inputs.values()])
    rows = np.vstack([np.diag(1 / u), c[np.newaxis] / 0.25])
    shifts, *_ = np.linalg.lstsq(rows, np.array([0, 0, 0, 1.2 / 0.25]), rcond=None)
    assert [e.shift for e in found.values()] == pytest.approx(list(shifts))
    assert sum(e.share for e in found.values()) == pytest.approx(1.0)
    assert found["lna gain"].share == pytest.approx(0.24**2 / (0.24**2 + 0.1**2 + 0.1**2))


def test_explanation_of_nothing() -> None:
    assert math.isnan(uncertainty.explain(1.0, {"a": (0.0, 1.0)})["a"].share)
    assert uncertainty.explain(1.0, {}) == {}


def test_where_first_order_fails() -> None:
    # JCGM 101:2008 9.4: x1^2 + x2^2 at zero, u = 0.005: Monte Carlo 50e-6, first order 0.
    rng = np.random.default_rng(9)
    x = rng.normal(0, 0.005, (2, 1_000_000))
    assert np.std((x**2).sum(axis=0)) == pytest.approx(50e-6, abs=0.5e-6)
    assert uncertainty.combine({"x1": 2 * 0.0 * 0.005, "x2": 2 * 0.0 * 0.005}) == 0.0


@pytest.mark.parametrize("seed", range(4))
def test_first_order_through_the_cascade_against_monte_carlo(seed: int) -> None:
    """Central differences of the cascade, combined, within 2 % of the spread of 200,000 drawn chains."""
    rng = np.random.default_rng(seed)
    n, trials = 4, 200_000
    gain, nf, iip3 = rng.uniform(-5, 18, n), rng.uniform(2, 9, n), rng.uniform(-5, 25, n)
    u = rng.uniform(0.1, 0.5, (3, n))

    def totals(gain_db: np.ndarray, nf_db: np.ndarray, third: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        shape = np.broadcast_shapes(gain_db.shape, nf_db.shape, third.shape)
        image, ideal = np.zeros(shape), np.full(shape, np.inf)
        done = cascade(Stages(gain_db, own_temperature_from_nf(nf_db, image), image, third, ideal, ideal))
        return done.nf_db[..., -1], done.iip3_dbm[..., -1]

    drawn = [m + s * rng.standard_normal((trials, n)) for m, s in zip((gain, nf, iip3), u, strict=True)]
    steps = np.zeros((6 * n, 3, n))
    for k, (i, j) in enumerate(np.ndindex(3, n)):
        steps[2 * k, i, j], steps[2 * k + 1, i, j] = u[i, j], -u[i, j]
    moved = totals(gain + steps[:, 0], nf + steps[:, 1], iip3 + steps[:, 2])
    for first, spread in zip(moved, totals(*drawn), strict=True):
        halves = (first[0::2] - first[1::2]) / 2
        assert uncertainty.combine(dict(enumerate(halves.tolist()))) == pytest.approx(np.std(spread), rel=0.02)
