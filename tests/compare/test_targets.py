"""Targets: probability of conformity against SciPy, gaps, and what a plan is expected to close."""

from __future__ import annotations

import math

import pytest
from scipy.stats import norm
from workshop import block, book_of, chain, change, entry, reading, totals

from logbook.book import Book
from logbook.compare.targets import Weighed, weigh
from logbook.findings import TargetVerdict

CHAIN = chain("name: amp, gain: 20.0(5) dB, nf: 3.0(2) dB\nname: second, gain: 10 dB, nf: 9 dB")


def target(limit: str, quantity: str = "gain", more: str = "") -> str:
    return block("target", f"quantity: {quantity}\nlimit: {limit}\n{more}")


def verdict(book: Book, label: str = "A") -> TargetVerdict:
    (found,) = book.findings.targets_of(label)
    return found


def judged(limit: str, written: str, more: str = "") -> TargetVerdict:
    name = written.partition(":")[0]
    return verdict(book_of(entry("01-01", CHAIN, target(limit, name), reading(written, more), revision="A")))


@pytest.mark.parametrize(
    ("limit", "low", "high"),
    [
        ("<= 30.5 dB", -math.inf, 30.5),
        (">= 29 dB", 29, math.inf),
        ("29 dB .. 30.5 dB", 29, 30.5),
        ("≤ 29.9 dB", -math.inf, 29.9),
    ],
)
@pytest.mark.parametrize("u", [0.1, 0.5, 2.0])
def test_probability_of_conformity_against_scipy(limit: str, low: float, high: float, u: float) -> None:
    found = judged(limit, f"gain: 30.0({u}) dB")
    wanted = norm.cdf(high, 30.0, u) - norm.cdf(low, 30.0, u)
    assert found.probability == pytest.approx(wanted, abs=1e-12)
    assert found.verdict == ("meets" if wanted >= 0.95 else "misses" if wanted <= 0.05 else "undecided")
    assert found.basis == "measured"


@pytest.mark.parametrize(
    ("written", "expected"), [("gain: 30 dB", "meets"), ("gain: 30.6 dB", "misses"), ("gain: 30.5 dB", "meets")]
)
def test_without_doubt_the_value_alone_decides(written: str, expected: str) -> None:
    found = judged("<= 30.5 dB", written)
    assert (found.verdict, found.probability, found.why) == (expected, None, "doubt not stated")


def test_what_is_not_measured_is_predicted_in_the_target_s_own_terms() -> None:
    book = book_of(entry("01-01", CHAIN, target("<= -125 dBm", "noise_floor", "rbw: 3 kHz"), revision="A"))
    found = verdict(book)
    nf = 10**0.3 + (10**0.9 - 1) / 100
    assert found.basis == "predicted"
    assert found.value == pytest.approx(10 * math.log10(1.380649e-23 * 290 * nf * 3e3 / 1e-3))


def test_a_measured_noise_is_brought_into_the_target_s_bandwidth() -> None:
    source = entry(
        "01-01",
        CHAIN,
        target("<= -130 dBm", "noise_floor", "rbw: 1 kHz"),
        reading("noise_floor: -122.5(1) dBm", "rbw: 10 kHz\naveraging: power"),
        revision="A",
    )
    found = verdict(book_of(source))
    assert found.value == pytest.approx(-132.5)
    assert found.gap == pytest.approx(-2.5)


def test_a_limit_at_the_chain_s_own_frequency_fits_a_reading_that_states_it() -> None:
    source = entry(
        "01-01", CHAIN, target("<= 30 dB", "gain"), reading("gain: 29.0(1) dB", "at: 50.1 MHz"), revision="A"
    )
    assert verdict(book_of(source)).basis == "measured"
    other = entry("01-01", CHAIN, target("<= 30 dB", "gain"), reading("gain: 29.0(1) dB", "at: 28 MHz"), revision="A")
    assert verdict(book_of(other)).basis == "predicted"


def test_an_upper_bound_can_meet_a_limit_and_cannot_miss_it() -> None:
    bench = block("bench", "bench: shack\nreads: {floor: -150 dBm/Hz}")
    conditions = "bench: shack\nrbw: 10 kHz\naveraging: power"
    read = reading("output_noise: -109.5 dBm", conditions)
    low = verdict(book_of(entry("01-01", CHAIN, bench, target("<= -100 dBm", "output_noise"), read, revision="A")))
    assert low.verdict == "meets"
    high = verdict(book_of(entry("01-01", CHAIN, bench, target("<= -115 dBm", "output_noise"), read, revision="A")))
    assert (high.verdict, high.why) == ("undecided", "only an upper bound is known")


