"""`staircase` and readings through it: SciPy's fits, the line of JCGM 100 H.3, Monte Carlo, history, faults."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from scipy import optimize, stats
from uncertainties import correlated_values_norm
from workshop import block, book_of, chain, delta, entry

from logbook.book import Book, make_book
from logbook.model import Result
from logbook.pages import block_pieces
from logbook.terminal import render

BENCH = block("bench", "bench: shack\nreads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB}\ndrives: {accuracy: ± 0.8 dB}")
CHAIN = chain("name: lna, gain: 18 dB, nf: 1.1 dB, op1db: 10 dBm")

LEVELS = [-70.0, -60.0, -50.0, -40.0, -30.0, -20.0, -10.0]
VOLTS = [0.412, 0.601, 0.803, 1.001, 1.204, 1.399, 1.590]


def staircase(levels: list[float], outputs: list[float], more: str = "", *, name: str = "log", unit: str = "V") -> str:
    given = ", ".join(f"{level:.10g} dBm" for level in levels)
    read = ", ".join(f"{output:.10g} {unit}" for output in outputs)
    return block("staircase", f"name: {name}\ninput: [{given}]\noutput: [{read}]\n{more}")


def through(volts: str, more: str = "", quantity: str = "output_level", detector: str = "log") -> str:
    return block("reading", f"through_detector: {detector}\nat: 50 MHz\n{more}\nresults: {{{quantity}: {volts}}}")


def change(gain: float = 17.0) -> str:
    return block("change", f"chain: rx\nsteps:\n  - set: lna\n    to: {{gain: {gain} dB}}")


def book(*blocks: str) -> Book:
    return book_of(entry("01-01", BENCH, CHAIN, *blocks, revision="A"))


def result(book: Book, key: str) -> Result:
    return [r for r in book.results if r.key == f"rx/{key}"][-1]


@pytest.mark.parametrize("seed", range(3))
@pytest.mark.parametrize("falling", [False, True])
def test_line_against_scipy(seed: int, falling: bool) -> None:
    random = np.random.default_rng(seed)
    levels = np.linspace(-72, -8, 17)
    slope = -0.021 if falling else 0.021
    volts = np.round(slope * (levels + 92) + random.normal(0, 0.004, levels.size), 4)
    order = random.permutation(levels.size)
    found = book(staircase(levels[order].tolist(), volts[order].tolist()))
    line = stats.linregress(levels, volts)
    assert result(found, "slope#log").value == pytest.approx(line.slope, rel=1e-9)
    assert result(found, "slope#log").u == pytest.approx(line.stderr, rel=1e-9)

    def detector(level: np.ndarray, per_db: float, nothing: float) -> np.ndarray:
        return per_db * (level - nothing)

    best, covariance = optimize.curve_fit(detector, levels, volts, p0=(slope, -90.0))
    assert result(found, "intercept#log").value == pytest.approx(best[1], rel=1e-6)
    assert result(found, "intercept#log").u == pytest.approx(math.sqrt(covariance[1, 1]), rel=1e-4)
    errors = (volts - line.intercept) / line.slope - levels
    assert result(found, "conformance_error#log").value == pytest.approx(np.abs(errors).max(), rel=1e-6)
    by_order = np.abs(np.diff(errors[order])).max()
    assert result(found, "step_error#log").value == pytest.approx(by_order, rel=1e-6)


# JCGM 100:2008 H.3, table H.6: temperature and correction of a thermometer, from memory; printed there (H.3.3):
# y2 = 0.00218, s(y2) = 0.00067, and about t0 = 20: y1 = -0.1712, s(y1) = 0.0029, r = -0.930, s = 0.0035.
T = [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511]
B = [-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160]


def test_thermometer_of_the_guide_as_a_detector() -> None:
    found = book(staircase(T, B, name="thermometer"))
    slope, intercept = result(found, "slope#thermometer"), result(found, "intercept#thermometer")
    assert slope.value == pytest.approx(0.00218, abs=0.5e-5)
    assert slope.u == pytest.approx(0.00067, abs=0.5e-5)
    y1, y2 = correlated_values_norm([(-0.1712, 0.0029), (0.00218, 0.00067)], [[1, -0.930], [-0.930, 1]])
    nothing = 20 - y1 / y2
    assert intercept.value == pytest.approx(nothing.nominal_value, rel=0.005)
    assert intercept.u == pytest.approx(nothing.std_dev, rel=0.02)


@pytest.mark.parametrize("per_division", [10.0, 5.0])
def test_step_attenuator_on_a_display_goes_one_division_a_step(per_division: float) -> None:
    """Common practice: 10 dB steps on a display of 10 dB a division."""
    levels = [-10.0 * step for step in range(8)]
    found = book(staircase(levels, [8.0 + level / per_division for level in levels], name="display", unit="div"))
    slope = result(found, "slope#display")
    assert (slope.value, slope.unit) == (pytest.approx(1 / per_division), "div/dB")
    assert result(found, "step_error#display").value == pytest.approx(0.0, abs=1e-9)
    assert result(found, "log_range_1db#display").bound == "lower"
    assert result(found, "log_range_1db#display").value == pytest.approx(70.0)


def test_the_fit_holds_within_its_window_and_the_range_ends_where_it_saturates() -> None:
    """A straight line of 20 mV/dB that turns into a plateau: ±1 dB is left where the line is 1 dB above it."""
    levels = np.arange(-80.0, 1.0, 2.0)
    volts = np.minimum(0.02 * (levels + 90), 0.02 * 75)
    found = book(staircase(levels.tolist(), volts.tolist(), "fit: [-70 dBm, -30 dBm]"))
    assert result(found, "slope#log").value == pytest.approx(0.02)
    assert result(found, "intercept#log").value == pytest.approx(-90.0)
    for limit in (0.5, 1.0, 3.0):
        reach = result(found, f"log_range_{limit:g}db#log")
        # The lowest step is still good, so that more may lie below it; interpolated between steps of 2 dB.
        assert reach.bound == "lower"
        assert reach.value == pytest.approx(-15 + limit + 80, abs=0.6)


def test_file_of_steps(tmp_path: Path) -> None:
    rows = "\n".join(f"{level};{volts}".replace(".", ",") for level, volts in zip(LEVELS, VOLTS, strict=True))
    (tmp_path / "steps.csv").write_text(f"Input (dBm);Output (V)\n{rows}\n")
    text = block("staircase", "name: log\nfile: steps.csv")
    found = make_book([entry("01-01", CHAIN, text, revision="A")], tmp_path)
    assert not list(found.problems)
    line = stats.linregress(LEVELS, VOLTS)
    assert result(found, "slope#log").value == pytest.approx(line.slope)
    assert result(found, "intercept#log").value == pytest.approx(-line.intercept / line.slope)


def test_level_through_a_detector_by_the_uncertainties_library() -> None:
    found = book(staircase(LEVELS, VOLTS, "bench: shack"), through("1.100(5) V"))
    line = stats.linregress(LEVELS, VOLTS)
    mean = float(np.mean(np.square(LEVELS))) ** 0.5
    r = -float(np.mean(LEVELS)) / mean
    pairs = [(line.intercept, line.intercept_stderr), (line.slope, line.stderr)]
    a, b = correlated_values_norm(pairs, [[1, r], [r, 1]])
    level = (1.1 - a) / b
    scatter = math.sqrt(float(np.sum((VOLTS - line.intercept - line.slope * np.array(LEVELS)) ** 2)) / 5) / line.slope
    u = math.sqrt(level.std_dev**2 + scatter**2 + (0.005 / line.slope) ** 2 + 0.8**2 / 3)
    read = result(found, "output_level@50MHz")
    assert read.value == pytest.approx(level.nominal_value)
    assert read.u == pytest.approx(u, rel=1e-6)
    assert (read.basis, read.unit, read.read_as) == ("measured", "dBm", "1.100(5) V through detector log")


def test_the_detector_stands_in_the_place_of_the_benchs_instrument() -> None:
    """What the analyser gets wrong (±1.5 dB), its noise and what it bears do not enter; the pad ahead does."""
    bench = block(
        "bench",
        "bench: shack\nreads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, floor: -90 dBm/Hz, max_input: -60 dBm}\n"
        "path:\n  - {name: pad, loss: 10 ± 0.2 dB}",
    )
    text = "bench: shack\nthrough: [pad]\nrbw: 10 kHz\naveraging: power"
    found = book_of(
        entry("01-01", bench, CHAIN, staircase(LEVELS, VOLTS), through("1.10 V"), revision="A"),
        entry("01-02", through("1.10 V", text)),
    )
    plain, behind = (r for r in found.results if r.quantity == "output_level")
    assert behind.value == pytest.approx(plain.value + 10.0)
    assert behind.u == pytest.approx(math.hypot(plain.u, 0.2 / math.sqrt(3)))
    assert behind.bound == ""


def two(first: str, second: str, *between: str) -> Book:
    """A reading on A and one on B; whatever stands between comes in B's entry, ahead of its reading."""
    return book_of(
        entry("01-01", BENCH, CHAIN, staircase(LEVELS, VOLTS, "bench: shack"), through(first), revision="A"),
        entry("02-01", change(), *between, through(second), revision="B"),
    )


