"""`heat` from text to results: published examples, the `uncertainties` library, what two revisions share, faults."""

from __future__ import annotations

import pytest
from uncertainties import ufloat
from workshop import block, book_of, chain, delta, entry

from logbook.book import Book
from logbook.model import Result
from logbook.pages import block_pieces
from logbook.terminal import render

CHAIN = chain("name: pa, gain: 20 dB, nf: 8 dB", name="tx", signal="50.1 MHz")


def heat(text: str) -> str:
    return block("heat", text)


def book(*blocks: str, sound: bool = True) -> Book:
    return book_of(entry("01-01", CHAIN, *blocks, revision="A"), sound=sound)


def result(book: Book, key: str) -> Result:
    return next(r for r in reversed(book.results) if r.key == f"tx/{key}")


def shown(book: Book) -> str:
    last = book.entries[-1]
    return " ".join(render(block_pieces(book, last, last.blocks[-1]), 140).split())


def test_power_transistor() -> None:
    """Lecture example, power transistor: 3.9 W over 3.125 K/W from a case at 76 degC makes 88 degC (88.19)."""
    text = "name: pa\npower: 3.9 W\njunction_case: 3.125 degC/W\ncase: 76 degC\nmaximum: 200 degC"
    found = book(heat(text))
    assert result(found, "junction#pa").value == pytest.approx(88, abs=0.5)
    assert result(found, "junction_margin#pa").value == pytest.approx(112, abs=0.5)
    assert (result(found, "junction#pa").unit, result(found, "junction_margin#pa").unit) == ("degC", "K")
    assert result(found, "case_temperature#pa").value == 76.0


@pytest.mark.parametrize("ambient", ["25 degC", "298.15 K"])
def test_series_regulator(ambient: str) -> None:
    """Closed form: 12 to 5 V at 0.5 A, 5 + 1 + 10 K/W, 25 degC make 3.5 W and 81 degC."""
    text = (
        "name: reg\ninput_voltage: 12 V\noutput_voltage: 5 V\ncurrent: 0.5 A\njunction_case: 5 degC/W\n"
        f"case_sink: 1 degC/W\nsink_ambient: 10 degC/W\nambient: {ambient}\nmaximum: 125 degC"
    )
    found = book(heat(text))
    assert result(found, "junction#reg").value == pytest.approx(81.0)
    assert result(found, "junction_margin#reg").value == pytest.approx(44.0)
    assert "3.5 W" in shown(found)
    own = book(heat(text.replace("current: 0.5 A", "current: 0.5 A\nown_current: 10 mA")))
    assert result(own, "junction#reg").value == pytest.approx(25 + 16 * (3.5 + 0.12))


def test_the_sink_needed_keeps_the_junction_just_at_its_maximum() -> None:
    text = "name: reg\npower: 3.5 W\njunction_case: 5 K/W\ncase_sink: 1 K/W\n{}\nambient: 40 degC\nmaximum: 125 degC"
    needed = result(book(heat(text.format(""))), "sink_needed#reg")
    assert (needed.unit, needed.better) == ("K/W", "higher")
    fitted = book(heat(text.format(f"sink_ambient: {needed.value!r} K/W")))
    assert result(fitted, "junction_margin#reg").value == pytest.approx(0.0, abs=1e-9)


def test_amplifier_turns_to_heat_what_it_does_not_send() -> None:
    text = (
        "name: pa\ninput_voltage: 13.8 V\ncurrent: 0.71(1) A\nrf_output: 3.9 ± 0.3 W\nrf_input: 50 mW\n"
        "junction_case: 3.2 ± 0.2 degC/W\ncase: 61(1) degC\nmaximum: 175(5) degC"
    )
    found = book(heat(text))
    root = 3**0.5
    power = 13.8 * ufloat(0.71, 0.01) - ufloat(3.9, 0.3 / root) + 0.05
    junction = ufloat(61, 1) + power * ufloat(3.2, 0.2 / root)
    margin = ufloat(175, 5) - junction
    assert result(found, "junction#pa").value == pytest.approx(junction.nominal_value)
    assert result(found, "junction#pa").u == pytest.approx(junction.std_dev, rel=1e-3)
    assert result(found, "junction_margin#pa").value == pytest.approx(margin.nominal_value)
    assert result(found, "junction_margin#pa").u == pytest.approx(margin.std_dev, rel=1e-3)


def two(first: str, second: str, *more: str) -> Book:
    step = block("change", "chain: tx\nsteps:\n  - set: pa\n    to: {gain: 19 dB}")
    return book_of(
        entry("01-01", CHAIN, heat(first), *more, revision="A"), entry("02-01", step, heat(second), revision="B")
    )


