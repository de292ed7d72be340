"""`sweep` from files to results: SciPy's filters, spectra and noise as CSV, Touchstone by scikit-rf, history."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
import skrf
from scipy import integrate, optimize, signal
from workshop import block, chain, delta, entry

from logbook.book import Book, SourceFile, make_book
from logbook.model import Result
from logbook.pages import block_pieces
from logbook.pieces import Chart, Download, Picture
from logbook.terminal import render

BENCH = block(
    "bench",
    """
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, rbw_filter: gaussian}
path:
  - {name: pad, loss: 10 ± 0.2 dB}
""",
)
CHAIN = chain("name: lna, gain: 18 dB, nf: 1.1 dB, op1db: 10 dBm")


def book(folder: Path, *blocks: str, sound: bool = True) -> Book:
    """One entry with a bench, a chain and these blocks; the files are in the folder."""
    found = make_book([entry("01-01", BENCH, CHAIN, *blocks, revision="A")], folder)
    if sound:
        assert [str(p) for p in found.problems] == []
    return found


def sweep(text: str) -> str:
    return block("sweep", text)


def result(book: Book, key: str) -> Result:
    found = [r for r in book.results if r.key == f"rx/{key}"]
    assert len(found) == 1, key
    return found[0]


def write_csv(path: Path, x: np.ndarray, y: np.ndarray, head: str, separator: str = ",", comma: bool = False) -> None:
    """As an instrument would; `comma`: numbers with a decimal comma."""
    lines = [f"{a!r}{separator}{b!r}" for a, b in zip(x.tolist(), y.tolist(), strict=True)]
    if comma:
        lines = [line.replace(".", ",") for line in lines]
    path.write_bytes(("\r\n".join(["# a filter", head, *lines]) + "\r\n").encode())


LOW, HIGH = 10.695e6, 10.705e6

FILTERS = {
    "butterworth": signal.butter(4, [2 * np.pi * LOW, 2 * np.pi * HIGH], "bandpass", analog=True, output="zpk"),
    "chebyshev": signal.cheby1(5, 1.0, [2 * np.pi * LOW, 2 * np.pi * HIGH], "bandpass", analog=True, output="zpk"),
    "bessel": signal.bessel(3, [2 * np.pi * LOW, 2 * np.pi * HIGH], "bandpass", analog=True, output="zpk"),
}


def gain_db(name: str, frequency: np.ndarray | float) -> np.ndarray:
    z, p, k = FILTERS[name]
    # The poles lie close about the pass-band: evaluated as a product nothing is lost to rounding.
    s = 2j * np.pi * np.atleast_1d(np.asarray(frequency, dtype=float))
    scale = abs(p).max()
    found = k / scale ** (len(p) - len(z)) * np.prod((s[:, None] - z) / scale, axis=1)
    return 20 * np.log10(np.abs(found / np.prod((s[:, None] - p) / scale, axis=1)))


def edges(name: str, below: float) -> tuple[float, float]:
    """Where SciPy's response crosses so far below its peak, by root finding on the formula itself."""
    grid = np.linspace(LOW - 5e3, HIGH + 5e3, 200_001)
    response = gain_db(name, grid)
    top = float(response.max())
    over = np.flatnonzero(response > top - below)

    def off(f: float) -> float:
        return float(gain_db(name, f)[0]) - top + below

    far = 400e3
    lower = optimize.brentq(off, LOW - far, grid[over[0]] if over[0] else grid[0], xtol=1e-6)
    upper = optimize.brentq(off, grid[over[-1]], HIGH + far, xtol=1e-6)
    return lower, upper