SCATTER_DB = (
    math.sqrt(stats.linregress(LEVELS, VOLTS).stderr ** 2 * np.var(LEVELS) * len(LEVELS))
    / stats.linregress(LEVELS, VOLTS).slope
)


def test_equal_volts_leave_nothing_of_the_line_and_of_the_source() -> None:
    """The line's error and that of the generator which made it are the same in both readings."""
    changed = delta(two("1.10 V", "1.10 V"), "rx/output_level@50MHz", "B")
    assert changed.delta == 0.0
    assert changed.u == pytest.approx(math.sqrt(2) * SCATTER_DB)
    assert changed.verdict == "same"


def test_levels_far_apart_differ_by_what_the_slope_is_wrong() -> None:
    """Outputs alike in distance to the middle of the line: the height's doubt cancels, that of the slope counts twice.

    By Monte Carlo: detectors with this line and this scatter are stepped and fitted anew, and both volts are read
    through every fit.
    """
    line = stats.linregress(LEVELS, VOLTS)
    low, high = 0.5, 1.5
    changed = delta(two(f"{low} V", f"{high} V"), "rx/output_level@50MHz", "B")
    scatter = SCATTER_DB * line.slope
    random = np.random.default_rng(7)
    levels = np.array(LEVELS)
    volts = line.intercept + line.slope * levels + random.normal(0, scatter, (20_000, len(LEVELS)))
    centred = levels - levels.mean()
    slopes = volts @ centred / (centred @ centred)
    spread = float(np.std((high - low) / slopes))
    assert spread > 0.2 * SCATTER_DB
    assert changed.u == pytest.approx(math.hypot(spread, math.sqrt(2) * SCATTER_DB), rel=0.01)
    assert changed.verdict == "changed"


