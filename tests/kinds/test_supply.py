"""`supply` from text to results: closed forms, modulation by FFT and Bessel functions, the `uncertainties` library."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import special
from uncertainties import ufloat, umath
from workshop import block, book_of, chain, entry

from logbook.book import Book
from logbook.model import Result
from logbook.pages import block_pieces
from logbook.terminal import render

KT0 = 1.380649e-23 * 290
CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB\nname: det, gain: 0 dB, nf: 6 dB", signal="80 kHz")


def supply(text: str) -> str:
    return block("supply", text)


def book(*blocks: str, sound: bool = True, stages: str = CHAIN) -> Book:
    return book_of(entry("01-01", stages, *blocks, revision="A"), sound=sound)


def result(book: Book, key: str) -> Result:
    return next(r for r in reversed(book.results) if r.key == f"rx/{key}" and r.block == "supply")


def shown(book: Book) -> str:
    last = book.entries[-1]
    return " ".join(render(block_pieces(book, last, last.blocks[-1]), 140).split())


@pytest.mark.parametrize(
    ("line", "rms"),
    [
        # 20 uV in 10 Hz to 100 kHz is 63.2 nV/rtHz (closed form), and the other way round.
        ("noise: 20 uV, band: [10 Hz, 100 kHz]", 20e-6),
        ("noise: 63.2 nV/rtHz, band: [10 Hz, 100 kHz]", 63.2e-9 * math.sqrt(99_990)),
        ("noise: 5 uV/V, output: 4 V, band: [10 Hz, 100 kHz]", 20e-6),
        ("noise: 5 uV/V, output: -4 V, band: [10 Hz, 100 kHz]", 20e-6),
    ],
)
def test_noise_in_each_of_its_forms(line: str, rms: float) -> None:
    found = book(supply(f"lines: [{{name: reg, {line}}}]"))
    assert result(found, "supply_noise#reg").value == pytest.approx(rms)
    assert "63.2" in shown(found)
    assert "nV/√Hz" in shown(found)


def test_what_arrives_against_thermal_noise() -> None:
    """63.2 nV/rtHz less 40 dB across 50 ohm in 10 kHz; the amplifier's own noise there is k T0 F G B."""
    found = book(supply("stage: amp\nlines: [{name: reg, noise: 63.2 nV/rtHz, psrr: 40 dB}]"))
    watt = (63.2e-11) ** 2 * 1e4 / 50
    own = KT0 * 10**0.3 * 100 * 1e4
    assert result(found, "supply_arriving#amp").value == pytest.approx(10 * math.log10(watt / 1e-3))
    assert result(found, "supply_rise#amp").value == pytest.approx(10 * math.log10(1 + watt / own))
    assert {r.better for r in found.results if r.quantity in ("supply_arriving", "supply_rise")} == {"lower"}


def test_lines_add_as_powers_with_the_doubt_of_each() -> None:
    text = """
stage: amp
lines:
  - {name: one, noise: 60(3) nV/rtHz, psrr: 40(2) dB}
  - {name: two, noise: 20 ± 2 uV, band: [10 Hz, 100 kHz], psrr: 46 dB}
  - {name: apart, noise: 1 uV/rtHz}
"""
    found = book(supply(text))
    one = ufloat(60e-9, 3e-9) * 10 ** (-ufloat(40, 2) / 20)
    two = ufloat(20e-6, 2e-6 / math.sqrt(3)) / math.sqrt(99_990) * 10 ** (-46 / 20)
    level = 10 * umath.log10((one**2 + two**2) * 1e4 / 50 / 1e-3)
    arriving = result(found, "supply_arriving#amp")
    assert arriving.value == pytest.approx(level.nominal_value)
    assert arriving.u == pytest.approx(level.std_dev, rel=0.02)
    rise = 10 * umath.log10(1 + (one**2 + two**2) * 1e4 / 50 / (KT0 * 10**0.3 * 100 * 1e4))
    assert result(found, "supply_rise#amp").u == pytest.approx(rise.std_dev, rel=0.02)


