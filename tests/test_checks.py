"""Level-plan checks: headroom at the strongest signal, what is left over noise at the weakest, impossible figures."""

from __future__ import annotations

import math

import pytest
from workshop import block, book_of, chain, change, entry

from logbook.book import Book
from logbook.html import render
from logbook.pages import block_pieces
from logbook.pages.revision import revision_pieces
from logbook.plots import draw
from logbook.prediction import Terms
from logbook.showing.level_check import headrooms
from logbook.terminal import render as render_text

STAGES = """name: pad, loss: 3 dB, max_input: 1 W
name: amp, gain: 20 dB, nf: 3 dB, op1db: 10 dBm, max_input: -5 dBm
name: mixer, gain: -7 dB, nf: 8 dB, ip1db: 3 dBm, lo: 60 MHz
name: post, gain: 15 dB, nf: 4 dB, op1db: 30 dBm"""

# By hand at the stages' inputs: the amplifier's op1db of 10 dBm is 10 - 20 + 1 = -9 dBm at its input; pad: none given.
GAIN_AHEAD = [0.0, -3.0, 17.0, 10.0]
IP1DB = [math.inf, -9.0, 3.0, 16.0]


def book(more: str, stages: str = STAGES, sound: bool = True) -> Book:
    text = chain(stages, more=f"bandwidth: 10 kHz\n{more}")
    return book_of(entry("01-01", text, revision="A"), sound=sound)


def shown(book: Book) -> str:
    return " ".join(render_text(revision_pieces(book, book.revisions["A"]), 160).split())


def caution(book: Book) -> list[str]:
    return [p.message for p in book.problems if p.code == "overload"]


@pytest.mark.parametrize("level", [-40.0, -20.0, -6.5])
def test_headroom_of_every_stage_by_hand(level: float) -> None:
    found = book(f"strongest: {level} dBm", sound=False)
    prediction = found.predict(found.revisions["A"].chains["rx"], Terms())
    expected = [point - level - ahead for point, ahead in zip(IP1DB, GAIN_AHEAD, strict=True)]
    assert headrooms(prediction, level) == pytest.approx(expected)
    # What is predicted as a result is the headroom of the stage that compresses first.
    assert prediction.totals["headroom_strongest"].value == pytest.approx(min(expected))


def test_a_stage_that_would_compress_is_named() -> None:
    # The mixer has 3 - (-10) - 17 = -4 dB, the amplifier -9 + 10 + 3 = 4 dB.
    said = shown(book("strongest: -10 dBm"))
    assert "mixer would compress" in said
    assert "mixer gets 4.0 dB more than its 1 dB point" in said


def test_several_that_would_compress_are_named_with_the_worst() -> None:
    said = shown(book("strongest: -4 dBm", sound=False))
    assert "amp, mixer would compress" in said
    assert "mixer gets 10.0 dB more" in said


def test_with_none_compressing_the_nearest_is_named() -> None:
    said = shown(book("strongest: -30 dBm"))
    assert "no stage compresses" in said
    assert "mixer is the nearest, 16.0 dB away" in said


def test_signal_to_noise_at_the_weakest() -> None:
    """Closed form for the last stage: signal less k T0 F B with F by Friis, at the chain's input."""
    found = book("weakest: -110 dBm")
    factor = 10**0.3
    factor += (10**0.3 - 1) * 10**0.3
    factor += (10**0.8 - 1) / 10**1.7
    factor += (10**0.4 - 1) / 10**1.0
    floor = 10 * math.log10(1.380649e-23 * 290 * factor * 1e4 / 1e-3)
    prediction = found.predict(found.revisions["A"].chains["rx"], Terms())
    assert prediction.totals["snr_weakest"].value == pytest.approx(-110 - floor, abs=1e-6)
    assert f"{-110 - floor:.2f}" in shown(found)


def test_without_points_nothing_can_be_said() -> None:
    said = shown(book("strongest: -30 dBm", "name: amp, gain: 20 dB, nf: 3 dB"))
    assert "No stage gives a compression point" in said


