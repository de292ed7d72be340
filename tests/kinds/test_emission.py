"""`emission` from text to margins: the limits of 47 CFR as published, doubt that carrier and line share, faults."""

from __future__ import annotations

import math
from pathlib import Path

import pytest
from workshop import block, book_of, chain, delta, entry

from logbook.book import Book, SourceFile, make_book
from logbook.model import Result
from logbook.pages import block_pieces
from logbook.terminal import render

BENCH = block(
    "bench",
    """
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, floor: -150 dBm/Hz, max_input: 25 dBm}
path:
  - {name: tap, loss: 40 ± 0.4 dB, max_input: 2000 W}
  - {name: pad, loss: 10 ± 0.2 dB, max_input: 2 W}
""",
)
CHAIN = chain("name: pa, gain: 20 dB, nf: 8 dB", name="tx", signal="50.1 MHz")
ROOT = math.sqrt(3)


def emission(text: str) -> str:
    return block("emission", text)


def book(*blocks: str, sound: bool = True) -> Book:
    return book_of(entry("01-01", BENCH, CHAIN, *blocks, revision="A"), sound=sound)


def result(book: Book, key: str) -> Result:
    return [r for r in book.results if r.key == f"tx/{key}"][-1]


def shown(book: Book) -> str:
    last = book.entries[-1]
    return " ".join(render(block_pieces(book, last, last.blocks[-1]), 120).split())


@pytest.mark.parametrize(
    ("rule", "carrier", "power", "below"),
    [
        # 47 CFR 97.307(e), 97.307(d) for both dates, 95.779(a)(3).
        ("us-97-307-e", "50.1 MHz", "5 W", 53.0),
        ("us-97-307-e", "50.1 MHz", "25 W", 60.0),
        ("us-97-307-e", "50.1 MHz", "100 W", 60.0),
        ("us-97-307-e", "144.2 MHz", "0.2 W", 40.0),
        ("us-97-307-e", "144.2 MHz", "50 mW", 37.0),
        ("us-97-307-d-after-2003", "14.1 MHz", "100 W", 43.0),
        ("us-97-307-d-until-2003", "14.1 MHz", "100 W", 40.0),
        ("us-97-307-d-until-2003", "14.1 MHz", "4.9 W", 30.0),
        ("us-97-307-d-until-2003", "14.1 MHz", "1500 W", 44.8),
        ("us-95-779-a-3", "72.4 MHz", "4 W", 49.0),
    ],
)
@pytest.mark.parametrize("written", ["dBc", "dBm"])
def test_published_limits(rule: str, carrier: str, power: str, below: float, written: str) -> None:
    """A line 70 dB below the carrier, read either way through 40 dB, has a margin of 70 dB less the published limit."""
    watt = float(power.split()[0]) * (1e-3 if "mW" in power else 1)
    dbm = 10 * math.log10(watt) + 30
    level = "-70 dBc" if written == "dBc" else f"{dbm - 70 - 40:.4f} dBm"
    found = book(
        emission(
            f"bench: shack\nthrough: [tap]\nat: {carrier}\ncarrier: {dbm - 40:.4f} dBm\n"
            f"lines: [{{at: 300.5 MHz, level: {level}}}]\nrule: {rule}"
        )
    )
    at = carrier.replace(" ", "")
    assert result(found, f"output_level@{at}").value == pytest.approx(dbm, abs=1e-3)
    assert result(found, "spurious@300.5MHz").value == pytest.approx(-70.0, abs=1e-3)
    margin = result(found, f"margin@300.5MHz#{rule}")
    assert margin.value == pytest.approx(70.0 - below, abs=0.051)
    assert (margin.unit, margin.better) == ("dB", "higher")


def test_four_watts_allow_minus_thirteen_dbm() -> None:
    text = "at: 72.4 MHz\ncarrier: 4 W\nlines: [{at: 144.8 MHz, level: 50 uW}]\nrule: us-95-779-a-3"
    assert result(book(emission(text)), "margin@144.8MHz#us-95-779-a-3").value == pytest.approx(0.01, abs=0.005)
    assert "-13.00 dBm" in shown(book(emission(text)))