@pytest.mark.parametrize(
    ("separator", "comma", "head"),
    [
        (",", False, "Frequency (Hz),Trace 1 (dB)"),
        (";", True, "Frequency [Hz];S21 [dB]"),
        ("\t", False, "f/Hz\tS21/dB"),
    ],
)
@pytest.mark.parametrize("name", list(FILTERS))
def test_band_pass_from_scipy(tmp_path: Path, name: str, separator: str, comma: bool, head: str) -> None:
    x = np.linspace(10.66e6, 10.74e6, 2001)
    spacing = float(x[1] - x[0])
    write_csv(tmp_path / "filter.csv", x, gain_db(name, x) - 2.5, head, separator, comma)
    asked = "report: [insertion_loss, centre, bandwidth: [3 dB, 6 dB, 40 dB], shape_factor: [40 dB, 3 dB], ripple]"
    found = book(tmp_path, sweep(f"name: f\nof: bandpass\nfile: filter.csv\n{asked}"))

    lower, upper = edges(name, 3.0)
    for level in (3.0, 6.0, 40.0):
        low, high = edges(name, level)
        measured = result(found, f"bandwidth_{level:g}db#f")
        assert measured.unit == "Hz"
        assert abs(measured.value - (high - low)) <= 0.1 * spacing, level
    assert abs(result(found, "centre#f").value - (lower + upper) / 2) <= 0.1 * spacing
    # Closed form: a band-pass made from a low-pass is symmetric about the geometric mean of its edges.
    assert abs(result(found, "centre_geometric#f").value - math.sqrt(LOW * HIGH)) <= 0.1 * spacing
    wide = edges(name, 40.0)
    assert result(found, "shape_factor_40_3#f").value == pytest.approx((wide[1] - wide[0]) / (upper - lower), rel=1e-3)
    assert result(found, "insertion_loss#f").value == pytest.approx(2.5, abs=0.002)
    # Closed form: the ripple of a Chebyshev filter is the one it was designed for; the others have none.
    assert result(found, "ripple#f").value == pytest.approx(1.0 if name == "chebyshev" else 0.0, abs=0.01)


def test_skirt_balance_and_rejection_of_a_lopsided_filter(tmp_path: Path) -> None:
    """A notch above the pass-band pulls the upper skirt in; both by root finding on the same formula."""
    notch = 10.72e6

    def response(f: np.ndarray | float) -> np.ndarray:
        f = np.atleast_1d(np.asarray(f, dtype=float))
        off = (f - notch) / 3e3
        return gain_db("butterworth", f) + 10 * np.log10(off**2 / (1 + off**2) + 1e-9)

    x = np.linspace(10.66e6, 10.718e6, 5801)
    write_csv(tmp_path / "f.csv", x, response(x), "Frequency (Hz),Level (dB)")
    found = book(
        tmp_path,
        sweep(
            "name: f\nof: bandpass\nfile: f.csv\nreport: [skirt_balance: 40 dB, rejection: [10.68 MHz, 10.7155 MHz]]"
        ),
    )
    top = optimize.minimize_scalar(lambda f: -response(f)[0], bounds=(10.696e6, 10.702e6), method="bounded")
    peak = -top.fun

    def crossing(below: float, near: float, far: float) -> float:
        return float(optimize.brentq(lambda f: response(f)[0] - peak + below, near, far))

    middle = (crossing(3, top.x, 10.66e6) + crossing(3, top.x, 10.715e6)) / 2
    balance = crossing(40, top.x, 10.66e6) + crossing(40, top.x, 10.7199e6) - 2 * middle
    measured = result(found, "skirt_balance_40db#f")
    assert measured.value == pytest.approx(balance, abs=2.0)
    assert measured.value < -500
    assert measured.better == "towards zero"
    for at in (10.68e6, 10.7155e6):
        key = f"rejection@{at / 1e6:g}MHz#f"
        assert result(found, key).value == pytest.approx(peak - response(at)[0], abs=0.01)


