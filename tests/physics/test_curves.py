"""Curves read off filters whose numbers are known: SciPy's responses, closed forms, printed values."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt
import pytest
from scipy import integrate, interpolate, signal

from logbook.physics import curves

Array = npt.NDArray[np.float64]

HALF_POWER_DB = 10 * math.log10(2)
HALF_VOLTAGE_DB = 20 * math.log10(2)
F1, F2 = 10.693e6, 10.708e6
DESIGNS = {
    "butterworth": [lambda n=n: signal.butter(n, [F1, F2], "bandpass", analog=True, output="zpk") for n in (2, 4, 5)],
    "bessel": [
        lambda n=n: signal.bessel(n, [F1, F2], "bandpass", analog=True, output="zpk", norm="mag") for n in (2, 4)
    ],
}


def swept(zpk: tuple[Array, Array, float], low: float, high: float, points: int) -> tuple[Array, Array]:
    """A synthetic sweep: |H| in dB over f. The designs are in Hz where SciPy has rad/s."""
    f = np.linspace(low, high, points)
    _, h = signal.freqs_zpk(*zpk, worN=f)
    return f, 20 * np.log10(np.abs(h))


@pytest.mark.parametrize(("design", "n"), [(name, k) for name, designs in DESIGNS.items() for k in range(len(designs))])
@pytest.mark.parametrize("points", [201, 1001, 10001])
def test_bandwidth_of_filters_within_a_tenth_of_the_spacing(design: str, n: int, points: int) -> None:
    f, y = swept(DESIGNS[design][n](), 10.65e6, 10.75e6, points)
    spacing = f[1] - f[0]
    edges = curves.edges_below_peak(f, y, np.array([HALF_POWER_DB]))
    assert edges.lower[0] == pytest.approx(F1, abs=spacing / 10)
    assert edges.upper[0] == pytest.approx(F2, abs=spacing / 10)
    assert curves.bandwidth(edges)[0] == pytest.approx(F2 - F1, abs=spacing / 10)
    # The low-pass to band-pass transformation puts the centre at sqrt(f1 f2).
    assert curves.geometric_centre(edges)[0] == pytest.approx(math.sqrt(F1 * F2), abs=spacing / 10)
    assert curves.arithmetic_centre(edges)[0] == pytest.approx((F1 + F2) / 2, abs=spacing / 10)


@pytest.mark.parametrize("n", [2, 3, 4, 5, 6])
@pytest.mark.parametrize("ripple_db", [0.5, 1.0, 2.0])
def test_chebyshev(n: int, ripple_db: float) -> None:
    """The edges of a Chebyshev band-pass are where it leaves its ripple; inside the ripple is what it was made with."""
    zpk = signal.cheby1(n, ripple_db, [F1, F2], "bandpass", analog=True, output="zpk")
    f, y = swept(zpk, 10.65e6, 10.75e6, 2001)
    spacing = f[1] - f[0]
    edges = curves.edges_below_peak(f, y, np.array([3.0]))
    dense_f, dense_y = swept(zpk, 10.68e6, 10.72e6, 800001)
    inside = dense_f[dense_y >= dense_y.max() - 3.0]
    assert curves.bandwidth(edges)[0] == pytest.approx(inside[-1] - inside[0], abs=spacing / 10)
    assert curves.passband_ripple(f, y, 3.0) == pytest.approx(ripple_db, abs=0.02)
    assert curves.flatness(f, y, F1, F2) == pytest.approx(ripple_db, abs=0.02)
    assert curves.find_peak(f, y).y == pytest.approx(0.0, abs=0.002)


def test_ripple_needs_two_maxima() -> None:
    f, y = swept(DESIGNS["butterworth"][1](), 10.65e6, 10.75e6, 2001)
    assert curves.passband_ripple(f, y, 3.0) == 0.0
    noisy = y + np.random.default_rng(1).normal(0.0, 0.01, len(y))
    assert curves.passband_ripple(f, noisy, 3.0) == 0.0
    assert math.isnan(curves.passband_ripple(f[:1100], y[:1100], 3.0))


@pytest.mark.parametrize(
    ("poles", "narrow_db", "printed", "digit"),
    [
        # Closed form: sqrt((10^(60/10n) - 1)/(10^(narrow/10n) - 1)), 3 dB being half power and 6 dB half voltage.
        (4, HALF_POWER_DB, 12.7, 0.1),
        (5, HALF_POWER_DB, 9.99, 0.01),
        (4, HALF_VOLTAGE_DB, 8.60, 0.01),
    ],
)
def test_shape_of_synchronous_poles(poles: int, narrow_db: float, printed: float, digit: float) -> None:
    x = np.linspace(-40.0, 40.0, 20001)
    y = -10.0 * poles * np.log10(1.0 + x * x)
    edges = curves.edges_below_peak(x, y, np.array([narrow_db, 60.0]))
    narrow, wide = curves.bandwidth(edges)
    exact = math.sqrt((10 ** (60.0 / 10 / poles) - 1) / (10 ** (narrow_db / 10 / poles) - 1))
    assert curves.shape_factor(wide, narrow) == pytest.approx(exact, rel=1e-4)
    assert curves.shape_factor(wide, narrow) == pytest.approx(printed, abs=0.5 * digit)


@pytest.mark.parametrize(("narrow_db", "printed"), [(HALF_POWER_DB, 4.46), (HALF_VOLTAGE_DB, 3.16)])
def test_shape_of_a_gaussian(narrow_db: float, printed: float) -> None:
    # Closed form: sqrt(60/3.01), sqrt(60/6.02).
    x = np.linspace(-10.0, 10.0, 20001)
    narrow, wide = curves.bandwidth(curves.edges_below_peak(x, -x * x, np.array([narrow_db, 60.0])))
    assert curves.shape_factor(wide, narrow) == pytest.approx(printed, abs=0.005)


def test_parabola() -> None:
    # Smith, Spectral Audio Signal Processing, eq. 6.29: through -3, -1, -2.
    peak = curves.find_peak(np.array([9.0, 10.0, 11.0]), np.array([-3.0, -1.0, -2.0]))
    assert peak.x - 10.0 == pytest.approx(0.1667, abs=5e-5)
    assert peak.y == pytest.approx(-0.9583, abs=5e-5)
    assert not peak.at_edge


def test_parabola_with_uneven_steps() -> None:
    """Against SciPy's barycentric interpolation through the same three points."""
    rng = np.random.default_rng(3)
    for _ in range(50):
        x = 1e9 + np.cumsum(rng.uniform(1.0, 9.0, 3))
        y = np.array([-rng.uniform(0.1, 3.0), 0.0, -rng.uniform(0.1, 3.0)])
        peak = curves.find_peak(x, y)
        through = interpolate.BarycentricInterpolator(x - x[1], y)
        dense = np.linspace(x[0] - x[1], x[2] - x[1], 20001)
        values = through(dense)
        assert peak.y == pytest.approx(values.max(), abs=1e-6)
        assert peak.x - x[1] == pytest.approx(dense[values.argmax()], abs=2 * (dense[1] - dense[0]))