@pytest.mark.parametrize("where", ["another detector", "calibrated anew"])
def test_another_line_does_not_cancel(where: str) -> None:
    name = "log" if where == "calibrated anew" else "other"
    again = staircase(LEVELS, [volts + 0.001 for volts in VOLTS], "bench: shack", name=name)
    found = book_of(
        entry("01-01", BENCH, CHAIN, staircase(LEVELS, VOLTS, "bench: shack"), through("1.10 V"), revision="A"),
        entry("02-01", change(), again, through("1.10 V", detector=name), revision="B"),
    )
    line = stats.linregress(LEVELS, VOLTS)
    mid = float(np.mean(VOLTS))
    height = SCATTER_DB / math.sqrt(len(LEVELS))
    tilt = (1.10 - mid) / line.slope**2 * line.stderr
    one = SCATTER_DB**2 + height**2 + tilt**2
    # The generator is the same; the rest is not.
    assert delta(found, "rx/output_level@50MHz", "B").u == pytest.approx(math.sqrt(2 * one), rel=1e-3)


def test_calibrated_again_on_the_same_day_is_another_line() -> None:
    """Before and after an adjustment in one session: what is read through either shares nothing of the line."""
    adjusted = staircase(LEVELS, [volts + 0.02 for volts in VOLTS])
    found = book_of(
        entry("01-01", CHAIN, staircase(LEVELS, VOLTS), through("1.10 V"), revision="A"),
        entry("01-01", change(), adjusted, through("1.12 V"), revision="B"),
    )
    assert delta(found, "rx/output_level@50MHz", "B").u > math.sqrt(2) * SCATTER_DB * 1.05


def test_a_display_in_divisions_reads_levels() -> None:
    levels = [-10.0 * step for step in range(8)]
    found = book(
        staircase(levels, [8.0 + level / 10 for level in levels], name="display", unit="div"),
        through("3.5 div", detector="display"),
    )
    assert result(found, "output_level@50MHz").value == pytest.approx(-45.0)


def test_reading_beyond_the_steps_says_so() -> None:
    found = book(staircase(LEVELS, VOLTS), through("1.9 V"))
    assert any("outside the range" in note for note in result(found, "output_level@50MHz").notes)