def test_amplitude_noise_by_fft() -> None:
    """Noise in 1 Hz stands for a tone of root two times its rms; the gain follows it as 10^(k v/20), on 25 dB/V."""
    density, slope = 40e-6, 25.0
    found = book(supply(f"lines: [{{name: agc, noise: {density * 1e6:g} uV/rtHz, control: {slope:g} dB/V}}]"))
    phase = 2 * np.pi * np.arange(4096) / 4096
    wave = np.cos(64 * phase) * 10 ** (slope * math.sqrt(2) * density * np.cos(3 * phase) / 20)
    lines = np.abs(np.fft.rfft(wave))
    assert result(found, "amplitude_noise#agc").value == pytest.approx(20 * math.log10(lines[67] / lines[64]), abs=1e-3)
    falling = book(supply(f"lines: [{{name: agc, noise: {density * 1e6:g} uV/rtHz, control: -25 dB/V}}]"))
    assert result(falling, "amplitude_noise#agc").value == result(found, "amplitude_noise#agc").value


def test_phase_noise_by_bessel_functions() -> None:
    """The deviation K V/f of a tone is the modulation index: sidebands J1/J0."""
    density, pushing, offset = 40e-9, 20e3, 1e3
    text = "lines: [{name: vco, noise: 40 nV/rtHz, pushing: 20 kHz/V, offset: 1 kHz}]"
    index = pushing * math.sqrt(2) * density / offset
    expected = 20 * math.log10(special.jv(1, index) / special.jv(0, index))
    found = result(book(supply(text)), "phase_noise@1kHz#vco")
    assert found.value == pytest.approx(expected, abs=1e-6)
    assert found.unit == "dBc/Hz"


def test_doubt_of_slopes_and_outputs_counts() -> None:
    text = """
lines:
  - {name: agc, noise: 63 ± 5 nV/rtHz, control: 25(2) dB/V}
  - {name: vco, noise: 40(1) nV/rtHz, pushing: 20(3) kHz/V, offset: 1 kHz}
  - {name: reg, noise: 5.0(2) uV/V, output: 12.0(6) V, band: [10 Hz, 100 kHz]}
"""
    found = book(supply(text))
    agc = 20 * umath.log10(ufloat(63, 5 / math.sqrt(3)) * ufloat(25, 2))
    vco = 20 * umath.log10(ufloat(40, 1) * ufloat(20, 3))
    reg = ufloat(5e-6, 0.2e-6) * ufloat(12, 0.6)
    assert result(found, "amplitude_noise#agc").u == pytest.approx(agc.std_dev, rel=0.01)
    assert result(found, "phase_noise@1kHz#vco").u == pytest.approx(vco.std_dev, rel=0.01)
    assert result(found, "supply_noise#reg").u == pytest.approx(reg.std_dev, rel=1e-6)


def test_history_of_a_regulator() -> None:
    """A quieter regulator behind the same rejection: the rejection's doubt is the same error and cancels."""
    text = "stage: amp\nlines: [{{name: reg, noise: {} uV, band: [10 Hz, 100 kHz], psrr: 40(3) dB}}]"
    step = block("change", "chain: rx\nsteps:\n  - set: det\n    to: {nf: 5 dB}")
    target = block("target", "quantity: supply_noise\nname: reg\nlimit: <= 10 uV")
    found = book_of(
        entry("01-01", CHAIN, target, supply(text.format("20(1)")), revision="A"),
        entry("02-01", step, supply(text.format("5.0(2)")), revision="B"),
    )
    deltas = {d.quantity: d for d in found.findings.deltas if d.to == "B" and d.basis == "derived"}
    assert deltas["supply_noise"].verdict == "better"
    assert deltas["supply_arriving"].delta == pytest.approx(-20 * math.log10(4))
    own = 20 / math.log(10) * math.hypot(1 / 20, 0.2 / 5)
    assert deltas["supply_arriving"].u == pytest.approx(own, rel=0.01)
    assert {t.revision: t.verdict for t in found.findings.targets} == {"A": "misses", "B": "meets"}


def test_on_a_plan_it_is_a_prediction() -> None:
    plan = entry(
        "02-01",
        supply("lines: [{name: reg, noise: 1 uV, band: [1 Hz, 1 kHz]}]"),
        revision="B",
        front="state: planned\n",
    )
    found = book_of(entry("01-01", CHAIN, revision="A"), plan)
    assert result(found, "supply_noise#reg").basis == "predicted"


