"""Reflection and mismatch, against printed tables, scikit-rf and a simulated mismatch."""

from __future__ import annotations

import math

import numpy as np
import pytest
import skrf

from logbook.physics import match


@pytest.mark.parametrize(
    ("vswr", "return_loss"),
    [(1.5, 13.98), (1.3, 17.69), (1.8, 10.88)],  # closed form; tables with 17.8 and 10.2 do not reproduce
)
def test_return_loss(vswr: float, return_loss: float) -> None:
    rho = match.reflection_from_vswr(vswr)
    assert match.return_loss_from_reflection(rho) == pytest.approx(return_loss, abs=0.005)
    assert match.vswr_from_reflection(match.reflection_from_return_loss(return_loss)) == pytest.approx(vswr, abs=0.005)


def test_mismatch_loss() -> None:
    # Closed form: 0.512 dB at VSWR 2.
    assert match.mismatch_loss(match.reflection_from_vswr(2.0)) == pytest.approx(0.512, abs=0.0005)
    assert math.isnan(match.mismatch_loss(1.0))


def test_mismatch_limits() -> None:
    # Closed form: VSWR 1.2 and 1.4: +0.131 / -0.133 dB.
    low, high = match.mismatch_limits(match.reflection_from_vswr(1.2), match.reflection_from_vswr(1.4))
    assert high == pytest.approx(0.131, abs=0.0005)
    assert low == pytest.approx(-0.133, abs=0.0005)


def test_mismatch_uncertainty_by_monte_carlo() -> None:
    rng = np.random.default_rng(3)
    a, b = 0.2, 0.15
    error = 20 * np.log10(np.abs(1 - a * b * np.exp(2j * np.pi * rng.random(200_000))))
    assert match.mismatch_uncertainty(a, b) == pytest.approx(np.std(error), rel=0.01)


def test_minimum_loss_pad() -> None:
    # Closed form and table of pads: 75/50 ohm: 5.72 dB, 43.3 ohm, 86.6 ohm.
    for pad in (match.minimum_loss_pad(75.0, 50.0), match.minimum_loss_pad(50.0, 75.0)):
        assert pad.loss_db == pytest.approx(5.72, abs=0.005)
        assert pad.series_ohm == pytest.approx(43.3, abs=0.05)
        assert pad.shunt_ohm == pytest.approx(86.6, abs=0.05)
    assert match.minimum_loss_pad(50.0, 50.0) == (0.0, 0.0, math.inf)
    assert all(math.isnan(part) for part in match.minimum_loss_pad(50.0, 0.0))


@pytest.mark.parametrize("high", [60.0, 75.0, 300.0])
def test_minimum_loss_pad_against_scikit_rf(high: float) -> None:
    """Built of a series and a shunt resistor between its two impedances: matched both ways, with the loss said."""
    pad = match.minimum_loss_pad(high, 50.0)
    frequency = skrf.Frequency(50, 50, 1, unit="MHz")
    line = skrf.media.DefinedGammaZ0(frequency, z0=50.0)
    built = line.resistor(pad.series_ohm) ** line.shunt(line.resistor(pad.shunt_ohm) ** line.short())
    built.renormalize([high, 50.0])
    assert np.abs(built.s[0, 0, 0]) == pytest.approx(0.0, abs=1e-6)
    assert np.abs(built.s[0, 1, 1]) == pytest.approx(0.0, abs=1e-6)
    assert -20 * np.log10(np.abs(built.s[0, 1, 0])) == pytest.approx(pad.loss_db, abs=1e-6)


def test_impossible_reflections_are_nan() -> None:
    assert math.isnan(match.reflection_from_vswr(0.9))
    assert math.isnan(match.vswr_from_reflection(1.0))
    assert math.isnan(match.vswr_from_reflection(-0.1))
    assert math.isnan(match.reflection_from_return_loss(-1.0))
    assert math.isnan(match.return_loss_from_reflection(0.0))
    assert math.isnan(match.reflection_from_impedance(-50.0, 50.0))


def test_reflection_of_an_impedance() -> None:
    # Closed form: 75 ohm on 50 ohm is VSWR 1.5.
    assert match.vswr_from_reflection(match.reflection_from_impedance(75.0, 50.0)) == pytest.approx(1.5)
    vswr = match.vswr_from_reflection(np.array([0.0, 0.2]))
    assert vswr == pytest.approx([1.0, 1.5])