@pytest.mark.parametrize("way", ["sweep", "file"])
@pytest.mark.parametrize("through", ["", "bench: shack\nthrough: [pad]"])
def test_insertion_loss_against_a_reference(tmp_path: Path, way: str, through: str) -> None:
    """A thru sweep with sloping cables, both swept behind the same pad: what is left is the filter alone."""
    x = np.linspace(10.66e6, 10.74e6, 801)
    thru = -12.0 - 2.0 * (x - x[0]) / (x[-1] - x[0])
    write_csv(tmp_path / "thru.csv", x, thru, "Frequency (Hz),Level (dBm)")
    write_csv(tmp_path / "f.csv", x, thru + gain_db("butterworth", x) - 3.25, "Frequency (Hz),Level (dBm)")
    blocks = [sweep(f"name: thru\nof: response\nfile: thru.csv\n{through}")] if way == "sweep" else []
    named = "thru" if way == "sweep" else "thru.csv"
    text = (
        f"name: f\nof: bandpass\nfile: f.csv\nreference: {named}\n{through}\nreport: [insertion_loss, bandwidth: 3 dB]"
    )
    found = book(tmp_path, *blocks, sweep(text))
    assert result(found, "insertion_loss#f").value == pytest.approx(3.25, abs=1e-3)
    low, high = edges("butterworth", 3.0)
    assert abs(result(found, "bandwidth_3db#f").value - (high - low)) <= 0.1 * float(x[1] - x[0])


def test_doubt_of_a_bandwidth_is_what_the_doubt_of_the_level_moves(tmp_path: Path) -> None:
    """Linearity ±0.3 dB for each of two points: u of their ratio is 0.3/√3·√2 dB; the crossings move by it."""
    x = np.linspace(10.66e6, 10.74e6, 4001)
    write_csv(tmp_path / "f.csv", x, gain_db("butterworth", x), "Frequency (Hz),Level (dB)")
    found = book(
        tmp_path, sweep("name: f\nof: bandpass\nfile: f.csv\nbench: shack\nreport: [bandwidth: 6 dB, insertion_loss]")
    )
    u = 0.3 / math.sqrt(3) * math.sqrt(2)
    wider, narrower = (edges("butterworth", 6.0 + sign * u) for sign in (1, -1))
    spread = ((wider[1] - wider[0]) - (narrower[1] - narrower[0])) / 2
    assert result(found, "bandwidth_6db#f").u == pytest.approx(spread, rel=0.01)
    assert result(found, "insertion_loss#f").u == pytest.approx(u)


def square_wave_spectrum(fundamental: float, points: int) -> tuple[np.ndarray, np.ndarray]:
    """Spectrum in dBm at 50 ohm of a square wave of 1 V peak by SciPy's flat-top window, as an analyser shows it."""
    rate = 64.0 * fundamental
    t = np.arange(points * 64) / rate
    # Harmonics up to the fifth only, so that nothing folds back. Fourier series of a square wave.
    wave = sum(4 / np.pi / n * np.sin(2 * np.pi * n * fundamental * t) for n in (1, 3, 5))
    f, power = signal.periodogram(wave, rate, "flattop", scaling="spectrum")
    keep = (f > 0.3 * fundamental) & (f < 6 * fundamental)
    return f[keep], 10 * np.log10(power[keep] / 50 * 1e3 + 1e-12)


@pytest.mark.parametrize("at", ["at: 1 MHz", ""])
def test_harmonics_of_a_square_wave(tmp_path: Path, at: str) -> None:
    x, y = square_wave_spectrum(1e6, 400)
    write_csv(tmp_path / "s.csv", x, y, "Frequency (Hz),Level (dBm)")
    found = book(tmp_path, sweep(f"name: tx\nof: spectrum\nfile: s.csv\nreport: [lines: -40 dBm]\n{at}"))
    # Closed form: amplitude 4/pi V peak at 50 ohm is 12.08 dBm; the harmonics are 1/3 and 1/5 of it.
    assert result(found, "output_level@1MHz#tx").value == pytest.approx(12.09, abs=0.02)
    assert result(found, "harmonic@3MHz#tx").value == pytest.approx(-9.542, abs=0.02)
    assert result(found, "harmonic@5MHz#tx").value == pytest.approx(-13.979, abs=0.02)
    assert len([r for r in found.results if r.block == "sweep"]) == 3
    assert {r.better for r in found.results if r.quantity == "harmonic"} == {"lower"}