@pytest.mark.parametrize(
    ("stages", "text", "words"),
    [
        (CHAIN, "stage: amp\nlines: [{name: reg, noise: 1 nV/rtHz}]", "no line gives the load's 'psrr'"),
        (
            chain("name: amp, gain: 20 dB, nf: 3 dB", more=""),
            "stage: amp\nlines: [{name: reg, noise: 1 nV/rtHz, psrr: 3 dB}]",
            "the chain gives no 'bandwidth'",
        ),
        ("", "stage: amp\nlines: [{name: reg, noise: 1 nV/rtHz, psrr: 3 dB}]", "no chain is described"),
        (
            chain("name: amp, gain: 20 dB"),
            "stage: amp\nlines: [{name: reg, noise: 1 nV/rtHz, psrr: 3 dB}]",
            "the chain's own noise there is not known",
        ),
        (
            chain("name: amp, gain: 20 dB, nf: 3 dB"),
            "stage: amp\nlines: [{name: reg, noise: 1 uV, band: [1 Hz, 1 kHz], psrr: 3 dB}]",
            "outside the band",
        ),
        (CHAIN, "stage: amp\nlines: [{name: reg, noise: 1 uV/rtHz, psrr: 3 dB}]", "filter the line"),
        (CHAIN, "lines: [{name: ht, noise: 1 uV/V, output: 250 V, band: [1 Hz, 1 kHz]}]", "it can kill"),
    ],
)
def test_what_the_page_says_besides(stages: str, text: str, words: str) -> None:
    assert words in shown(book(supply(text), stages=stages))


FAULTS = [
    ("lines: [{name: reg, noise: 20 uV}]", "missing-key"),
    ("lines: [{name: reg, noise: 20 uV/V, band: [1 Hz, 1 kHz]}]", "missing-key"),
    ("lines: [{name: reg, noise: 20 uV/V, output: 5 V}]", "missing-key"),
    ("lines: [{name: reg, noise: 1 nV/rtHz, pushing: 1 kHz/V}]", "missing-key"),
    ("lines: [{name: reg, noise: 20 uV, band: [1 kHz, 1 Hz]}]", "pair"),
    ("lines: [{name: reg, noise: 20 uV, band: [1 kHz, 1 kHz]}]", "pair"),
    ("lines: [{name: reg, noise: 20 uV, band: 1 kHz}]", "pair"),
    ("lines: [{name: reg, noise: 1 nV/rtHz, psrr: -40 dB}]", "sign"),
    ("lines: [{name: reg, noise: -1 nV/rtHz}]", "sign"),
    ("lines: [{name: reg, noise: 0 V, band: [1 Hz, 1 kHz]}]", "sign"),
    ("lines: [{name: reg, noise: 1 nV/rtHz, control: 0 dB/V}]", "sign"),
    ("lines: [{name: reg, noise: 1 nV/rtHz, pushing: 0 Hz/V, offset: 1 kHz}]", "sign"),
    ("lines: [{name: reg, noise: 1 uV/V, output: 0 V, band: [1 Hz, 1 kHz]}]", "sign"),
    ("lines: [{name: reg, noise: 20 dBm}]", "dimension"),
    ("lines: [{name: reg, noise: 1 nV/rtHz, control: 25 V/dB}]", "dimension"),
    ("lines: [{name: a, noise: 1 nV/rtHz}, {name: a, noise: 2 nV/rtHz}]", "duplicate-line"),
    ("stage: ampp\nlines: [{name: reg, noise: 1 nV/rtHz}]", "unknown-stage"),
    ("chain: tx\nlines: [{name: reg, noise: 1 nV/rtHz}]", "unknown-chain"),
    ("lines: []", "empty"),
    ("stage: amp", "missing-key"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_and_the_rest_stands(text: str, code: str) -> None:
    sound = supply("lines: [{name: sound, noise: 20 uV, band: [10 Hz, 100 kHz]}]")
    found = book(supply(text), sound, sound=False)
    assert [p.code for p in found.problems] == [code], [str(p) for p in found.problems]
    assert result(found, "supply_noise#sound").value == pytest.approx(20e-6)
    faulty = found.entries[0].blocks[1]
    assert code in render(block_pieces(found, found.entries[0], faulty), 100)