def test_what_belongs_to_the_part_is_the_same_error_on_both_revisions() -> None:
    """By the library: with one resistance and one case-to-junction error, only the power's change carries it."""
    text = "name: pa\npower: {} W\njunction_case: 3.2(3) K/W\ncase: {}(1) degC\nmaximum: 175(5) degC"
    found = two(text.format("6.0", "61"), text.format("6.0", "52"))
    changed = delta(found, "tx/junction#pa", "B", "derived")
    assert changed.delta == pytest.approx(-9.0)
    # 3.2(3) K/W times 6 W is the same 1.8 K in both; the two case readings are all that is left.
    assert changed.u == pytest.approx(2**0.5)
    assert result(found, "junction#pa").u == pytest.approx((1 + 1.8**2) ** 0.5)
    assert changed.verdict == "better"
    # The maximum's doubt is the same too.
    margin = delta(found, "tx/junction_margin#pa", "B", "derived")
    assert (margin.verdict, margin.u) == ("better", pytest.approx(2**0.5))
    less = two(text.format("6.0", "61"), text.format("4.0", "61"))
    theta = ufloat(3.2, 0.3)
    expected = (ufloat(61, 1) + 4.0 * theta) - (ufloat(61, 1) + 6.0 * theta)
    assert delta(less, "tx/junction#pa", "B", "derived").u == pytest.approx(expected.std_dev)


def test_targets_regressions_and_their_acceptance() -> None:
    """Of two parts that both got hotter only the one that is named is accepted."""
    parts = "- {{name: {}, power: 6.0 W, junction_case: 3.2(1) K/W, case: {}(1) degC, maximum: 175 degC}}\n"
    target = block("target", "quantity: junction_margin\nname: pa\nlimit: '>= 90 K'")
    accept = block(
        "accept", "- {quantity: junction, name: pa, why: summer}\n- {quantity: junction_margin, why: summer}"
    )
    step = block("change", "chain: tx\nsteps:\n  - set: pa\n    to: {gain: 19 dB}")
    before, after = (heat(parts.format("pa", case) + parts.format("reg", case)) for case in (61, 80))
    found = book_of(
        entry("01-01", CHAIN, target, before, revision="A"),
        entry("02-01", step, after, accept, revision="B"),
    )
    assert {t.revision: t.verdict for t in found.findings.targets} == {"A": "meets", "B": "misses"}
    accepted = {(r.key, r.kind): r.accepted for r in found.findings.regressions}
    assert accepted == {
        ("tx/junction#pa", "delta"): True,
        ("tx/junction#reg", "delta"): False,
        ("tx/junction_margin#pa", "delta"): True,
        ("tx/junction_margin#reg", "delta"): True,
        ("tx/junction_margin#pa", "target"): True,
        ("tx/case_temperature#pa", "delta"): False,
        ("tx/case_temperature#reg", "delta"): False,
    }
    wrong = accept.replace("name: pa", "name: paa")
    missed = book_of(
        entry("01-01", CHAIN, before, revision="A"), entry("02-01", step, after, wrong, revision="B"), sound=False
    )
    assert [p.code for p in missed.problems] == ["accepts-nothing"]


PLANNED = "name: pa\npower: 6 W\njunction_case: 3 K/W\nsink_ambient: {} K/W\nambient: 25 degC\nmaximum: 175 degC"


def test_a_plan_is_a_prediction_against_its_target_and_the_revision_before() -> None:
    """25 + 6 * (3 + 20) = 163 degC now, 25 + 6 * (3 + 5) = 73 degC planned: of the 48 K missing all 48 and 42 more."""
    target = block("target", "quantity: junction_margin\nname: pa\nlimit: '>= 60 K'")
    step = block("change", "chain: tx\nsteps:\n  - set: pa\n    to: {gain: 19 dB}")
    plan = entry("02-01", step, heat(PLANNED.format(5)), revision="B", front="state: planned\n")
    first = entry("01-01", CHAIN, target, heat(PLANNED.format(20)), revision="A")
    found = book_of(first, plan)
    assert {(r.revision, r.basis) for r in found.results if r.block == "heat"} == {("A", "derived"), ("B", "predicted")}
    changed = delta(found, "tx/junction#pa", "B", "predicted")
    assert (changed.verdict, round(changed.delta, 9)) == ("better", -90.0)
    verdicts = {t.revision: t for t in found.findings.targets}
    assert (verdicts["A"].basis, verdicts["A"].verdict, verdicts["A"].gap) == ("derived", "misses", 48.0)
    assert (verdicts["B"].basis, verdicts["B"].verdict) == ("predicted", "meets")
    assert verdicts["B"].closes == pytest.approx(90 / 48)
    assert not found.findings.regressions