def test_peak_at_an_edge_flat_or_missing() -> None:
    x = np.arange(5.0)
    assert curves.find_peak(x, np.array([0.0, -1, -2, -3, -4])) == (0.0, 0.0, True)
    assert curves.find_peak(x, np.array([-4.0, -3, -2, -1, 0])) == (4.0, 0.0, True)
    assert curves.find_peak(x, np.array([-4.0, 1, 1, 1, 0])) == (2.0, 1.0, False)
    assert curves.find_peak(x, np.array([1.0, 1, 1, -4, 0])) == (1.0, 1.0, True)
    assert curves.find_peak(x, np.array([-4.0, -3, 1, 1, 1])) == (3.0, 1.0, True)
    # Two equal samples, falling alike on both sides: the top is half-way, by symmetry.
    assert curves.find_peak(x, np.array([-9.0, -1, 0, 0, -1])).x == pytest.approx(2.5)
    assert curves.find_peak(x, np.array([-4.0, np.nan, 1, np.nan, 0])) == (2.0, 1.0, False)
    for nothing in (np.full(5, np.nan), np.array([])):
        assert all(map(math.isnan, curves.find_peak(x[: len(nothing)], nothing)[:2]))


def test_crossings_are_the_nearest_to_the_peak() -> None:
    x = np.arange(9.0)
    y = np.array([-9.0, -1.0, -9.0, -2.0, 0.0, -4.0, -1.0, -1.0, -1.0])
    edges = curves.edges_at(x, y, np.array([-3.0, -4.0, -8.0, -10.0, 0.0, 1.0]))
    # By hand: between 3 (-2) and 2 (-9), between 4 (0) and 5 (-4); -4 is met at 5 itself; -8 on the right never.
    np.testing.assert_allclose(edges.lower, [3 - 1 / 7, 3 - 2 / 7, 3 - 6 / 7, np.nan, np.nan, np.nan])
    np.testing.assert_allclose(edges.upper, [4.75, 5.0, np.nan, np.nan, np.nan, np.nan])
    broken = curves.edges_at(x, np.where(x == 3.0, np.nan, y), np.array([-3.0]))
    assert math.isnan(broken.lower[0])
    assert broken.upper[0] == 4.75
    assert math.isnan(curves.bandwidth(broken)[0])
    assert math.isnan(curves.edges_at(x, np.full(9, np.nan), np.array([-3.0])).upper[0])