def test_harmonics_and_other_lines_by_name() -> None:
    lines = "[{at: 100.2 MHz, level: -60 dBc}, {at: 150.301 MHz, level: -60 dBc}, {at: 71 MHz, level: -66 dBc}]"
    found = book(emission(f"at: 50.1 MHz\ncarrier: 5 W\nlines: {lines}"))
    keys = [r.key for r in found.results if r.block == "emission"]
    assert keys == ["tx/output_level@50.1MHz", "tx/harmonic@100.2MHz", "tx/harmonic@150.301MHz", "tx/spurious@71MHz"]
    assert {r.better for r in found.results if r.unit == "dBc"} == {"lower"}
    assert "2nd harmonic" in shown(found)
    far = book(emission("at: 1e-300 Hz\ncarrier: 5 W\nlines: [{at: 1e300 Hz, level: -60 dBc}]"))
    assert [r.quantity for r in far.results if r.unit == "dBc"] == ["spurious"]


def relative(rule: str = "") -> str:
    return f"""
bench: shack
through: [tap, pad]
at: 14.1 MHz
carrier: -3.00(5) dBm
lines: [{{at: 28.2 MHz, level: -58.00(5) dBm}}, {{at: 42.3 MHz, level: -60.0(1) dBc}}]
rule: {rule}
"""


def test_what_carrier_and_line_share_cancels_where_the_limit_is_relative() -> None:
    """Accuracy (±1.5 dB), tap (±0.4 dB) and pad (±0.2 dB) move both alike; readings and linearity (±0.3 dB) do not."""
    found = book(emission(relative("us-97-307-d-after-2003")))
    own = 0.05**2 + 0.3**2 / 3
    assert result(found, "harmonic@28.2MHz").u == pytest.approx(math.sqrt(2 * own))
    assert result(found, "margin@28.2MHz#us-97-307-d-after-2003").u == pytest.approx(math.sqrt(2 * own))
    # Written in dBc: its own reading, and the linearity between line and carrier.
    assert result(found, "harmonic@42.3MHz").u == pytest.approx(math.sqrt(0.1**2 + 0.3**2 / 3))
    assert result(found, "margin@42.3MHz#us-97-307-d-after-2003").u == pytest.approx(math.sqrt(0.1**2 + 0.3**2 / 3))


def test_a_limit_in_watts_keeps_the_doubt_of_the_level() -> None:
    """Where 50 mW is the limit, at 1500 W, the bench's accuracy and the path count in full."""
    text = relative("us-97-307-d-until-2003").replace("-3.00(5) dBm", "11.76(5) dBm")
    found = book(emission(text))
    level = 0.05**2 + (0.3**2 + 1.5**2 + 0.4**2 + 0.2**2) / 3
    margin = result(found, "margin@28.2MHz#us-97-307-d-until-2003")
    assert margin.value == pytest.approx(10 * math.log10(50) - (-58 + 50), abs=1e-6)
    assert margin.u == pytest.approx(math.sqrt(level))
    written = result(found, "margin@42.3MHz#us-97-307-d-until-2003")
    assert written.u == pytest.approx(math.sqrt(level + 0.1**2 + 0.3**2 / 3))


def test_a_spurious_line_in_dbc_has_the_doubt_of_its_ratio_too() -> None:
    text = "bench: shack\nat: 50.1 MHz\ncarrier: -3 dBm\nlines: [{at: 71 MHz, level: -60 dBc}]"
    assert result(book(emission(text)), "spurious@71MHz").u == pytest.approx(0.3 / ROOT)


def test_a_line_at_the_benchs_own_floor_has_at_least_so_much_margin() -> None:
    """-150 dBm/Hz in 10 kHz is -110 dBm: a line read at -109.5 dBm is at most that, its margin at least so large."""
    found = book(
        emission(
            "bench: shack\nthrough: [tap]\nrbw: 10 kHz\naveraging: power\nat: 14.1 MHz\ncarrier: 0 dBm\n"
            "lines: [{at: 28.2 MHz, level: -109.5 dBm}]\nrule: us-97-307-d-after-2003"
        )
    )
    assert result(found, "harmonic@28.2MHz").bound == "upper"
    assert result(found, "margin@28.2MHz#us-97-307-d-after-2003").bound == "lower"
    assert "at least" in shown(found)