def test_drift_between_revisions() -> None:
    """A slope 10 % steeper is beyond doubt; the intercept's doubt keeps what the two fits do not share."""
    steeper = [1.1 * volts for volts in VOLTS]
    target = block("target", "quantity: conformance_error\nname: log\nlimit: <= 1 dB")
    found = book_of(
        entry("01-01", BENCH, CHAIN, staircase(LEVELS, VOLTS, "bench: shack"), target, revision="A"),
        entry("02-01", change(), staircase(LEVELS, steeper, "bench: shack"), revision="B"),
    )
    slope = delta(found, "rx/slope#log", "B", "derived")
    assert (slope.verdict, slope.stated) == ("changed", True)
    assert slope.delta == pytest.approx(0.1 * stats.linregress(LEVELS, VOLTS).slope)
    intercept = delta(found, "rx/intercept#log", "B", "derived")
    assert (intercept.verdict, round(intercept.delta, 9)) == ("same", 0.0)
    # The generator's accuracy, 0.46 dB in each, is common to both and cancels.
    assert intercept.u < 0.46
    assert {t.revision: t.verdict for t in found.findings.targets} == {"A": "meets", "B": "meets"}
    last = found.entries[-1]
    shown = " ".join(render(block_pieces(found, last, last.blocks[-1]), 110).split())
    assert "Since 2026-01-01 its slope has changed by +10.00 %" in shown


FAULTS = [
    (staircase(LEVELS, VOLTS[:-1]), "lengths"),
    (staircase(LEVELS[:2], VOLTS[:2]), "too-few"),
    (staircase([-10.0] * 4, VOLTS[:4]), "fit"),
    (staircase(LEVELS, [1.0] * 7), "fit"),
    # Nothing but noise: the slope is within its doubt.
    (staircase(LEVELS, [0.40, 0.42, 0.39, 0.43, 0.38, 0.41, 0.40]), "fit"),
    (staircase(LEVELS, VOLTS, "fit: [0 dBm, 10 dBm]"), "fit"),
    (staircase(LEVELS, VOLTS, "fit: [-20 dBm, -10 dBm]"), "fit"),
    (staircase(LEVELS, VOLTS, "fit: -20 dBm"), "pair"),
    (staircase(LEVELS, VOLTS, "file: steps.csv"), "steps"),
    (staircase(LEVELS, VOLTS, unit="A"), "dimension"),
    (block("staircase", "name: log\ninput: [1 dBm, 2 dBm, 3 dBm]\noutput: [1 V, 2 div, 3 V]"), "dimension"),
    (block("staircase", "name: log\ninput: [1 dBm, 2 dBm, 3 dBm]"), "steps"),
    (block("staircase", "name: log"), "steps"),
    (block("staircase", "name: log\nfile: none.csv"), "file"),
    (block("staircase", "name: log\nfile: ../none.csv"), "path"),
    (block("staircase", "name: log\nfile: steps.csv"), "dimension"),
    (staircase(LEVELS, VOLTS, "bench: shed"), "unknown-bench"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_and_the_rest_stands(tmp_path: Path, text: str, code: str) -> None:
    (tmp_path / "steps.csv").write_text("Input (dBm),Output (A)\n-30,1\n-20,2\n-10,3\n")
    blocks = (CHAIN, text, staircase(LEVELS, VOLTS, name="sound"))
    found = make_book([entry("01-01", *blocks, revision="A")], tmp_path)
    assert {p.code for p in found.problems} == {code}, [str(p) for p in found.problems]
    assert result(found, "slope#sound").value > 0
    assert not [r for r in found.results if r.name == "log"]
    faulty = found.entries[0].blocks[1]
    assert code in render(block_pieces(found, found.entries[0], faulty), 100)


@pytest.mark.parametrize(
    ("text", "code"),
    [
        (through("1.1 V", detector="lg"), "unknown-detector"),
        (through("3 div"), "detector"),
        (block("reading", "at: 50 MHz\nresults: {output_level: 3 div}"), "detector"),
    ],
)
def test_fault_of_a_reading_through_a_detector(text: str, code: str) -> None:
    found = book_of(entry("01-01", CHAIN, staircase(LEVELS, VOLTS), text, revision="A"), sound=False)
    assert [p.code for p in found.problems] == [code]
    assert not [r for r in found.results if r.quantity == "output_level"]
