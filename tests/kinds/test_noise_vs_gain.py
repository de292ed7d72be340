"""`noise-vs-gain` from text to results: made-up noise, SciPy's weighted fit, Monte Carlo, history, faults."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
import pytest
from scipy import optimize, stats
from uncertainties import correlated_values, umath
from workshop import block, book_of, chain, delta, entry

from logbook.book import Book
from logbook.model import Result
from logbook.pages import block_pieces
from logbook.terminal import render

BENCH = block(
    "bench",
    """
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, floor: -150 dBm/Hz, rbw_filter: gaussian}
path:
  - {name: pad, loss: 10 ± 0.2 dB}
""",
)
CHAIN = chain("name: lna, gain: 18 dB, nf: 1.1 dB\nname: vga, gain: 10 dB, gain_range: [-4 dB, 28 dB], nf: 9 dB")
SETTINGS = [0.0, 6.0, 12.0, 18.0, 24.0]


def split(settings: Sequence[float], noise: Sequence[float], more: str = "averaging: power", u: str = "") -> str:
    given = ", ".join(f"{each:g} dB" for each in settings)
    read = ", ".join(f"{each:.4f}{u} dBm" for each in noise)
    return block("noise-vs-gain", f"{more}\nsettings: [{given}]\nnoise: [{read}]")


def noise(ahead: float, after: float, settings: Sequence[float] = SETTINGS) -> np.ndarray:
    """dBm at each setting, by the definition of the two parts."""
    return 10 * np.log10(10 ** ((ahead + np.array(settings)) / 10) + 10 ** (after / 10))


def book(*blocks: str, sound: bool = True) -> Book:
    return book_of(entry("01-01", BENCH, CHAIN, *blocks, revision="A"), sound=sound)


def result(book: Book, quantity: str) -> Result:
    return next(r for r in book.results if r.quantity == quantity and r.block == "noise-vs-gain")


@pytest.mark.parametrize("order", [1, -1])
def test_known_parts_come_back(order: int) -> None:
    """Whatever the order in which the settings were gone through."""
    found = book(split(SETTINGS[::order], noise(-106.0, -98.0)[::order]))
    assert result(found, "noise_ahead").value == pytest.approx(-106.0, abs=1e-3)
    assert result(found, "noise_after").value == pytest.approx(-98.0, abs=1e-3)
    assert result(found, "equal_setting").value == pytest.approx(8.0, abs=2e-3)
    assert result(found, "equal_setting").unit == "dB"


@pytest.mark.parametrize("seed", range(3))
def test_against_scipy_with_stated_doubt(seed: int) -> None:
    """0.2 dB stated for each: least squares weighted by it, with the covariance carried into dB by `uncertainties`."""
    random = np.random.default_rng(seed)
    read = np.round(noise(-106.0, -98.0) + random.normal(0, 0.2, 5), 4)
    found = book(split(SETTINGS, read, u="(2000)"))
    gain, watt = 10 ** (np.array(SETTINGS) / 10), 10 ** (read / 10)

    def line(g: np.ndarray, a: float, b: float) -> np.ndarray:
        return a * g + b

    # The weights are those of the fitted noise, found by repeating, as the module says.
    sigma = watt
    for _ in range(30):
        scale = float(watt.max())
        best, covariance = optimize.curve_fit(
            line,
            gain,
            watt / scale,
            p0=(1e-3, 1e-2),
            sigma=sigma / scale * 0.2 * math.log(10) / 10,
            absolute_sigma=True,
        )
        sigma = line(gain, *best) * scale
    a, b = correlated_values(best, covariance)
    for quantity, value in (
        ("noise_ahead", 10 * umath.log10(a * scale)),
        ("noise_after", 10 * umath.log10(b * scale)),
        ("equal_setting", 10 * umath.log10(b / a)),
    ):
        ours = result(found, quantity)
        assert ours.value == pytest.approx(value.nominal_value, abs=1e-3), quantity
        assert ours.u == pytest.approx(value.std_dev, rel=2e-2), quantity


def test_bench_errors_move_both_parts_and_not_where_they_are_equal() -> None:
    """Accuracy and pad are common to all readings: both parts carry them, the equal setting does not."""
    read = noise(-66.0, -58.0)
    found = book(split(SETTINGS, read - 10.0, "averaging: power\nrbw: 10 kHz\nbench: shack\nthrough: [pad]"))
    ahead, after, equal = (result(found, q) for q in ("noise_ahead", "noise_after", "equal_setting"))
    # The filter's noise bandwidth is 1.0645 RBW, so that what is in the RBW is 0.27 dB less than what was read.
    assert ahead.value == pytest.approx(-66.0 - 10 * math.log10(1.0645), abs=5e-3)
    common = math.sqrt((1.5**2 + 0.2**2) / 3)
    for part in (ahead, after):
        shared = [value for source, value in part.parts.items() if source.sort == "bench"]
        assert math.hypot(*shared) == pytest.approx(common, rel=1e-3)
    # Nothing but a trace by the floor 40 dB beneath, which steepens the lowest readings a little.
    assert all(abs(part) < 1e-3 for source, part in equal.parts.items() if source.sort == "bench")


def test_the_benchs_own_noise_is_taken_off() -> None:
    """Readings that carry its floor, -150 dBm/Hz in 10.645 kHz, come back to the unit's noise as it was made up."""
    unit = noise(-106.0, -98.0) - 10.0
    floor = -150.0 + 10 * math.log10(10e3 * 1.0645)
    read = 10 * np.log10(10 ** (unit / 10) + 10 ** (floor / 10))
    found = book(split(SETTINGS, read, "averaging: power\nrbw: 10 kHz\nbench: shack\nthrough: [pad]"))
    within_rbw = 10 * math.log10(1.0645)
    assert result(found, "noise_ahead").value == pytest.approx(-106.0 - within_rbw, abs=5e-3)
    assert result(found, "noise_after").value == pytest.approx(-98.0 - within_rbw, abs=5e-3)