def test_history_target_and_regression() -> None:
    """A low-pass fitted: 8 dB less second harmonic; the third is worse beyond doubt, and accepted."""
    text = """
bench: shack
through: [tap]
rbw: 10 kHz
at: 14.1 MHz
carrier: 10.0(1) dBm
lines: [{{at: 28.2 MHz, level: {}(2) dBc}}, {{at: 42.3 MHz, level: {}(2) dBc}}]
rule: us-97-307-d-after-2003
"""
    name = "us-97-307-d-after-2003"
    target = block("target", f"quantity: margin\nat: 28.2 MHz\nname: {name}\nlimit: '>= 3 dB'")
    accept = block("accept", "quantity: harmonic\nat: 42.3 MHz\nwhy: far below the limit still")
    step = block("change", "chain: tx\nsteps:\n  - set: pa\n    to: {gain: 19 dB}")
    found = book_of(
        entry("01-01", BENCH, CHAIN, target, emission(text.format("-41.0", "-60.0")), revision="A"),
        entry("02-01", step, emission(text.format("-49.0", "-58.0")), accept, revision="B"),
    )
    better = delta(found, "tx/harmonic@28.2MHz", "B")
    assert (better.verdict, round(better.delta, 9)) == ("better", -8.0)
    assert better.u == pytest.approx(math.sqrt(2 * (0.2**2 + 0.3**2 / 3)))
    margin = delta(found, f"tx/margin@28.2MHz#{name}", "B", "derived")
    assert (margin.verdict, round(margin.delta, 9)) == ("better", 8.0)
    assert delta(found, "tx/output_level@14.1MHz", "B").verdict == "same"
    assert {t.revision: t.verdict for t in found.findings.targets} == {"A": "misses", "B": "meets"}
    regressions = {r.key: r.accepted for r in found.findings.regressions}
    assert regressions == {"tx/harmonic@42.3MHz": True, f"tx/margin@42.3MHz#{name}": False}


def test_two_measurements_of_one_block_keep_apart_by_name() -> None:
    text = """
- {name: low, at: 50.1 MHz, carrier: 0.2 W, lines: [{at: 100.2 MHz, level: -50 dBc}], rule: us-97-307-e}
- {name: high, at: 50.1 MHz, carrier: 25 W, lines: [{at: 100.2 MHz, level: -50 dBc}], rule: us-97-307-e}
"""
    found = book(emission(text))
    assert result(found, "margin@100.2MHz#low us-97-307-e").value == pytest.approx(10.0)
    assert result(found, "margin@100.2MHz#high us-97-307-e").value == pytest.approx(-10.0)


def test_a_rule_that_does_not_cover_the_carrier_says_so() -> None:
    text = "at: 432 MHz\ncarrier: 5 W\nlines: [{at: 864 MHz, level: -60 dBc}]\nrule: [us-97-307-e, us-95-779-a-3]"
    found = book(emission(text))
    assert not [r for r in found.results if r.quantity == "margin"]
    assert shown(found).count("This rule says nothing here") == 2
    assert "text in force and the licensed operator" in shown(found)


def test_another_bandwidth_than_the_reference_is_said() -> None:
    """ITU Radio Regulations, Appendix 3: 100 kHz at 100 MHz, 1 MHz at 1.2 GHz."""
    lines = "lines: [{at: 100.2 MHz, level: -60 dBc}, {at: 1.2 GHz, level: -60 dBc}]"
    text = f"rbw: 10 kHz\nat: 50.1 MHz\ncarrier: 5 W\n{lines}"
    assert "reference bandwidth at these frequencies is 1 MHz, 100 kHz" in shown(book(emission(text)))
    clean = text.replace("rbw: 10 kHz", "rbw: 100 kHz").replace(", {at: 1.2 GHz, level: -60 dBc}", "")
    assert "reference bandwidth" not in shown(book(emission(clean)))


OWN = """\
rule: club
title: Club limits
regulation: Club rules
paragraph: "7"
edition: of 2024
carrier: [50 MHz, 54 MHz]
lines: [88 MHz, 108 MHz]
limits:
  - {at_most: 1 uW}
"""


def with_rule(folder: Path, content: bytes, text: str = "rule: rules/club.yml") -> Book:
    (folder / "2026" / "rules").mkdir(parents=True)
    (folder / "2026" / "rules" / "club.yml").write_bytes(content)
    lines = "lines: [{at: 100.2 MHz, level: -70 dBc}, {at: 150.3 MHz, level: -70 dBc}]"
    one = entry("01-01", CHAIN, emission(f"at: 50.1 MHz\ncarrier: 10 W\n{lines}\n{text}"), revision="A")
    return make_book([SourceFile(f"2026/{one.path}", one.data)], folder)


