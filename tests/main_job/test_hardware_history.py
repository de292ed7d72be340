"""Revisions out of revisions: steps, trials, plans, several chains."""

from __future__ import annotations

import math

import pytest
from workshop import block, book_of, chain, change, delta, entry, reading, totals

from logbook.book import Book, SourceFile
from logbook.hardware import changed_stages
from logbook.prediction import Terms

START = """name: lna, gain: 15 dB, nf: 2 dB, oip3: 20 dBm
    name: mixer, gain: -7 dB, nf: 7 dB, iip3: 10 dBm, lo: 71.5 MHz
    name: filter, loss: 3 dB
    name: amp, gain: 20 dB, nf: 4 dB"""


def first() -> SourceFile:
    return entry("01-01", chain(START), revision="A")


def names(book: Book, label: str) -> list[str]:
    return book.revisions[label].chains["rx"].stage_names


@pytest.mark.parametrize(
    ("steps", "stages", "gain"),
    [
        ("  - {insert: {name: pad, loss: 2 dB}, after: mixer}", ["lna", "mixer", "pad", "filter", "amp"], 23),
        ("  - {insert: {name: pad, loss: 2 dB}, before: lna}", ["pad", "lna", "mixer", "filter", "amp"], 23),
        ("  - {insert: {name: pad, loss: 2 dB}, after: amp}", ["lna", "mixer", "filter", "amp", "pad"], 23),
        ("  - {replace: filter, with: {name: crystal, loss: 5 dB}}", ["lna", "mixer", "crystal", "amp"], 23),
        ("  - {replace: filter, with: {name: filter, loss: 5 dB}}", ["lna", "mixer", "filter", "amp"], 23),
        ("  - {set: lna, to: {gain: 12 dB}}", ["lna", "mixer", "filter", "amp"], 22),
        ("  - {set: filter, to: {loss: 1 dB}}", ["lna", "mixer", "filter", "amp"], 27),
        ("  - remove: amp", ["lna", "mixer", "filter"], 5),
        (
            "  - remove: filter\n  - {insert: {name: filter, loss: 1 dB}, after: lna}",
            ["lna", "filter", "mixer", "amp"],
            27,
        ),
    ],
)
def test_each_step(steps: str, stages: list[str], gain: float) -> None:
    book = book_of(first(), entry("02-01", change(steps), revision="B"))
    assert names(book, "B") == stages
    assert names(book, "A") == ["lna", "mixer", "filter", "amp"]
    assert totals(book, "B")["gain"].value == pytest.approx(gain)
    assert totals(book, "A")["gain"].value == pytest.approx(25)


def test_steps_are_done_in_their_order() -> None:
    steps = "  - {set: filter, to: {loss: 2 dB}}\n  - {set: filter, to: {loss: 1 dB}}\n  - remove: amp"
    assert totals(book_of(first(), entry("02-01", change(steps), revision="B")), "B")["gain"].value == pytest.approx(7)


@pytest.mark.parametrize(
    ("to", "kept"),
    [
        ("oip3: 25 dBm", {"gain", "nf", "oip3"}),
        ("iip3: 8 dBm", {"gain", "nf", "iip3"}),
        ("noise_voltage: 1 nV/rtHz", {"gain", "oip3", "noise_voltage"}),
        ("loss: 1 dB", {"gain", "nf", "oip3"}),
    ],
)
def test_what_is_set_takes_the_place_of_what_said_the_same(to: str, kept: set[str]) -> None:
    book = book_of(first(), entry("02-01", change(f"  - {{set: lna, to: {{{to}}}}}"), revision="B"))
    stage = book.revisions["B"].chains["rx"].stage("lna")
    assert stage is not None
    assert set(stage.parameters) == kept


def test_set_keeps_the_oscillator_and_its_sideband() -> None:
    start = "name: mixer, gain: -7 dB, nf: 7 dB, lo: 20 MHz, output: sum"
    steps = "  - {set: mixer, to: {nf: 6 dB, image_rejection: 30 dB}}"
    book = book_of(entry("01-01", chain(start), revision="A"), entry("02-01", change(steps), revision="B"))
    for label in "AB":
        found = book.predict(book.revisions[label].chains["rx"], Terms())
        assert found.nodes[0].frequency_hz == pytest.approx(70.1e6)


def test_nothing_inherits_from_a_trial_and_the_next_revision_comes_from_what_was_built() -> None:
    book = book_of(
        first(),
        entry("02-01", change("  - remove: filter"), revision="T", front="state: trial\n"),
        entry("03-01", change("  - {set: amp, to: {gain: 22 dB}}"), revision="B"),
    )
    assert book.revisions["T"].comes_from == "A"
    assert book.revisions["B"].comes_from == "A"
    assert totals(book, "T")["gain"].value == pytest.approx(28)
    assert totals(book, "B")["gain"].value == pytest.approx(27)
    assert book.latest is not None
    assert book.latest.label == "B"


def test_an_entry_without_revision_speaks_of_the_latest_built_one() -> None:
    book = book_of(
        first(),
        entry("02-01", change("  - remove: filter"), revision="T", front="state: trial\n"),
        entry("02-02", change("  - remove: amp"), revision="P", front="state: planned\n"),
        entry("02-03", reading("gain: 25.3 dB")),
        entry("03-01", change("  - {set: amp, to: {gain: 22 dB}}"), revision="B"),
        entry("03-02", reading("gain: 27.1 dB")),
    )
    assert [(r.revision, r.value) for r in book.results if r.basis == "measured"] == [("A", 25.3), ("B", 27.1)]
    assert delta(book, "rx/gain", "B").from_ == "A"