@pytest.mark.parametrize(("averaging", "low"), [("log", 2.507), ("voltage", 1.049)])
def test_averages_are_made_powers(averaging: str, low: float) -> None:
    found = book(split(SETTINGS, noise(-106.0, -98.0) - low, f"averaging: {averaging}"))
    assert result(found, "noise_after").value == pytest.approx(-98.0, abs=2e-3)
    assert result(found, "noise_after").conditions.averaging == "power"


def test_averaging_that_is_not_stated_stays_so() -> None:
    found = book(split(SETTINGS, noise(-106.0, -98.0), "rbw: 1 kHz"))
    assert result(found, "noise_after").conditions.averaging is None


@pytest.mark.parametrize(
    ("settings", "read", "words"),
    [
        # Only noise from ahead: what comes after cannot be seen beside a doubt of 0.2 dB.
        (SETTINGS, noise(-106.0, -130.0), "do not tell the two apart"),
        (SETTINGS, noise(-140.0, -98.0), "do not tell the two apart"),
        # Settings taken for their opposite: noise that falls with the gain.
        (SETTINGS, noise(-106.0, -98.0)[::-1], "do not tell the two apart"),
    ],
)
def test_what_cannot_be_told_apart_is_refused(settings: list[float], read: np.ndarray, words: str) -> None:
    found = book(split(settings, read, u="(2000)"))
    for quantity in ("noise_ahead", "noise_after", "equal_setting"):
        ours = result(found, quantity)
        assert math.isnan(ours.value)
        assert words in ours.words
    entry_ = found.entries[0]
    shown = " ".join(render(block_pieces(found, entry_, entry_.blocks[-1]), 110).split())
    assert "Not split" in shown
    assert "What to attack" not in shown


def test_two_readings_without_doubt_are_refused() -> None:
    found = book(split([0.0, 24.0], noise(-106.0, -98.0, [0.0, 24.0])))
    assert "without stated doubt" in result(found, "noise_after").words


def test_bench_noise_in_the_readings_is_not_taken_for_the_units() -> None:
    """Floor -150 dBm/Hz in 3 kHz Gaussian: -114.96 dBm. A reading within 1 dB of it is only a bound."""
    read = [-114.8, -114.7, -114.1, -110.8, -100.1]
    found = book(split(SETTINGS, read, "averaging: power\nrbw: 3 kHz\nbench: shack", u="(1000)"))
    assert math.isnan(result(found, "noise_after").value)
    assert "the bench's own noise" in result(found, "noise_after").words


def test_doubt_that_only_some_state_is_said() -> None:
    read = noise(-106.0, -98.0)
    text = split(SETTINGS, read).replace("dBm]", "dBm ± 0.2 dB]")
    assert any("only some" in note for note in result(book(text), "noise_after").notes)


def test_advice_says_which_to_attack_and_what_it_would_bring() -> None:
    """At 24 dB noise from ahead is 16 dB over that from after: 97.5 %; without that 0.11 dB less (closed form)."""
    found = book(split(SETTINGS, noise(-106.0, -98.0), "averaging: power\ncontrol: vga"))
    shown = " ".join(render(block_pieces(found, found.entries[0], found.entries[0].blocks[-1]), 110).split())
    assert "98 % of the output noise comes from ahead of vga" in shown
    assert "attack what stands ahead" in shown
    assert f"{10 * math.log10(1 + 10**-1.6):.2f} dB" in shown
    low = book(split([-10.0, -4.0, 0.0], noise(-106.0, -98.0, [-10.0, -4.0, 0.0]), "averaging: power\ncontrol: vga"))
    shown = " ".join(render(block_pieces(low, low.entries[0], low.entries[0].blocks[-1]), 110).split())
    assert "attack what comes after" in shown


