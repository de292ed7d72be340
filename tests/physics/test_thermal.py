"""Heat, against printed examples and closed forms."""

from __future__ import annotations

import math

import numpy as np
import pytest

from logbook.physics import thermal


def test_power_transistor() -> None:
    # Lecture example, power transistor: 3.9 W, 3.125 K/W, case 76 degC: junction 88 degC.
    assert thermal.junction_temperature(3.9, 3.125, 76.0) == pytest.approx(88.0, abs=0.5)


def test_series_regulator() -> None:
    # Closed form: 12 to 5 V at 0.5 A, 5 + 1 + 10 K/W, 25 degC: 3.5 W, 81 degC.
    power = thermal.regulator_power(12.0, 5.0, 0.5)
    assert power == pytest.approx(3.5)
    assert thermal.junction_temperature(power, 5.0 + 1.0 + 10.0, 25.0) == pytest.approx(81.0)
    assert thermal.junction_margin(81.0, 125.0) == 44.0
    # Closed form: 5 mA of its own from 12 V are 60 mW more.
    assert thermal.regulator_power(12.0, 5.0, 0.5, 0.005) == pytest.approx(3.56)


def test_the_needed_sink_puts_the_junction_at_its_limit() -> None:
    sink = thermal.needed_sink(3.5, 125.0, 25.0, 6.0)
    assert thermal.junction_temperature(3.5, 6.0 + sink, 25.0) == pytest.approx(125.0)
    assert thermal.needed_sink(50.0, 125.0, 25.0, 6.0) < 0.0
    assert thermal.needed_sink(0.0, 125.0, 25.0, 6.0) == math.inf
    assert math.isnan(thermal.needed_sink(-1.0, 125.0, 25.0, 6.0))


def test_derating() -> None:
    # Closed form: 150 degC, 10 K/W, rated 10 W: flat up to 50 degC, nothing from 150 degC on.
    ambient = np.array([25.0, 50.0, 100.0, 150.0, 200.0])
    assert thermal.allowed_power(ambient, 150.0, 10.0, 10.0).tolist() == [10.0, 10.0, 5.0, 0.0, 0.0]
    assert math.isnan(thermal.allowed_power(25.0, 150.0, 0.0))


def test_energy_is_kept() -> None:
    # Closed form: 13.8 V, 2 A in, 15 W out, 0.5 W drive.
    assert thermal.amplifier_power(13.8, 2.0, 15.0, 0.5) == pytest.approx(13.1)