def test_what_is_not_defined() -> None:
    edges = curves.Edges(np.array([-1.0, 4.0]), np.array([1.0, 9.0]))
    assert math.isnan(curves.geometric_centre(edges)[0])
    assert curves.geometric_centre(edges)[1] == pytest.approx(6.0)
    assert math.isnan(curves.shape_factor(1.0, 0.0))


def test_skirt_balance_of_unequal_skirts() -> None:
    """A flat top of 2 kHz, then 1 dB/kHz down on the left and 2 dB/kHz on the right: half-widths follow by hand."""
    x = np.linspace(-100e3, 50e3, 3001)
    y = np.minimum(0.0, np.minimum((x + 1e3) / 1e3, -2 * (x - 1e3) / 1e3))
    edges = curves.edges_below_peak(x, y, np.array([3.0, 20.0]))
    centre = float(curves.arithmetic_centre(edges)[0])
    assert centre == pytest.approx(-750.0)
    np.testing.assert_allclose(curves.skirt_balance(edges, centre), [0.0, (11e3 + 750.0) - (21e3 - 750.0)], atol=1e-3)


def test_skirt_balance_is_no_artefact_of_ripple() -> None:
    """A Chebyshev shape that is symmetric but for a hundredth of a dB which decides where its peak is."""
    x = np.linspace(-5.0, 5.0, 5001)
    _, h = signal.freqs_zpk(*signal.cheby1(4, 1.0, 1.0, analog=True, output="zpk"), worN=np.abs(x))
    y = 20 * np.log10(np.abs(h)) + 0.005 * x
    edges = curves.edges_below_peak(x, y, np.array([3.0, 40.0]))
    about_centre = curves.skirt_balance(edges, float(curves.arithmetic_centre(edges)[0]))
    about_peak = curves.skirt_balance(edges, curves.find_peak(x, y).x)
    assert abs(about_centre[1]) < 0.005
    assert abs(about_peak[1]) > 0.5


