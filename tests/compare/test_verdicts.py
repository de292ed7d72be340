"""The words of judgement on deltas: when each is due."""

from __future__ import annotations

import math

import pytest
from workshop import block, book_of, chain, change, delta, entry, measured, reading

from logbook.book import Book, Settings, SourceFile
from logbook.findings import Delta

CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB")
CHANGED = change("  - {set: amp, to: {gain: 21 dB}}")


def sources(before: str, after: str) -> tuple[SourceFile, SourceFile]:
    return (
        entry("01-01", CHAIN, reading(before), revision="A"),
        entry("02-01", CHANGED, reading(after), revision="B"),
    )


def compared(before: str, after: str, settings: Settings | None = None) -> Delta:
    name = after.partition(":")[0]
    return delta(book_of(*sources(before, after), settings=settings), f"rx/{name}", "B")


@pytest.mark.parametrize(
    ("before", "after", "verdict"),
    [
        # Beyond twice the doubt of 0.1414 dB, in the direction that each quantity has.
        ("nf: 3.00(10) dB", "nf: 2.70(10) dB", "better"),
        ("nf: 3.00(10) dB", "nf: 3.30(10) dB", "worse"),
        ("iip3: -5.0(1) dBm", "iip3: -4.0(1) dBm", "better"),
        ("iip3: -5.0(1) dBm", "iip3: -6.0(1) dBm", "worse"),
        ("gain: 20.0(1) dB", "gain: 21.0(1) dB", "changed"),
        # Not beyond doubt.
        ("nf: 3.00(10) dB", "nf: 2.75(10) dB", "same"),
        ("iip3: -5.0(5) dBm", "iip3: -6.0(5) dBm", "same"),
        # Beyond doubt and below what matters (0.1 dB of a noise figure, 0.5 dB of an intercept).
        ("nf: 3.000(10) dB", "nf: 2.950(10) dB", "same"),
        ("iip3: -5.00(5) dBm", "iip3: -5.40(5) dBm", "same"),
        # Towards zero: what counts is the distance from it.
        ("skirt_balance: -900(50) Hz", "skirt_balance: 300(50) Hz", "better"),
        ("skirt_balance: 300(50) Hz", "skirt_balance: -900(50) Hz", "worse"),
        ("frequency_error: 120(10) Hz", "frequency_error: -120(10) Hz", "same"),
        # A part of the value before, for what is no decibel: 1 % of a current.
        ("supply_current: 700.0(1) mA", "supply_current: 706.0(1) mA", "same"),
        ("supply_current: 700.0(1) mA", "supply_current: 708.0(1) mA", "worse"),
    ],
)
def test_verdicts_where_doubt_is_stated(before: str, after: str, verdict: str) -> None:
    found = compared(before, after)
    assert (found.verdict, found.why) == (verdict, "")


@pytest.mark.parametrize(
    ("before", "after", "verdict"),
    [
        ("nf: 3.0 dB", "nf: 2.8 dB", "better"),
        ("nf: 3.0 dB", "nf: 2.95 dB", "same"),
        ("iip3: -5 dBm", "iip3: -5.6 dBm", "worse"),
        ("gain: 20 dB", "gain: 20.3 dB", "changed"),
        ("agc: {value: 3.10 V, better: higher}", "agc: {value: 3.12 V, better: higher}", "same"),
        ("agc: {value: 3.10 V, better: higher}", "agc: {value: 3.14 V, better: higher}", "better"),
    ],
)
def test_verdicts_of_a_bench_note_without_uncertainties(before: str, after: str, verdict: str) -> None:
    found = compared(before, after)
    assert (found.verdict, found.why, found.u) == (verdict, "doubt not stated", None)


def test_doubt_of_one_side_is_better_than_none() -> None:
    found = compared("nf: 3.0 dB", "nf: 2.70(10) dB")
    assert (found.u, found.verdict) == (pytest.approx(0.1), "better")


def test_the_smallest_change_that_matters_is_a_setting() -> None:
    assert compared("nf: 3.0 dB", "nf: 2.8 dB", Settings(matters={"nf": 0.5})).verdict == "same"
    assert compared("gain: 20 dB", "gain: 20.1 dB", Settings(matters={"gain": 0.05})).verdict == "changed"


def test_new_and_gone() -> None:
    book = book_of(*sources("nf: 3.0 dB", "gain: 21 dB"))
    assert (delta(book, "rx/gain", "B").verdict, delta(book, "rx/nf", "B").verdict) == ("new", "gone")
    assert math.isnan(delta(book, "rx/gain", "B").delta)


def test_the_nearest_ancestor_that_has_the_result_counts() -> None:
    book = book_of(
        *sources("nf: 3.0 dB", "gain: 21 dB"),
        entry("03-01", change("  - {set: amp, to: {gain: 22 dB}}"), reading("nf: 2.5 dB"), revision="C"),
    )
    found = delta(book, "rx/nf", "C")
    assert (found.from_, found.delta) == ("A", pytest.approx(-0.5))


def test_pair_on_the_same_bench_is_preferred() -> None:
    benches = "\n".join(block("bench", f"bench: {name}\nreads: {{accuracy: ± 1 dB}}") for name in ("shack", "club"))
    book = book_of(
        entry(
            "01-01",
            CHAIN,
            benches,
            reading("output_level: -10 dBm", "bench: shack"),
            reading("output_level: -12 dBm", "bench: club"),
            revision="A",
        ),
        entry("02-01", CHANGED, reading("output_level: -9 dBm", "bench: shack"), revision="B"),
    )
    assert delta(book, "rx/output_level", "B").delta == pytest.approx(1)


# In 10 kHz the bench's own floor of -150 dBm/Hz is -110 dBm.
def bounded(before: str, after: str) -> Book:
    bench = block("bench", "bench: shack\nreads: {linearity: ± 0.1 dB, floor: -150 dBm/Hz}")
    more = "bench: shack\nrbw: 10 kHz\naveraging: power"
    return book_of(
        entry("01-01", CHAIN, bench, reading(f"output_noise: {before}", more), revision="A"),
        entry("02-01", CHANGED, reading(f"output_noise: {after}", more), revision="B"),
    )


def test_fall_to_an_upper_bound_is_a_fall_of_at_least_so_much() -> None:
    found = delta(bounded("-100 dBm", "-109.2 dBm"), "rx/output_noise", "B")
    assert found.verdict == "better"
    assert "at least" in found.why
    assert found.delta == pytest.approx(-109.2 + 100.4576, abs=0.001)


def test_rise_from_an_upper_bound_is_a_rise_of_at_least_so_much() -> None:
    book = bounded("-109.2 dBm", "-104 dBm")
    found = delta(book, "rx/output_noise", "B")
    assert measured(book, "rx/output_noise", "A").bound == "upper"
    assert found.verdict == "worse"
    assert "at least" in found.why


@pytest.mark.parametrize(
    ("before", "after", "silent"), [("-109.2 dBm", "-109.4 dBm", "B"), ("-108 dBm", "-109.2 dBm", "B")]
)
def test_what_bounds_leave_open_is_not_comparable(before: str, after: str, silent: str) -> None:
    """Two bounds say nothing of each other; nor does a bound above what was read before, -112.3 dBm."""
    found = delta(bounded(before, after), "rx/output_noise", "B")
    assert found.verdict == "not comparable"
    assert found.why.startswith(silent)
    assert "read it again" in found.why
