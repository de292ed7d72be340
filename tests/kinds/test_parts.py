"""`parts`: sums by revision and currency as added by hand, and what each decibel of measured improvement cost."""

from __future__ import annotations

from decimal import Decimal

import pytest
from workshop import block, book_of, chain, change, entry, reading

from logbook.book import Book
from logbook.compare.costs import cost_by_currency, prices_of_improvement, spent_on
from logbook.pages import block_pieces
from logbook.pages.parts import part_pieces
from logbook.terminal import render

CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB") + "\n" + chain("name: pa, gain: 10 dB", name="tx")
STEP = change("  - {set: amp, to: {nf: 2 dB}}")


def parts(text: str) -> str:
    return block("parts", text)


def nf(value: str, which: str = "rx") -> str:
    return reading(f"nf: {value}", f"chain: {which}")


def two(first: tuple[str, ...], second: tuple[str, ...], front: str = "") -> Book:
    return book_of(
        entry("01-01", CHAIN, *first, revision="A"),
        entry("02-01", STEP, *second, revision="B", front=front),
    )


def text_of(book: Book) -> str:
    return " ".join(render(part_pieces(book), 140).split())


def test_sums_by_revision_and_currency() -> None:
    first = parts("- {item: crystals, quantity: 6, price: 1.90 EUR}\n- {item: cores, quantity: 3, price: 0.10 EUR}")
    second = parts("- {item: amplifier, price: 12.35 EUR}\n- {item: postage, quantity: 2, price: 4.20 USD}")
    found = two((first,), (second, parts("item: screws\nprice: 0.05 EUR\nquantity: 100")))
    a, b = (cost_by_currency(spent_on(found.findings, label)) for label in "AB")
    assert a == {"EUR": pytest.approx(float(6 * Decimal("1.90") + 3 * Decimal("0.10")))}
    assert b == {"EUR": pytest.approx(float(Decimal("12.35") + 100 * Decimal("0.05"))), "USD": pytest.approx(8.40)}
    said = text_of(found)
    assert "Spent in all: 29.05 EUR and 8.40 USD" in said
    assert "A 11.70 EUR" in said
    assert "B 17.35 EUR and 8.40 USD" in said


def test_each_improvement_beyond_doubt_costs_all_that_was_spent() -> None:
    """1.25 dB for 10 EUR is 8 EUR a dB; what is within its doubt, worse, or not in dB has no price."""
    readings = ("nf: {}, gain: {}, iip3: {}, supply_current: {}",)
    before = reading(readings[0].format("3.25(5) dB", "20.0(1) dB", "5.0(1) dBm", "30(1) mA"), "chain: rx")
    after = reading(readings[0].format("2.00(5) dB", "21.0(1) dB", "4.0(1) dBm", "20(1) mA"), "chain: rx")
    found = two((before,), (after, parts("item: transistor\nprice: 10 EUR")))
    prices = prices_of_improvement(found.findings, "B")
    assert [(each.delta.quantity, each.currency) for each in prices] == [("nf", "EUR")]
    assert prices[0].per_db == pytest.approx(8.0)
    assert "8.00 EUR" in text_of(found)
    last = found.entries[-1]
    shown = " ".join(render(block_pieces(found, last, last.blocks[-1]), 140).split())
    assert "What the improvement of revision B cost" in shown


def test_parts_of_one_chain_count_for_its_improvements_alone() -> None:
    bought = parts(
        "- {item: fet, price: 4 EUR, chain: rx}\n- {item: relay, price: 6 EUR, chain: tx}\n- {item: box, price: 1 EUR}"
    )
    found = two((nf("4.00(5) dB"), nf("9.00(5) dB", "tx")), (nf("2.00(5) dB"), nf("8.00(5) dB", "tx"), bought))
    prices = {each.delta.chain: each.per_db for each in prices_of_improvement(found.findings, "B")}
    assert prices == {"rx": pytest.approx(5 / 2), "tx": pytest.approx(7 / 1)}


def test_what_cost_nothing_has_no_price_a_decibel() -> None:
    found = two((nf("4.00(5) dB"),), (nf("2.00(5) dB"), parts("item: from the drawer\nprice: 0 EUR")))
    assert prices_of_improvement(found.findings, "B") == []
    assert "Spent in all: 0.00 EUR" in text_of(found)


def test_what_a_plan_would_cost_is_not_spent() -> None:
    found = two((parts("item: fet\nprice: 4 EUR"),), (parts("item: filter\nprice: 50 EUR"),), "state: planned\n")
    assert [part.planned for part in found.findings.parts] == [False, True]
    assert spent_on(found.findings, "B") == []
    said = text_of(found)
    assert "Spent in all: 4.00 EUR" in said
    assert "Planned, not counted above" in said
    assert "filter" in said


def test_a_trial_is_spent_and_a_plan_that_is_built_is_counted_once() -> None:
    plan = entry("02-01", STEP, parts("item: filter\nprice: 50 EUR"), revision="B", front="state: planned\n")
    built = entry(
        "03-01", block("change", "chain: rx\nas_planned: true"), parts("item: filter\nprice: 48 EUR"), revision="B"
    )
    trial = entry(
        "04-01",
        change("  - {set: amp, to: {nf: 1 dB}}"),
        parts("item: wire\nprice: 1 EUR"),
        revision="C",
        front="state: trial\n",
    )
    found = book_of(entry("01-01", CHAIN, revision="A"), plan, built, trial)
    assert cost_by_currency(spent_on(found.findings, "B")) == {"EUR": 48.0}
    assert cost_by_currency(spent_on(found.findings, "C")) == {"EUR": 1.0}
    assert "Spent in all: 49.00 EUR" in text_of(found)


FAULTS = [
    ("item: fet", "missing-key"),
    ("price: 4 EUR", "missing-key"),
    ("item: fet\nprice: 4", "no-unit"),
    ("item: fet\nprice: -4 EUR", "sign"),
    ("item: fet\nprice: 4 XYZ", "unknown-unit"),
    ("item: fet\nprice: 4 €", "unknown-unit"),
    ("item: fet\nprice: 4 V", "dimension"),
    ("item: fet\nprice: 4 EUR\nquantity: 0", "number"),
    ("item: fet\nprice: 4 EUR\nquantity: 1.5", "number"),
    ("item: fet\nprice: 4 EUR\nquantity: many", "number"),
    ("item: fet\nprice: 4 EUR\nchain: rxx", "unknown-chain"),
    ("item: fet\nprice: 4,50 EUR", "decimal-comma"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_and_the_rest_stands(text: str, code: str) -> None:
    sound = parts("item: sound\nprice: 1 EUR")
    found = book_of(entry("01-01", CHAIN, parts(text), sound, revision="A"), sound=False)
    assert [p.code for p in found.problems] == [code], [str(p) for p in found.problems]
    assert cost_by_currency(spent_on(found.findings, "A")) == {"EUR": 1.0}


def test_one_bad_item_of_a_list_does_not_take_the_others_along() -> None:
    text = parts("- {item: fet, price: 4 EUR}\n- {item: box, price: 4}")
    found = book_of(entry("01-01", CHAIN, text, revision="A"), sound=False)
    assert len(list(found.problems)) == 1
    assert "box" in render(block_pieces(found, found.entries[0], found.entries[0].blocks[-1]), 100)