def test_values_between_samples() -> None:
    x = np.array([1.0, 2.0, 4.0, 5.0])
    y = np.array([-10.0, -20.0, np.nan, -40.0])
    at = np.array([0.9, 1.0, 1.25, 2.0, 3.0, 5.0, 5.1])
    np.testing.assert_allclose(curves.value_at(x, y, at), [np.nan, -10.0, -12.5, -20.0, np.nan, -40.0, np.nan])
    assert curves.value_at(x, y, 1.5) == -15.0
    assert math.isnan(curves.value_at(np.array([]), np.array([]), 1.0))


def test_reference_is_subtracted_where_it_is_known() -> None:
    x = np.array([0.0, 1.0, 2.0, 3.0])
    loss = curves.less_reference(x, np.array([-4.0, -4.0, -4.0, -4.0]), np.array([0.5, 2.5]), np.array([-1.0, -3.0]))
    np.testing.assert_allclose(loss, [np.nan, -2.5, -1.5, np.nan])


def test_flatness_counts_the_ends_of_the_band() -> None:
    x = np.array([0.0, 1.0, 2.0])
    y = np.array([0.0, -1.0, 3.0])
    assert curves.flatness(x, y, 0.5, 1.5) == pytest.approx(2.0)  # by hand: -0.5, -1, +1
    assert curves.flatness(x, y, 0.2, 0.4) == pytest.approx(0.2)
    for low, high in ((-0.1, 1.0), (1.0, 2.1), (1.0, 1.0), (2.0, 1.0)):
        assert math.isnan(curves.flatness(x, y, low, high))
    assert math.isnan(curves.flatness(x, np.array([0.0, np.nan, 1.0]), 0.0, 2.0))


@pytest.mark.parametrize(("points", "excursion_db"), [(60, 0.5), (2000, 2.0), (20000, 6.0)])
def test_maxima_as_scipy_finds_them(points: int, excursion_db: float) -> None:
    rng = np.random.default_rng(points)
    for _ in range(5):
        y = rng.normal(0.0, 1.0, points).cumsum() + rng.normal(0.0, 3.0, points)
        expected = signal.find_peaks(y, prominence=excursion_db)[0]
        np.testing.assert_array_equal(curves.maxima(y, excursion_db), expected)


def test_maxima_of_rounded_values_as_scipy_finds_them() -> None:
    """With ties SciPy counts both of two equal tops however shallow the dip between them; here the first stands."""
    rng = np.random.default_rng(7)
    for _ in range(200):
        y = np.round(rng.normal(0.0, 2.0, 40))
        ours = curves.maxima(y, 3.0)
        theirs = signal.find_peaks(y, prominence=3.0)[0]
        assert set(ours) <= set(theirs)
        for index in set(theirs) - set(ours):
            twin = max(k for k in ours if k < index)
            assert y[twin] == y[index]
            assert y[twin : index + 1].min() > y[index] - 3.0


def test_maxima_at_plateaus_edges_and_gaps() -> None:
    assert curves.maxima(np.array([0.0, 2, 2, 2, 0]), 1.0).tolist() == [2]
    assert curves.maxima(np.array([3.0, 0, 1, 0, 3]), 1.0).tolist() == [2]
    assert curves.maxima(np.array([0.0, 5, np.nan, 5, 0]), 1.0).tolist() == [1, 3]
    for nothing in ([], [1.0], [np.nan, np.nan], [1.0, 1.0, 1.0], [1.0, 2.0, 3.0]):
        assert curves.maxima(np.array(nothing), 1.0).tolist() == []


def test_noise_bandwidth_of_a_filter_by_its_samples() -> None:
    """Noise bandwidth over 3 dB bandwidth of 4 synchronous poles: 1.1285 in the tables."""
    x = np.linspace(-60.0, 60.0, 60001)
    y = -40.0 * np.log10(1.0 + x * x)
    area = integrate.trapezoid(10 ** (y / 10), x)
    width = curves.bandwidth(curves.edges_below_peak(x, y, np.array([HALF_POWER_DB])))[0]
    assert area / width == pytest.approx(1.1285, abs=5e-5)