def test_a_trial_is_compared_with_what_it_was_tried_on() -> None:
    book = book_of(
        entry("01-01", chain(START), reading("gain: 25.0(1) dB"), revision="A"),
        entry("02-01", change("  - remove: filter"), reading("gain: 27.6(1) dB"), revision="T", front="state: trial\n"),
        entry("03-01", change("  - {set: amp, to: {gain: 22 dB}}"), reading("gain: 27.1(1) dB"), revision="B"),
    )
    assert delta(book, "rx/gain", "T").delta == pytest.approx(2.6)
    found = delta(book, "rx/gain", "B")
    assert (found.from_, found.delta) == ("A", pytest.approx(2.1))


PLAN = "  - {insert: {name: post-amp, gain: 10 ± 0.5 dB, nf: 3 dB}, after: mixer}"


def test_a_plan_that_is_built_later_keeps_its_prediction_beside_what_was_built() -> None:
    book = book_of(
        first(),
        entry("02-01", change(PLAN), revision="C", front="state: planned\n"),
        entry("02-02", change("  - {set: lna, to: {gain: 13 dB}}"), revision="B"),
        entry("03-01", block("change", "chain: rx\nas_planned: true"), reading("gain: 32.1(1) dB"), revision="C"),
    )
    built = book.revisions["C"]
    assert (built.state, built.comes_from, built.date) == ("built", "B", "2026-03-01")
    assert built.planned is not None
    assert (built.planned.state, built.planned.comes_from) == ("planned", "A")
    # The plan was made on A, and is built upon B, whose amplifier has 2 dB less.
    plan = book.predict(built.planned.chains["rx"], Terms())
    assert plan.totals["gain"].value == pytest.approx(35)
    assert totals(book, "C")["gain"].value == pytest.approx(33)
    (found,) = [a for a in book.findings.agreement if a.revision == "C"]
    # Measured 32.1(1) against predicted 33 with u = 0.5/sqrt 3.
    assert found.predicted == pytest.approx(33)
    assert found.en == pytest.approx(0.9 / (2 * math.hypot(0.1, 0.5 / math.sqrt(3))))
    # The order is that of building.
    assert list(book.revisions) == ["A", "B", "C"]


def test_a_plan_upon_a_plan() -> None:
    book = book_of(
        first(),
        entry("02-01", change(PLAN), revision="P1", front="state: planned\n"),
        entry("02-02", change("  - remove: filter"), revision="P2", front="state: planned\nfrom: P1\n"),
    )
    assert totals(book, "P2")["gain"].value == pytest.approx(38)
    assert book.latest is not None
    assert book.latest.label == "A"
    found = delta(book, "rx/gain", "P2", "predicted")
    assert (found.from_, found.delta) == ("P1", pytest.approx(3))


def test_a_chain_written_in_full_takes_the_place_of_the_inherited_one_only() -> None:
    book = book_of(
        entry("01-01", chain(START), chain("name: pa, gain: 20 dB", name="tx"), revision="A"),
        entry("02-01", chain("name: pa, gain: 23 dB", name="tx"), revision="B"),
    )
    assert totals(book, "B", "tx")["gain"].value == pytest.approx(23)
    assert book.revisions["B"].chains["rx"] is book.revisions["A"].chains["rx"]
    assert [d.key for d in book.findings.deltas if d.verdict == "changed"] == ["tx/gain"]


def test_predicted_delta_owes_no_doubt_to_what_did_not_change() -> None:
    start = "name: lna, gain: 15 ± 1 dB, nf: 2 dB\n name: pad, loss: 3.0(1) dB"
    book = book_of(
        entry("01-01", chain(start), revision="A"),
        entry("02-01", change("  - {set: pad, to: {loss: 1.0(2) dB}}"), revision="B"),
    )
    found = delta(book, "rx/gain", "B", "predicted")
    assert found.delta == pytest.approx(2)
    # The amplifier is one and the same; both pads count: hypot(0.1, 0.2).
    assert found.u == pytest.approx(math.hypot(0.1, 0.2))
    assert found.verdict == "changed"


def test_a_stage_that_is_written_out_again_as_it_was_is_the_same_stage() -> None:
    start = "name: lna, gain: 15 ± 1 dB, nf: 2 dB\n name: pad, loss: 3.0(1) dB"
    again = "name: lna, gain: 15 ± 1 dB, nf: 2 dB\n name: pad, loss: 1.0(2) dB"
    book = book_of(entry("01-01", chain(start), revision="A"), entry("02-01", chain(again), revision="B"))
    assert delta(book, "rx/gain", "B", "predicted").u == pytest.approx(math.hypot(0.1, 0.2))
    before, after = (book.revisions[label].chains["rx"] for label in "AB")
    assert changed_stages(before, after) == {"pad": "changed"}


def test_predicted_delta_by_something_without_a_tolerance_is_not_certain() -> None:
    """Everything stated cancels; the pad that makes the difference states nothing, and nothing is never zero."""
    start = "name: lna, gain: 15 ± 1 dB, nf: 2 dB\n name: pad, loss: 3 dB"
    book = book_of(entry("01-01", chain(start), revision="A"), entry("02-01", change("  - remove: pad"), revision="B"))
    found = delta(book, "rx/gain", "B", "predicted")
    assert (found.delta, found.u, found.why) == (pytest.approx(3), None, "doubt not stated")


def test_from_names_another_parent() -> None:
    book = book_of(
        first(),
        entry("02-01", change("  - remove: filter"), revision="B"),
        entry("03-01", change("  - remove: amp"), revision="C", front="from: A\n"),
    )
    assert names(book, "C") == ["lna", "mixer", "filter"]
    assert [r.label for r in book.history.ancestors("C")] == ["A"]
    assert book.latest is not None
    assert book.latest.label == "C"
