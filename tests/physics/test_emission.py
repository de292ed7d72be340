"""Levels that rules allow, by the published numbers, and the bandwidths in which emissions are judged."""

from __future__ import annotations

import math

import pytest

from logbook.physics.emission import allowed_level, reference_bandwidth


def dbm(watt: float) -> float:
    return 10 * math.log10(watt) + 30


@pytest.mark.parametrize(
    ("watt", "below"),
    # 47 CFR 97.307(e): up to 25 W 25 uW and 40 dB, not below 10 uW.
    [(5.0, 53.0), (25.0, 60.0), (0.2, 40.0), (0.05, 37.0)],
)
def test_lowest_of_several_limits_and_not_below_what_is_needed(watt: float, below: float) -> None:
    allowed = allowed_level(dbm(watt), 40.0, dbm(25e-6), not_needed_below_dbm=dbm(10e-6))
    assert dbm(watt) - allowed == pytest.approx(below, abs=0.05)


@pytest.mark.parametrize("watt", [0.1, 4.0, 25.0])
def test_so_many_db_and_ten_lg_of_the_power_is_one_level(watt: float) -> None:
    """43 + 10 lg(P/W) below P is -13 dBm whatever P is; 49.0 dB at 4 W. 47 CFR 95.779(a)(3)."""
    allowed = allowed_level(dbm(watt), log_power_db=43.0)
    assert allowed == pytest.approx(-13.0)
    assert dbm(watt) - allowed == pytest.approx(43 + 10 * math.log10(watt))
    assert allowed_level(dbm(4.0), log_power_db=43.0) == pytest.approx(dbm(4.0) - 49.0, abs=0.05)


def test_nothing_limits_nothing() -> None:
    assert math.isnan(allowed_level(30.0))
    assert math.isnan(allowed_level(30.0, not_needed_below_dbm=-20.0))
    assert math.isnan(allowed_level(math.nan, 40.0))


@pytest.mark.parametrize(
    ("frequency", "width"),
    # ITU Radio Regulations, Appendix 3: 9 to 150 kHz, to 30 MHz, to 1 GHz, above.
    [
        (9e3, 1e3),
        (149.9e3, 1e3),
        (150e3, 10e3),
        (29.99e6, 10e3),
        (30e6, 100e3),
        (999e6, 100e3),
        (1e9, 1e6),
        (24e9, 1e6),
    ],
)
def test_reference_bandwidths(frequency: float, width: float) -> None:
    assert reference_bandwidth(frequency) == width


@pytest.mark.parametrize("frequency", [0.0, 8.9e3, math.nan])
def test_below_what_is_covered_there_is_no_bandwidth(frequency: float) -> None:
    assert math.isnan(reference_bandwidth(frequency))