@pytest.mark.parametrize(
    ("more", "stages"),
    [
        # The pad leaves the amplifier -2 - 3 = -5 dBm, which it bears; 1 dB more it does not.
        ("strongest: -2 dBm", []),
        ("strongest: -1 dBm", ["amp"]),
        ("level: -1 dBm", ["amp"]),
        ("level: -60 dBm\nstrongest: -1 dBm", ["amp"]),
        ("strongest: 1.1 W", ["pad", "amp"]),
        ("weakest: -1 dBm", []),
    ],
)
def test_a_stage_that_gets_more_than_it_bears_is_a_caution(more: str, stages: list[str]) -> None:
    found = book(more, sound=False)
    problems = [p for p in found.problems if p.code == "overload"]
    assert [p.message.split("'")[1] for p in problems] == stages
    assert {p.severity for p in problems} <= {"caution"}
    assert len(list(found.problems)) == len(stages)


def test_a_caution_stands_at_the_stage_and_the_block_still_shows() -> None:
    found = book("strongest: -1 dBm", sound=False)
    problem = next(iter(found.problems))
    block_ = found.entries[0].blocks[0]
    assert block_.text.split("\n")[problem.place.line - block_.line - 1].strip().startswith("- {name: amp")
    html = render(block_pieces(found, found.entries[0], block_), lambda to, _: to, draw)
    assert "overload" in html
    assert "it bears -5.00 dBm at most" in problem.message.replace("\N{MINUS SIGN}", "-")


def test_an_inherited_stage_is_reported_once_and_a_new_gain_is_found() -> None:
    """B raises the gain ahead of an amplifier that bore what it got on A; C inherits it."""
    stages = "name: first, gain: 10 dB\nname: second, gain: 10 dB, max_input: 0 dBm"
    found = book_of(
        entry("01-01", chain(stages, more="strongest: -12 dBm"), revision="A"),
        entry("02-01", change("  - {set: first, to: {gain: 14 dB}}"), revision="B"),
        entry("03-01", change("  - {set: first, to: {gain: 15 dB}}"), revision="C"),
        sound=False,
    )
    said = caution(found)
    assert len(said) == 1
    assert "on revision B" in said[0]


@pytest.mark.parametrize(
    ("stage", "faulty"),
    [
        # With its image open a mixer's single-sideband figure cannot be below 3.01 dB.
        ("name: mixer, gain: -6 dB, nf: 2.9 dB, lo: 60 MHz, image_rejection: 0 dB", True),
        ("name: mixer, gain: -6 dB, nf: 3.1 dB, lo: 60 MHz, image_rejection: 0 dB", False),
        # 10 lg 2 to ten digits: all of it is the image's, and rounding does not make it a fault.
        ("name: mixer, gain: -6 dB, nf: 3.010299956 dB, lo: 60 MHz, image_rejection: 0 dB", False),
        ("name: mixer, gain: -6 dB, nf: 2.9 dB, lo: 60 MHz", False),
        ("name: mixer, gain: -6 dB, nf_dsb: 2.9 dB, lo: 60 MHz, image_rejection: 0 dB", False),
    ],
)
def test_a_noise_figure_that_no_stage_can_have(stage: str, faulty: bool) -> None:
    found = book("", stage, sound=False)
    assert [p.code for p in found.problems] == (["nf-below-image"] if faulty else [])


def test_a_plan_is_checked_too() -> None:
    stages = "name: first, gain: 10 dB\nname: second, gain: 10 dB, max_input: 0 dBm"
    found = book_of(
        entry("01-01", chain(stages, more="strongest: -12 dBm"), revision="A"),
        entry("02-01", change("  - {set: first, to: {gain: 14 dB}}"), revision="B", front="state: planned\n"),
        sound=False,
    )
    assert [p.code for p in found.problems] == ["overload"]


def test_a_reading_that_a_pad_would_not_bear_is_a_problem() -> None:
    bench = block("bench", "bench: shack\npath:\n  - {name: pad, loss: 10 dB, max_input: 1 W}")
    text = block("reading", "at: 50 MHz\nbench: shack\nthrough: [pad]\nresults: {output_level: 21 dBm}")
    found = book_of(entry("01-01", bench, chain(STAGES), text, revision="A"), sound=False)
    assert [(p.code, p.severity) for p in found.problems] == [("overload", "problem")]