def test_a_detectors_slope_stretches_the_split() -> None:
    """Read through a detector: by moving every level as a wrong slope would, and splitting what comes of it."""
    levels, volts = [-120.0, -110.0, -100.0, -90.0, -80.0], [0.41, 0.60, 0.81, 0.99, 1.20]
    inputs, outputs = (", ".join(f"{v:g} {unit}" for v in each) for each, unit in ((levels, "dBm"), (volts, "V")))
    steps = block("staircase", f"name: log\ninput: [{inputs}]\noutput: [{outputs}]")
    line = stats.linregress(levels, volts)
    read = noise(-106.0, -98.0)
    seen = [line.intercept + line.slope * level for level in read]
    text = split(SETTINGS, seen, "averaging: power\nthrough_detector: log").replace("dBm", "V")
    found = book(steps, text.replace(".0000 V", " V"))
    equal = result(found, "equal_setting")
    own = {source.what: part for source, part in equal.parts.items() if source.sort == "bench"}
    # The slope stretches levels about the middle of the line, and nothing else is left of what the readings share.
    stretch = line.stderr / line.slope
    wrong = [book(split(SETTINGS, [-100 + (v + 100) * (1 + by * stretch) for v in read])) for by in (1, -1)]
    expected = abs(result(wrong[0], "equal_setting").value - result(wrong[1], "equal_setting").value) / 2
    assert list(own) == ["slope"]
    assert abs(own["slope"]) == pytest.approx(expected, rel=0.05)
    assert expected > 0.05
    assert {s.what for s in result(found, "noise_after").parts if s.sort == "bench"} == {"slope", "height"}


def test_history_of_the_two_parts() -> None:
    """An amplifier fitted ahead: more noise from ahead, the same from after; the bench's accuracy cancels."""
    more = "averaging: power\nrbw: 3 kHz\nbench: shack\nat: 50.1 MHz"
    step = block("change", "chain: rx\nsteps:\n  - set: lna\n    to: {gain: 24 dB}")
    target = block("target", "quantity: equal_setting\nlimit: <= 5 dB")
    found = book_of(
        entry("01-01", BENCH, CHAIN, target, split(SETTINGS, noise(-76.0, -68.0), more, "(500)"), revision="A"),
        entry("02-01", step, split(SETTINGS, noise(-70.0, -68.0), more, "(500)"), revision="B"),
    )
    ahead = delta(found, "rx/noise_ahead@50.1MHz", "B", "derived")
    after = delta(found, "rx/noise_after@50.1MHz", "B", "derived")
    assert (ahead.verdict, round(ahead.delta, 2)) == ("worse", 6.0)
    assert after.verdict == "same"
    assert 0.1 < after.u < 0.5 < 1.5 / math.sqrt(3)
    assert delta(found, "rx/equal_setting@50.1MHz", "B", "derived").verdict == "changed"
    assert {r.key for r in found.findings.regressions} == {"rx/noise_ahead@50.1MHz"}
    assert {t.revision: t.verdict for t in found.findings.targets} == {"A": "misses", "B": "meets"}


GOOD = split(SETTINGS, noise(-106.0, -98.0), "name: good\naveraging: power")

FAULTS = [
    (split(SETTINGS[:4], noise(-106.0, -98.0)), "lengths"),
    (split([3.0] * 5, noise(-106.0, -98.0)), "lengths"),
    (split([3.0], [-90.0]), "too-few"),
    (split(SETTINGS, noise(-106.0, -98.0), "averaging: peak"), "peak"),
    (split(SETTINGS, noise(-106.0, -98.0), "averaging: rms"), "unknown-word"),
    (split(SETTINGS, noise(-106.0, -98.0), "control: vgx"), "unknown-stage"),
    (split(SETTINGS, noise(-106.0, -98.0), "through_detector: log"), "unknown-detector"),
    (split(SETTINGS, noise(-106.0, -98.0)).replace("dBm", "dB"), "dimension"),
    (split(SETTINGS, noise(-106.0, -98.0)).replace("dBm", "div"), "detector"),
    (split(SETTINGS, noise(-106.0, -98.0)).replace(" dB,", " dBm,"), "dimension"),
    (split(SETTINGS, [0.0] * 5).replace("dBm", "mW"), "sign"),
    (split(SETTINGS, noise(-106.0, -98.0), "through: [pad]"), "unknown-bench"),
    (split(SETTINGS, noise(-106.0, -98.0), "bench: shack\nthrough: [pda]"), "unknown-part"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_and_the_rest_stands(text: str, code: str) -> None:
    found = book(text, GOOD, sound=False)
    assert {p.code for p in found.problems} == {code}, [str(p) for p in found.problems]
    assert {r.name for r in found.results if r.block == "noise-vs-gain"} == {"good"}
    faulty = found.entries[0].blocks[2]
    assert code in render(block_pieces(found, found.entries[0], faulty), 100)


def test_nothing_is_read_on_a_plan() -> None:
    plan = entry("02-01", GOOD, revision="B", front="state: planned\n")
    found = book_of(entry("01-01", CHAIN, revision="A"), plan, sound=False)
    assert [p.code for p in found.problems] == ["reading-of-plan"]