def white_noise() -> tuple[np.ndarray, np.ndarray, float]:
    """Welch's density of white noise of a known variance at 50 ohm: Hz, dBm/Hz, and the true density."""
    rate, sigma = 2e6, 1e-4
    wave = np.random.default_rng(4).normal(0.0, sigma, 2**19)
    f, density = signal.welch(wave, rate, nperseg=1024)
    return f[8:-8], 10 * np.log10(density[8:-8] / 50 * 1e3), 10 * math.log10(sigma**2 / (rate / 2) / 50 * 1e3)


def test_density_and_power_of_white_noise(tmp_path: Path) -> None:
    x, y, true = white_noise()
    write_csv(tmp_path / "n.csv", x, y, "Frequency (Hz),Density (dBm/Hz)")
    low, high = float(x[100]), float(x[300])
    report = f"report: [density, power: [{low!r} Hz, {high!r} Hz], spot: 500 kHz]"
    found = book(tmp_path, sweep(f"name: n\nof: noise\nfile: n.csv\n{report}"))
    # Statistical: 500 bins of about 1000 averages each make 0.01 dB; ten bins of them 0.05 dB.
    assert result(found, "noise_density#n").value == pytest.approx(true, abs=0.02)
    assert result(found, "noise_density@500kHz#n").value == pytest.approx(true, abs=0.25)
    middle = f"{(low + high) / 2e3:.6f}".rstrip("0").rstrip(".")
    inside = slice(100, 301)
    exact = 10 * math.log10(integrate.trapezoid(10 ** (y[inside] / 10), x[inside]))
    assert result(found, f"band_noise@{middle}kHz#n").value == pytest.approx(exact, abs=1e-6)


@pytest.mark.parametrize(("averaging", "below"), [("power", 0.0), ("log", 2.507), ("voltage", 1.049)])
def test_noise_levels_in_an_rbw_become_density_at_the_unit(tmp_path: Path, averaging: str, below: float) -> None:
    """Gaussian RBW of 10 kHz is 10.645 kHz of noise; a pad of 10 dB; averages read 2.507, 1.049 low (closed form)."""
    true = -140.0
    shown = true + 10 * math.log10(10e3 * 1.0645) - 10.0 - below
    points = "\n".join(f"  - [{f} MHz, {shown:.6f} dBm]" for f in range(1, 30))
    found = book(
        tmp_path,
        sweep(
            f"name: n\nof: noise\nrbw: 10 kHz\naveraging: {averaging}\nbench: shack\nthrough: [pad]\n"
            f"points:\n{points}\nreport: [density, power: [10 MHz, 20 MHz], spot: [1 MHz, 15 MHz, 29 MHz]]"
        ),
    )
    for key in ("noise_density#n", "noise_density@1MHz#n", "noise_density@15MHz#n", "noise_density@29MHz#n"):
        assert result(found, key).value == pytest.approx(true, abs=2e-3), key
    assert result(found, "band_noise@15MHz#n").value == pytest.approx(true + 70.0, abs=2e-3)
    # Accuracy, linearity and pad, each rectangular.
    u = math.sqrt((1.5**2 + 0.3**2 + 0.2**2) / 3)
    assert result(found, "noise_density#n").u == pytest.approx(u, abs=1e-3)


def network() -> skrf.Network:
    f = np.linspace(10.66e6, 10.74e6, 401)
    s21 = 10 ** ((gain_db("butterworth", f) - 1.5) / 20) * np.exp(1j * f / 1e3)
    s = np.zeros((len(f), 2, 2), dtype=complex)
    s[:, 1, 0], s[:, 0, 1] = s21, s21 * 0.5
    s[:, 0, 0], s[:, 1, 1] = 0.3 * np.exp(0.3j), 0.1
    return skrf.Network(f=f, s=s, z0=50, f_unit="hz")