def test_a_logbooks_own_rule(tmp_path: Path) -> None:
    found = with_rule(tmp_path, OWN.encode())
    assert not list(found.problems)
    # 10 W less 70 dB is 1 uW, just what is allowed.
    assert result(found, "margin@100.2MHz#club").value == pytest.approx(0.0, abs=1e-9)
    assert not [r for r in found.results if r.key.startswith("tx/margin@150.3MHz")]
    assert "Club rules 7" in shown(found)
    assert "does not speak of lines at this frequency" in shown(found)


@pytest.mark.parametrize(
    ("content", "code"),
    [
        (OWN.replace("[50 MHz, 54 MHz]", "[54 MHz, 50 MHz]").encode(), "pair"),
        (OWN.replace("{at_most: 1 uW}", "{up_to: 5 W}").encode(), "limit"),
        (OWN.replace("title:", "titel:").encode(), "unknown-key"),
        (b"", "empty-rule"),
        (b"rule: \xff\xfe\n", "encoding"),
    ],
)
def test_faults_of_a_rule_stand_in_its_file_and_show_in_the_block(tmp_path: Path, content: bytes, code: str) -> None:
    found = with_rule(tmp_path, content)
    assert code in {p.code for p in found.problems}, [str(p) for p in found.problems]
    assert {p.place.file for p in found.problems} == {"2026/rules/club.yml"}
    assert "2026/rules/club.yml:" in shown(found)
    assert result(found, "harmonic@100.2MHz").value == -70.0


GOOD = emission("name: sound\nat: 50.1 MHz\ncarrier: 5 W\nlines: [{at: 100.2 MHz, level: -60 dBc}]")
HEAD = "at: 50.1 MHz\ncarrier: 5 W\n"
LINE = "lines: [{at: 100.2 MHz, level: -60 dBc}]\n"

FAULTS = [
    (HEAD + "lines: [{at: 100.2 MHz, level: +64 dBc}]", "sign"),
    (HEAD + "lines: [{at: 100.2 MHz, level: 0 dBc}]", "sign"),
    (HEAD + "lines: [{at: 100.2 MHz, level: 7 W}]", "sign"),
    (HEAD + "lines: [{at: 100.2 MHz, level: 0 W}]", "sign"),
    (HEAD + "lines: [{at: 50.1 MHz, level: -60 dBc}]", "duplicate-line"),
    (HEAD + "lines: [{at: 71 MHz, level: -60 dBc}, {at: 71.0 MHz, level: -61 dBc}]", "duplicate-line"),
    (HEAD + "lines: [{at: 71 MHz, level: -60 dB}]", "dimension"),
    (HEAD + "lines: []", "empty"),
    (HEAD + "lines: [{at: 71 MHz}]", "missing-key"),
    (HEAD, "missing-key"),
    ("at: 50.1 MHz\n" + LINE, "missing-key"),
    ("carrier: 5 W\n" + LINE, "missing-key"),
    (HEAD + LINE + "rule: us-97-307-f", "unknown-rule"),
    (HEAD + LINE + "rule: [us-97-307-e, us-97-307-e]", "duplicate-rule"),
    (HEAD + LINE + "rule: club.yml", "file"),
    (HEAD + LINE + "rule: ../club.yml", "path"),
    (HEAD + LINE + "through: [tap]", "unknown-bench"),
    (HEAD + LINE + "bench: shack\nthrough: [tapp]", "unknown-part"),
    ("at: 50.1 MHz\nbench: shack\nthrough: [pad]\ncarrier: 30 dBm\n" + LINE, "overload"),
]


@pytest.mark.parametrize(("text", "code"), FAULTS)
def test_fault_is_reported_and_the_rest_stands(tmp_path: Path, text: str, code: str) -> None:
    found = make_book([entry("01-01", BENCH, CHAIN, emission(text), GOOD, revision="A")], tmp_path)
    assert {p.code for p in found.problems} == {code}, [str(p) for p in found.problems]
    assert result(found, "harmonic@100.2MHz#sound").value == -60.0


def test_nothing_is_read_on_a_plan() -> None:
    plan = entry("02-01", GOOD, revision="B", front="state: planned\n")
    found = book_of(entry("01-01", CHAIN, revision="A"), plan, sound=False)
    assert [p.code for p in found.problems] == ["reading-of-plan"]
