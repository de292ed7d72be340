"""What to change next: the proposed stage is put in, the chain computed again, and the target looked at."""

from __future__ import annotations

import math

import pytest
from workshop import block, book_of, chain, change, entry, reading, totals

from logbook.book import Book
from logbook.compare.next_change import NextChange, next_change

STAGES = """name: preselector, loss: 2 dB
    name: lna, gain: 14 dB, nf: 3 dB, oip3: 18 dBm, iip2: 30 dBm, op1db: 8 dBm
    name: mixer, gain: -7 dB, nf: 9 dB, iip3: 8 dBm, iip2: 25 dBm, ip1db: 0 dBm, image_rejection: 25 dB, lo: 71.5 MHz
    name: filter, loss: 4 dB
    name: amp, gain: 25 dB, nf: 6 dB, iip3: 0 dBm, iip2: 20 dBm, ip1db: -12 dBm"""
MORE = "bandwidth: 10 kHz\nsnr: 10 dB\nsource_temperature: 500 K"


def target(quantity: str, limit: str) -> str:
    return block("target", f"quantity: {quantity}\nlimit: {limit}")


def start(quantity: str, limit: str, *readings: str, stages: str = STAGES, more: str = MORE) -> tuple[Book, NextChange]:
    book = book_of(entry("01-01", chain(stages, more=more), target(quantity, limit), *readings, revision="A"))
    (verdict,) = book.findings.targets_of("A")
    found = next_change(verdict, book.revisions["A"].chains["rx"], book.predict)
    assert found is not None
    return book, found


KEYS = {"noise figure": "nf", "loss": "loss", "IIP3": "iip3", "IIP2": "iip2", "input compression": "ip1db"}


def with_stage(
    stage: str, parameter: str, value: float, quantity: str, stages: str = STAGES, more: str = MORE
) -> float:
    """The total after one stage is set to what was proposed."""
    unit = "dB" if parameter in ("noise figure", "loss") else "dBm"
    steps = f"  - {{set: {stage}, to: {{{KEYS[parameter]}: {value!r} {unit}}}}}"
    book = book_of(
        entry("01-01", chain(stages, more=more), revision="A"), entry("02-01", change(steps), revision="B"), sound=True
    )
    return totals(book, "B")[quantity].value


# Each about 0.7 dB better than the chain is.
BETTER = {
    "nf": -0.7,
    "noise_floor": -0.7,
    "noise_density": -0.7,
    "sensitivity": -0.7,
    "output_noise": -0.7,
    "noise_temperature": -150.0,
    "iip3": 0.7,
    "oip3": 0.7,
    "iip2": 1.0,
    "oip2": 1.0,
    "ip1db": 0.7,
    "op1db": 0.7,
    "sfdr": 0.5,
}


@pytest.mark.parametrize("quantity", BETTER)
def test_the_proposed_stage_meets_the_target(quantity: str) -> None:
    now = totals(book_of(entry("01-01", chain(STAGES, more=MORE), revision="A")), "A")[quantity]
    limit = now.value + BETTER[quantity]
    sign = "<=" if BETTER[quantity] < 0 else ">="
    _, found = start(quantity, f"{sign} {limit!r} {now.unit}")
    assert found.wanted == pytest.approx(limit)
    possible = [row for row in found.rows if math.isfinite(row.needed)]
    assert possible, "0.7 dB is within the reach of a stage"
    for row in possible:
        total = with_stage(row.stage, row.parameter, row.needed, quantity)
        if row.parameter == "loss":
            # Losses are tried in two hundred steps: the first that meets the limit is named.
            assert (total - limit) * BETTER[quantity] >= -1e-9
            step = (row.now - 0) / 200
            worse = with_stage(row.stage, "loss", row.needed + step, quantity)
            assert (worse - limit) * BETTER[quantity] < 0
        else:
            assert total == pytest.approx(limit, abs=1e-6), row