@pytest.mark.parametrize("form", ["ri", "ma", "db"])
def test_touchstone_written_by_scikit_rf(tmp_path: Path, form: str) -> None:
    net = network()
    net.write_touchstone(str(tmp_path / "f"), form=form)
    found = book(
        tmp_path,
        sweep("name: f\nof: bandpass\nfile: f.s2p\nreport: [insertion_loss, bandwidth: 3 dB]"),
        sweep("name: back\nof: response\nfile: f.s2p\ny: S12\nreport: [gain: 10.7 MHz]"),
        sweep("name: match\nof: response\nfile: f.s2p\ny: s11\nreport: [gain: 10.7 MHz]"),
    )
    assert result(found, "insertion_loss#f").value == pytest.approx(1.5, abs=1e-3)
    low, high = edges("butterworth", 3.0)
    assert abs(result(found, "bandwidth_3db#f").value - (high - low)) <= 20.0
    at = int(np.argmin(np.abs(net.f - 10.7e6)))
    for key, i, j in (("gain@10.7MHz#back", 0, 1), ("gain@10.7MHz#match", 0, 0)):
        assert result(found, key).value == pytest.approx(float(net.s_db[at, i, j]), abs=1e-6)


def test_response_of_a_stage_written_by_scikit_rf(tmp_path: Path) -> None:
    net = network()
    net.write_touchstone(str(tmp_path / "f"))
    stages = "name: lna, gain: 18 dB, nf: 2 dB\nname: filter, response: f.s2p\nname: post, gain: 10 dB, nf: 6 dB"
    text = chain(stages, signal="10.706 MHz", name="if")
    found = make_book([entry("01-01", text, revision="A")], tmp_path)
    assert not list(found.problems)
    at = int(np.argmin(np.abs(net.f - 10.706e6)))
    loss = -float(net.s_db[at, 1, 0])
    assert loss > 4
    predicted = {r.quantity: r.value for r in found.results}
    assert predicted["gain"] == pytest.approx(28.0 - loss, abs=1e-4)
    # Friis with the filter passive at 290 K, so that its noise figure is its loss.
    factor = 10**0.2 + (10 ** (loss / 10) - 1) / 10**1.8 + (10**0.6 - 1) / 10 ** ((18 - loss) / 10)
    assert predicted["nf"] == pytest.approx(10 * math.log10(factor), abs=1e-3)


def two_revisions(folder: Path, first: str, second: str, *more: str) -> Book:
    found = make_book(
        [
            entry("01-01", BENCH, CHAIN, sweep(first), *more, revision="A"),
            entry("02-01", block("change", "chain: rx\nsteps:\n  - set: lna\n    to: {gain: 17 dB}"), revision="B"),
            entry("02-02", sweep(second)),
        ],
        folder,
    )
    assert [str(p) for p in found.problems] == []
    return found


def test_history_of_a_filter(tmp_path: Path) -> None:
    """A change of 1.5 dB in loss stands beyond linearity of 0.3 dB; a bandwidth is neither better nor worse."""
    x = np.linspace(10.66e6, 10.74e6, 801)
    write_csv(tmp_path / "a.csv", x, gain_db("bessel", x) - 4.0, "Frequency (Hz),Level (dB)")
    write_csv(tmp_path / "b.csv", x, gain_db("butterworth", x) - 2.5, "Frequency (Hz),Level (dB)")
    text = "name: f\nof: bandpass\nbench: shack\nfile: {}\nreport: [insertion_loss, bandwidth: 6 dB, ripple]"
    target = block("target", "quantity: insertion_loss\nname: f\nlimit: <= 3 dB")
    found = two_revisions(tmp_path, text.format("a.csv"), text.format("b.csv"), target)
    loss = delta(found, "rx/insertion_loss#f", "B", "derived")
    assert (loss.verdict, round(loss.delta, 2)) == ("better", -1.5)
    # Linearity is fresh in each of the two points of both sweeps: the root of four times 0.3²/3.
    assert loss.u == pytest.approx(0.6 / math.sqrt(3), abs=1e-6)
    assert delta(found, "rx/bandwidth_6db#f", "B", "derived").verdict == "changed"
    assert delta(found, "rx/ripple#f", "B", "derived").verdict == "same"
    # 0.5 dB below the limit with u = 0.245 dB: 97.9 % by the normal distribution.
    verdicts = {t.revision: t.verdict for t in found.findings.targets}
    assert verdicts == {"A": "misses", "B": "meets"}
    last = found.entries[-1]
    shown = render(block_pieces(found, last, last.blocks[0]), 110)
    assert "A, 2026-01-01" in shown
    assert "difference" in shown


