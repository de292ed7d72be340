"""Lineups solved by hand."""

from __future__ import annotations

import math

import pytest
from workshop import prediction

# 18 - 6.5 - 3 dB stand ahead of the variable stage, and 2 dB of loss between it and the detector.
STAGES = """name: lna, gain: 18 ± 0.5 dB, nf: 1 dB
    name: mixer, gain: -6.5 dB, nf: 7 dB, lo: 71.5 MHz
    name: filter, loss: 3.0 ± 0.3 dB
    name: vga, gain_range: [-4 dB, {top} dB], nf: 9 dB
    name: pad, loss: 2 dB
    name: detector, gain: 10 dB, nf: 20 dB"""
LINEUP = "bandwidth: 10 kHz\nlineup: {input: -42 dBm, at: detector, level: -12 dBm, adjust: vga}"


def test_setting_and_range_left() -> None:
    found = prediction(STAGES.format(top=28), more=LINEUP)
    # -42 + 18 - 6.5 - 3 + x - 2 = -12 gives x = 23.5; the detector itself stands behind.
    assert found.totals["setting"].value == pytest.approx(23.5)
    assert found.totals["range_left"].value == pytest.approx(4.5)
    assert found.totals["gain"].value == pytest.approx(18 - 6.5 - 3 + 23.5 - 2 + 10)
    assert found.held_at == ""


def test_doubt_of_what_stands_ahead_is_that_of_the_setting_and_leaves_the_gain() -> None:
    found = prediction(STAGES.format(top=28), more=LINEUP).totals
    u = math.hypot(0.5 / math.sqrt(3), 0.3 / math.sqrt(3))
    assert found["setting"].u == pytest.approx(u)
    assert found["range_left"].u == pytest.approx(u)
    # Whatever the stages ahead really have, the setting makes up for it.
    assert found["gain"].u is None


def test_range_that_falls_short_is_held_at_its_top() -> None:
    found = prediction(STAGES.format(top=20), more=LINEUP)
    assert found.totals["setting"].value == pytest.approx(23.5)
    assert found.totals["range_left"].value == pytest.approx(-3.5)
    assert found.totals["gain"].value == pytest.approx(18 - 6.5 - 3 + 20 - 2 + 10)
    assert found.held_at == "top"
    # Held, it makes up for nothing: the doubt of the stages ahead is the gain's.
    assert found.totals["gain"].u == pytest.approx(math.hypot(0.5, 0.3) / math.sqrt(3))


def test_level_too_high_for_the_lowest_gain_is_held_at_the_bottom() -> None:
    found = prediction(STAGES.format(top=28), more=LINEUP.replace("-42 dBm", "-10 dBm"))
    assert found.totals["setting"].value == pytest.approx(-8.5)
    assert found.totals["gain"].value == pytest.approx(18 - 6.5 - 3 - 4 - 2 + 10)
    assert found.held_at == "bottom"


def test_doubt_of_the_levels_of_a_lineup() -> None:
    more = LINEUP.replace("-42 dBm", "-42 ± 0.6 dBm (k=2)").replace("-12 dBm", "-12.0(4) dBm")
    found = prediction(STAGES.format(top=28), more=more).totals
    assert found["setting"].u == pytest.approx(math.sqrt(0.25 / 3 + 0.09 / 3 + 0.09 + 0.16))
    assert found["gain"].u == pytest.approx(0.5)