@pytest.mark.parametrize("quantity", ["nf", "noise_floor", "iip3", "sfdr"])
def test_total_with_an_ideal_stage(quantity: str) -> None:
    now = totals(book_of(entry("01-01", chain(STAGES, more=MORE), revision="A")), "A")[quantity]
    sign = "<=" if BETTER[quantity] < 0 else ">="
    _, found = start(quantity, f"{sign} {now.value + 20 * BETTER[quantity]!r} {now.unit}")
    assert found.alone == []
    for row in found.rows:
        best = 1e-9 if row.parameter in ("noise figure", "loss") else 200.0
        if row.stage == "mixer" and row.parameter == "noise figure":
            # No less than its image makes of it.
            best = 10 * math.log10(1 + 10**-2.5) + 1e-9
        assert row.if_ideal == pytest.approx(with_stage(row.stage, row.parameter, best, quantity), abs=1e-5), row


def test_shares_add_up_and_the_largest_stands_first() -> None:
    _, found = start("iip3", ">= 20 dBm")
    assert sum(row.share for row in found.rows) == pytest.approx(1)
    assert [row.share for row in found.rows] == sorted((row.share for row in found.rows), reverse=True)
    _, found = start("noise_floor", "<= -160 dBm")
    # The rest is the source's.
    assert sum(row.share for row in found.rows) + found.external_share == pytest.approx(1)


def test_a_measured_value_that_departs_from_the_prediction_keeps_its_distance() -> None:
    _, found = start("nf", "<= 5 dB", reading("nf: 7.0(3) dB"))
    assert found.offset == pytest.approx(7.0 - found.predicted)
    # One-sided 95 % of the normal distribution is 1.6449 u: that much below the limit it has to be read.
    assert found.wanted == pytest.approx(5 - 1.6449 * 0.3 - found.offset, abs=1e-4)


def test_nothing_is_proposed_where_the_target_is_met() -> None:
    book = book_of(entry("01-01", chain(STAGES, more=MORE), target("nf", "<= 30 dB"), revision="A"))
    (verdict,) = book.findings.targets_of("A")
    assert next_change(verdict, book.revisions["A"].chains["rx"], book.predict) is None


LINED_UP = """name: preselector, loss: 4 dB
    name: lna, gain: 14 dB, nf: 3 dB
    name: vga, gain_range: [0 dB, 40 dB], nf: 9 dB
    name: detector, gain: 0 dB, nf: 20 dB"""


def test_loss_ahead_of_a_stage_that_a_lineup_adjusts() -> None:
    """With less loss ahead the adjusted stage takes its gain back: the proposal has to hold after that."""
    more = "bandwidth: 10 kHz\nlineup: {input: -60 dBm, at: detector, level: -30 dBm, adjust: vga}"
    now = totals(book_of(entry("01-01", chain(LINED_UP, more=more), revision="A")), "A")["nf"].value
    _, found = start("nf", f"<= {now - 2!r} dB", stages=LINED_UP, more=more)
    row = next(row for row in found.rows if row.stage == "preselector")
    assert with_stage("preselector", "loss", row.needed, "nf", LINED_UP, more) <= now - 2 + 1e-9


def test_nothing_is_proposed_for_the_loss_that_a_lineup_sets() -> None:
    stages = LINED_UP.replace("[0 dB, 40 dB], nf: 9 dB", "[-40 dB, 0 dB]").replace("20 dB", "3 dB")
    more = "bandwidth: 10 kHz\nlineup: {input: -40 dBm, at: detector, level: -40 dBm, adjust: vga}"
    now = totals(book_of(entry("01-01", chain(stages, more=more), revision="A")), "A")["nf"].value
    _, found = start("nf", f"<= {now - 1!r} dB", stages=stages, more=more)
    assert [row.stage for row in found.rows if row.parameter == "loss"] == ["preselector"]
    needed = next(row.needed for row in found.rows if row.stage == "preselector")
    assert with_stage("preselector", "loss", needed, "nf", stages, more) <= now - 1 + 1e-9