MEASURED = "noise_floor: -128.0(1) dBm"
CONDITIONS = "rbw: 10 kHz\naveraging: power"
LIMIT = target("<= -130.5 dBm", "noise_floor", "rbw: 10 kHz")


def planned(*steps: str) -> Book:
    plan = change("\n".join(steps))
    first = entry("01-01", CHAIN, LIMIT, reading(MEASURED, CONDITIONS), revision="A")
    return book_of(first, entry("02-01", plan, revision="P", front="state: planned\n"))


def test_part_of_the_gap_that_a_plan_closes_by_hand() -> None:
    book = planned("  - {set: amp, to: {nf: 1.0(2) dB}}")
    old, new = totals(book, "A")["noise_floor"].value, totals(book, "P")["noise_floor"].value
    before = 10**0.3 + (10**0.9 - 1) / 100
    after = 10**0.1 + (10**0.9 - 1) / 100
    assert new - old == pytest.approx(10 * math.log10(after / before))
    # 2.5 dB are missing on A; the plan takes off what is predicted from what was measured.
    found = verdict(book, "P")
    assert verdict(book, "A").gap == pytest.approx(2.5)
    assert found.closes == pytest.approx((old - new) / 2.5)


def ways(book: Book) -> list[Weighed]:
    before = verdict(book, "A")
    return weigh(book.revisions["P"], book.revisions["A"], before, book.predict)


WHAT_IF = """what_if:
  - name: costly
    parts: 40 EUR
    steps: [{set: amp, to: {nf: 0.5(1) dB}}]
  - name: cheap
    parts: 4 EUR
    steps: [{set: amp, to: {nf: 0.5(1) dB}}]
  - name: the wrong end
    parts: 1 EUR
    steps: [{set: second, to: {nf: 5 dB}}]
"""


def test_alternatives_are_ranked_by_the_gap_they_close_and_then_by_cost() -> None:
    plan = block("change", f"chain: rx\nsteps:\n  - {{set: amp, to: {{nf: 1.5(1) dB}}}}\n{WHAT_IF}")
    first = entry("01-01", CHAIN, LIMIT, reading(MEASURED, CONDITIONS), revision="A")
    book = book_of(first, entry("02-01", plan, revision="P", front="state: planned\n"))
    found = ways(book)
    assert [each.name for each in found] == ["cheap", "costly", "as planned", "the wrong end"]
    best = found[0]
    old = 10**0.3 + (10**0.9 - 1) / 100
    change_db = 10 * math.log10((10**0.05 + (10**0.9 - 1) / 100) / old)
    assert best.value == pytest.approx(-128 + change_db)
    assert best.closes == pytest.approx(-change_db / 2.5)
    assert (best.cost, best.currency) == (4.0, "EUR")


def test_doubt_of_an_alternative_where_nothing_was_measured_is_that_of_its_prediction() -> None:
    """The parent's figure falls out when the stage that it belongs to is replaced."""
    start = chain("name: amp, gain: 20 dB, nf: 3.0(10) dB")
    steps = "  - {replace: amp, with: {name: amp, gain: 20 dB, nf: 1.0(1) dB}}"
    book = book_of(
        entry("01-01", start, target("<= 2 dB", "nf"), revision="A"),
        entry("02-01", change(steps), revision="P", front="state: planned\n"),
    )
    (found,) = ways(book)
    assert found.value == pytest.approx(1)
    assert found.u == pytest.approx(0.1)
    assert found.verdict == "meets"


def test_doubt_of_an_alternative_upon_a_measured_parent() -> None:
    book = planned("  - {set: amp, to: {nf: 1.0(1) dB}}")
    (found,) = ways(book)
    old, new = totals(book, "A")["noise_floor"].parts, totals(book, "P")["noise_floor"].parts
    assert old is not None
    assert new is not None
    changed = sum((new.get(source, 0) - old.get(source, 0)) ** 2 for source in {*old, *new})
    assert found.u == pytest.approx(math.hypot(0.1, math.sqrt(changed)))