def write_lines(path: Path, lines: dict[float, float]) -> None:
    """Points 10 kHz apart with a floor of -100 dBm, and Gaussian lines about 10 kHz wide."""
    x = np.arange(40e6, 160e6, 10e3)
    y = np.full(x.shape, -100.0)
    for at, level in lines.items():
        y = np.maximum(y, level - 3.0 * ((x - at) / 5e3) ** 2)
    write_csv(path, x, y, "Frequency (Hz),Level (dBm)")


@pytest.mark.parametrize("at", ["at: 50.08 MHz", ""])
def test_lines_keep_their_keys_between_sweeps(tmp_path: Path, at: str) -> None:
    """Read off a few kHz apart, the same lines are the same results, harmonics, spurs and the carrier alike."""
    text = "name: tx\nof: spectrum\nrbw: 10 kHz\nbench: shack\nthrough: [pad]\n{}\nreport: [lines: -90 dBm]\nfile: {}"
    first = {50.079e6: -4.0, 100.158e6: -60.0, 72.301e6: -75.0, 61.0e6: -80.0}
    second = {50.086e6: -4.1, 100.172e6: -66.0, 72.304e6: -70.0, 61.0e6: -80.1}
    write_lines(tmp_path / "a.csv", first)
    write_lines(tmp_path / "b.csv", second)
    found = two_revisions(tmp_path, text.format(at, "a.csv"), text.format(at, "b.csv"))
    deltas = {d.key: d for d in found.findings.deltas if d.to == "B" and d.basis != "predicted"}
    assert {d.verdict for d in deltas.values()} == {"same", "better", "worse"}, deltas.keys()
    by = {
        d.quantity + ("" if d.quantity != "spur_level" else str(round((d.at_hz or 0) / 1e6))): d
        for d in deltas.values()
    }
    assert by["output_level"].verdict == "same"
    assert by["harmonic"].delta == pytest.approx(-5.9, abs=0.2)
    assert by["harmonic"].verdict == "better"
    assert (by["spur_level72"].verdict, by["spur_level61"].verdict) == ("worse", "same")
    # Accuracy and pad are the same in both and cancel; linearity of each does not.
    assert by["spur_level61"].u == pytest.approx(math.sqrt(2) * 0.3 / math.sqrt(3))


def test_a_line_that_has_gone_is_still_drawn(tmp_path: Path) -> None:
    """One point in twelve thousand of the sweep before: it stands in what is drawn and in the file of it."""
    write_lines(tmp_path / "a.csv", {50e6: -4.0, 72e6: -50.0})
    write_lines(tmp_path / "b.csv", {50e6: -4.0})
    text = "name: tx\nof: spectrum\nat: 50 MHz\nfile: {}"
    found = two_revisions(tmp_path, text.format("a.csv"), text.format("b.csv"))
    last = found.entries[-1]
    pieces = block_pieces(found, last, last.blocks[0])
    (file,) = [each for each in pieces if isinstance(each, Download)]
    rows = [[float(cell) for cell in line.split(",")] for line in file.content.splitlines()[1:]]
    assert len(rows) < 3000
    assert [row for row in rows if row[0] == 72e6] == [[72e6, -100.0, -50.0, -50.0]]
    (picture,) = [each for each in pieces if isinstance(each, Picture)]
    assert isinstance(picture.drawing, Chart)
    before = next(each for each in picture.drawing.series if each.role == "before")
    assert max(y for x, y in zip(before.x, before.y, strict=True) if x > 60) == -50.0