def test_what_was_measured_takes_the_place_of_what_was_planned() -> None:
    target = block("target", "quantity: junction_margin\nname: pa\nlimit: '>= 60 K'")
    step = block("change", "chain: tx\nsteps:\n  - set: pa\n    to: {gain: 19 dB}")
    plan = entry("02-01", step, heat(PLANNED.format(5)), revision="B", front="state: planned\n")
    first = entry("01-01", CHAIN, target, heat(PLANNED.format(20)), revision="A")
    built = block("change", "chain: tx\nas_planned: true")
    not_yet = book_of(first, plan, entry("03-01", built, revision="B"))
    assert [t.basis for t in not_yet.findings.targets if t.revision == "B"] == ["predicted"]
    hot = heat("name: pa\npower: 6 W\njunction_case: 3 K/W\ncase: 110 degC\nmaximum: 175 degC")
    found = book_of(first, plan, entry("03-01", built, hot, revision="B"))
    last = next(t for t in found.findings.targets if t.revision == "B")
    assert (last.basis, last.verdict, last.value) == ("derived", "misses", 47.0)
    assert delta(found, "tx/junction#pa", "B", "derived").delta == pytest.approx(128 - 163)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("power: 9 W\njunction_case: 9 K/W\ncase: 76 degC\nmaximum: 150 degC", "7 K above what it bears"),
        ("power: 9 W\njunction_case: 9 K/W\nambient: 76 degC\nmaximum: 150 degC", "no sink will do"),
        ("power: 3 W\njunction_case: 3 K/W\ncase: 20 degC\nambient: 25 degC", "no warmer than ambient"),
        ("power: 3 W\njunction_case: 3 K/W\ncase: 40 degC\nambient: 25 degC", "from case to ambient it has 5 K/W"),
        ("power: 3 W\njunction_case: 3 K/W\nsink_ambient: 9 K/W\nambient: 25 degC", "nothing is stated between case"),
        ("power: 0 W\njunction_case: 3 K/W\nambient: 25 degC\nmaximum: 150 degC", "any"),
        ("power: 3 W\nambient: 25 degC", "not known"),
        ("power: 3 W\nambient: 25 degC", "sets fire to"),
    ],
)
def test_what_the_page_says(text: str, words: str) -> None:
    assert words in shown(book(heat(f"name: pa\n{text}")))


def test_derating_is_drawn_down_to_nothing_at_the_maximum() -> None:
    text = (
        "name: pa\npower: 4 W\nrated_power: 10 W\njunction_case: 3 K/W\ncase_sink: 1 K/W\nsink_ambient: 6 K/W\n"
        "ambient: 25 degC\nmaximum: 150 degC"
    )
    said = shown(book(heat(text)))
    # Closed form: the rating of 10 W holds to 150 - 10·10 = 50 degC, and nothing is left at 150 degC.
    assert "50 °C 10 W" in said
    assert "150 °C 0 W" in said
    assert "where it bears 10 W" in said


FAULTS = [
    ("ambient: 25 degC", "missing-key"),
    ("input_voltage: 12 V\nambient: 25 degC", "missing-key"),
    ("power: 3 W", "missing-key"),
    ("input_voltage: 5 V\noutput_voltage: 12 V\ncurrent: 0.1 A\nambient: 25 degC", "power"),
    ("input_voltage: 12 V\ncurrent: 0.1 A\nrf_output: 5 W\nambient: 25 degC", "power"),
    ("power: -3 W\nambient: 25 degC", "sign"),
    ("power: 3 dBm\nambient: 25 degC", "dimension"),
    ("power: 3 W\nambient: 25 degC\njunction_case: -1 K/W", "sign"),
    ("power: 3 W\nambient: 25 degC\njunction_case: 1 K", "dimension"),
    ("power: 3 W\nambient: -300 degC", "number"),
    ("power: 3 W\nambient: 25", "no-unit"),
    ("power: 3 W\ncurrent: 1 A\nambient: 25 degC", "given-twice"),
    ("input_voltage: 12 V\noutput_voltage: 5 V\ncurrent: 1 A\nrf_output: 1 W\nambient: 25 degC", "given-twice"),
    ("input_voltage: 12 V\ncurrent: 1 A\nown_current: 1 mA\nambient: 25 degC", "given-twice"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_and_the_rest_stands(text: str, code: str) -> None:
    sound = heat("name: sound\npower: 1 W\njunction_case: 1 K/W\ncase: 30 degC")
    found = book(heat(f"name: pa\n{text}"), sound, sound=False)
    assert [p.code for p in found.problems] == [code], [str(p) for p in found.problems]
    assert result(found, "junction#sound").value == 31.0
    assert not [r for r in found.results if r.name == "pa"]


def test_a_part_without_a_name_is_a_fault() -> None:
    assert [p.code for p in book(heat("power: 1 W\ncase: 30 degC"), sound=False).problems] == ["missing-key"]