POINTS = "points: [[1 MHz, -9 dB], [2 MHz, -1 dB], [3 MHz, -9 dB], [4 MHz, -30 dB]]"
LEVELS = POINTS.replace("dB", "dBm")
HEAD = "name: f\nof: bandpass\n"

FAULTS = [
    (HEAD, "sweep"),
    (HEAD + f"file: f.csv\n{POINTS}", "sweep"),
    (HEAD + "points: [[3 MHz, -9 dB], [2 MHz, -1 dB], [1 MHz, -9 dB]]", "points"),
    (HEAD + "points: [[-1 MHz, -9 dB], [2 MHz, -1 dB], [3 MHz, -9 dB]]", "points"),
    (HEAD + "points: [[1 MHz, -9 dB], [1 MHz, -1 dB], [2 MHz, -9 dB]]", "points"),
    (HEAD + "points: [[1 MHz, -9 dB], [2 MHz, -1 dBm], [3 MHz, -9 dB]]", "points"),
    (HEAD + "points: [[-9 dB, 1 MHz], [-1 dB, 2 MHz], [-9 dB, 3 MHz]]", "points"),
    (HEAD + "points: [[1 MHz, -9 dBm/Hz], [2 MHz, -1 dBm/Hz], [3 MHz, -9 dBm/Hz]]", "dimension"),
    (HEAD + f"{POINTS}\nreport: [gain: 2 MHz]", "report"),
    (HEAD + f"{POINTS}\nreport: [bandwith: 3 dB]", "report"),
    (HEAD + f"{POINTS}\nreport: [bandwidth: -3 dB]", "sign"),
    (HEAD + f"{POINTS}\nreport: [peak: 3 dB]", "report"),
    (HEAD + f"{POINTS}\nreport: [rejection]", "report"),
    (HEAD + f"{POINTS}\nreport: [shape_factor: 60 dB]", "report"),
    (HEAD + f"{POINTS}\nreport: [ripple: [1 dB, 3 dB]]", "report"),
    (HEAD + f"{POINTS}\nreport: [[peak]]", "report"),
    (HEAD + f"{POINTS}\nreference: thru", "unknown-sweep"),
    (HEAD + f"{POINTS}\nreference: thru.csv", "file"),
    (HEAD + f"{POINTS}\nreference: levels", "reference"),
    (HEAD + f"{LEVELS}\nreference: far", "reference"),
    (HEAD + "file: none.csv", "file"),
    (HEAD + "file: ../f.csv", "path"),
    (HEAD + "file: f.csv\ny: gain", "column"),
    (HEAD + "file: f.csv\ny: {column: 2, unit: V}", "dimension"),
    (HEAD + "file: f.csv\ny: {column: 2, unit: dBx}", "unit"),
    (HEAD + "file: nothing.s2p", "points"),
    (HEAD + "file: short.s2p", "points"),
    (HEAD + "file: short.s2p\ny: S31", "parameter"),
    ("name: f\nof: response\n" + f"{POINTS}\nreport: [flatness: 1 MHz]", "report"),
    ("name: f\nof: spectrum\n" + POINTS, "dimension"),
    ("name: f\nof: spectrum\n" + f"{LEVELS}\nreference: levels", "reference"),
    ("name: f\nof: spectrum\n" + f"{LEVELS}\nreport: [lines: [-80 dBm, -60 dBm]]", "report"),
    ("name: f\nof: noise\n" + LEVELS, "missing-key"),
    ("name: f\nof: noise\n" + f"{LEVELS}\nrbw: 1 kHz\naveraging: peak", "peak"),
    ("name: f\nof: noise\n" + f"{LEVELS}\nrbw: 1 kHz\nreport: [power: 2 MHz]", "report"),
    ("name: f\nof: nois\n" + LEVELS, "unknown-word"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_once_in_the_block_and_the_rest_stands(tmp_path: Path, text: str, code: str) -> None:
    (tmp_path / "f.csv").write_text("Frequency (Hz),Level (dB)\n1,2\n3,4\n5,3\n6,1\n")
    (tmp_path / "nothing.s2p").write_text("# MHz S MA R 50\n" + "".join(f"{f} 0 0 0 0 0 0 0 0\n" for f in range(1, 6)))
    (tmp_path / "short.s2p").write_text("# MHz S MA R 50\n1 0 0 1 0 0 0 0 0\n2 0 0 1 0 0 0 0 0\n")
    others = (
        sweep("name: levels\nof: response\n" + LEVELS),
        sweep("name: far\nof: response\npoints: [[11 MHz, 0 dBm], [12 MHz, 0 dBm], [13 MHz, 0 dBm]]"),
    )
    found = book(tmp_path, *others, sweep(text), sound=False)
    assert [p.code for p in found.problems] == [code], [str(p) for p in found.problems]
    faulty = found.entries[0].blocks[-1]
    assert faulty.line < next(iter(found.problems)).place.line <= faulty.last_line
    assert result(found, "flatness#levels").value == pytest.approx(29.0)
    assert not [r for r in found.results if r.name == "f"]
    assert code in render(block_pieces(found, found.entries[0], faulty), 100)


@pytest.mark.parametrize("content", [b"", b"Frequency (Hz),Level (dB)\n1,2\n3,x\n4,5\n5,6\n", b"\x00\x01\x02"])
def test_fault_within_a_file_stands_there_and_is_shown_in_the_block(tmp_path: Path, content: bytes) -> None:
    """The place is in the file, by its path within the logbook; the block that names it shows the fault, once."""
    (tmp_path / "2026" / "traces").mkdir(parents=True)
    (tmp_path / "2026" / "traces" / "f.csv").write_bytes(content)
    text = sweep(HEAD + "file: traces/f.csv") + "\n" + sweep("name: g\nof: bandpass\nreference: f\n" + POINTS)
    one = entry("01-01", BENCH, CHAIN, text, revision="A")
    found = make_book([SourceFile(f"2026/{one.path}", one.data)], tmp_path)
    assert {p.place.file for p in found.problems} == {"2026/traces/f.csv"}, [str(p) for p in found.problems]
    assert len(list(found.problems)) == 1
    last = found.entries[0]
    shown = render(block_pieces(found, last, last.blocks[-2]), 100)
    assert "2026/traces/f.csv:" in shown
    assert "of: bandpass" in shown


def test_what_a_sweep_does_not_reach_is_said_in_words(tmp_path: Path) -> None:
    found = book(
        tmp_path,
        sweep(
            "name: f\nof: bandpass\npoints: [[1 MHz, -1 dB], [2 MHz, -2 dB], [3 MHz, -9 dB]]\n"
            "report: [peak, insertion_loss, bandwidth: [3 dB, 60 dB], rejection: 9 MHz]"
        ),
        sweep(f"name: g\nof: response\n{LEVELS}\nreport: [gain: 2 MHz]"),
        sweep(f"name: n\nof: noise\nrbw: 1 kHz\n{LEVELS}\nreport: [spot: 9 MHz, power: [3 MHz, 9 MHz]]"),
    )
    silent = [r for r in found.results if r.block == "sweep"]
    assert len(silent) == 8
    assert all(math.isnan(r.value) and r.words for r in silent), [(r.key, r.value, r.words) for r in silent]


def test_nothing_is_swept_on_a_plan(tmp_path: Path) -> None:
    plan = entry("02-01", sweep(HEAD + POINTS), revision="B", front="state: planned\n")
    found = make_book([entry("01-01", CHAIN, revision="A"), plan], tmp_path)
    assert [p.code for p in found.problems] == ["reading-of-plan"]
