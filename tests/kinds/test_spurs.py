"""Spurs through real blocks: against brute force, against a receiver that is really retuned, and check values."""

from __future__ import annotations

from itertools import product
from pathlib import Path

import pytest
from scipy import optimize

from logbook.book import Book, SourceFile, make_book
from logbook.html import render
from logbook.kinds.spurs import Report
from logbook.pages import block_pieces
from logbook.plots import draw
from logbook.showing.spurs import Spur
from logbook.spurs.candidates import Candidate, one_sign
from logbook.terminal import render as render_text

MHZ = 1e6

BENCH = """```yaml bench
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, max_input: 20 dBm}
path:
  - {name: pad, loss: 10 ± 0.2 dB, max_input: 2 W}
```
"""

# The oscillator follows the tuning, 10.7 MHz below it.
FOLLOWING = """\
chain: rx
signal: 50.3 MHz
stages:
  - {name: lna, gain: 14 dB}
  - {name: mixer, loss: 6.5 dB, lo: {follows: signal, offset: -10.7 MHz}}
  - {name: if-filter, loss: 3 dB, bandwidth: 8 kHz}
"""


def converter(signal: str, lo: str, width: str = "8 kHz") -> str:
    return f"""\
chain: rx
signal: {signal}
stages:
  - {{name: mixer, loss: 6.5 dB, lo: {lo}}}
  - {{name: if-filter, loss: 3 dB, bandwidth: {width}}}
"""


def book_with(chain: str, spurs: str, *more: str) -> Book:
    files = {"2026-01-01-a.md": f"---\ntitle: A\ndate: 2026-01-01\nrevision: A\n---\n{BENCH}\n"}
    if chain:
        files["2026-01-01-a.md"] += f"```yaml chain\n{chain}```\n"
    for number, text in enumerate((spurs, *more)):
        front = f"revision: {'BCD'[number - 1]}\n" if number else ""
        change = "```yaml change\nchain: rx\nsteps:\n  - set: if-filter\n    to: {loss: 2 dB}\n```\n" if number else ""
        text = f"---\ntitle: S\ndate: 2026-02-0{number + 1}\n{front}---\n{change}```yaml spurs\n{text}```\n"
        files[f"2026-02-0{number + 1}-s.md"] = text
    return make_book([SourceFile(path, text.encode()) for path, text in files.items()], Path("/nowhere"))


def report(chain: str, spurs: str) -> Report:
    book = book_with(chain, spurs)
    assert [str(p) for p in book.problems] == []
    found = book.outcome(book.entries[-1].blocks[0]).data
    assert isinstance(found, Report)
    return found


def only_spur(chain: str, spurs: str) -> Spur:
    (spur,) = report(chain, spurs).spurs
    return spur


def named(spur: Spur) -> dict[str, Candidate]:
    return {each.words: each for each in spur.candidates}


def left(spur: Spur) -> list[str]:
    return [each.words for each in spur.candidates if not each.struck]


def page(book: Book) -> str:
    return render_text(block_pieces(book, book.entries[-1], book.entries[-1].blocks[-1]), 200)


# --- which products there are ---------------------------------------------------------------------


def brute_force(hz: list[float], order: int, target: float, half: float) -> set[tuple[int, ...]]:
    """All rows of at most three sources up to an order that land on a target, in plain Python."""
    found = set()
    for row in product(range(-order, order + 1), repeat=len(hz)):
        used = [n for n in row if n]
        few = 1 <= len(used) <= 3 and sum(map(abs, used)) <= order and used[0] > 0
        if few and abs(abs(sum(n * f for n, f in zip(row, hz, strict=True))) - target) <= half:
            found.add(row)
    return found


def test_candidates_against_brute_force() -> None:
    """Signal, oscillator that follows, clock, reference to order 6: each product is listed, or its shorter twin is."""
    spurs = """\
sources:
  - {name: clock, frequency: 12.525 MHz}
  - {name: reference, frequency: 10.02 MHz}
order: 6
seen: {frequency: 50.1 MHz ± 9 kHz}
"""
    spur = only_spur(FOLLOWING, spurs)
    tuned, half = 50.1 * MHZ, 4e3 + 9e3
    hz = [50.3 * MHZ, tuned - 10.7 * MHZ, 12.525 * MHZ, 10.02 * MHZ]
    on_signal = brute_force(hz, 6, tuned, half)
    in_if = brute_force(hz, 6, 10.7 * MHZ, half)
    listed = {(one_sign(each.orders[:4]), each.spot.name) for each in spur.candidates if "outside" not in each.words}
    assert {row for row, name in listed if name == "signal"} <= on_signal
    assert {row for row, name in listed if name == "mixer"} <= in_if
    assert (0, 0, 4, 0) in on_signal
    assert (0, 0, 0, 5) in on_signal

    def converted(row: tuple[int, ...]) -> set[tuple[int, ...]]:
        """What comes of the row with the oscillator once more or once less: the wanted conversion is one of these."""
        return {one_sign((row[0], row[1] + step, *row[2:])) for step in (1, -1)}

    for name, rows, others in (("signal", on_signal, in_if), ("mixer", in_if, on_signal)):
        for row in rows:
            twins = {twin for twin in converted(row) if twin in others and sum(map(abs, twin)) < sum(map(abs, row))}
            assert ((row, name) in listed) != bool(twins), row


def test_six_sources_to_order_fifteen_against_brute_force() -> None:
    """At a stage, where no product has a twin: everything that lands within 100 kHz, by three nested loops."""
    extra = {"clock": 12.288, "reference": 10.0, "crystal": 0.032768, "switcher": 0.6013}
    listed = "\n".join(f"  - {{name: {name}, frequency: {f} MHz}}" for name, f in extra.items())
    seen = "seen: {frequency: 21.4021 MHz ± 100 kHz, where: if-filter}"
    spur = only_spur(converter("50.1 MHz", "71.5 MHz"), f"sources:\n{listed}\norder: 15\n{seen}\n")
    hz = [50.1 * MHZ, 71.5 * MHZ, *(f * MHZ for f in extra.values())]
    expected = set()
    for i in range(6):
        for j in range(i, 6):
            for k in range(j, 6):
                for few in product(range(-15, 16), repeat=len({i, j, k})):
                    row = dict(zip(sorted({i, j, k}), few, strict=True))
                    if 0 in few or sum(map(abs, few)) > 15:
                        continue
                    if abs(abs(sum(n * hz[s] for s, n in row.items())) - 21.4021 * MHZ) <= 100e3:
                        expected.add(one_sign(tuple(row.get(s, 0) for s in range(6))))
    expected.discard((1, -1, 0, 0, 0, 0))
    found = {one_sign(each.orders[:6]) for each in spur.candidates if "outside" not in each.words}
    assert len(expected) > 10
    assert found == expected


def test_harmonics_beyond_the_order_and_harmonics_that_are_not_there() -> None:
    text = "sources: {{name: switcher, frequency: 612 kHz{more}}}\norder: 5\nseen: {{frequency: 50.184 MHz ± 1 kHz}}\n"
    # 82 * 612 kHz = 50.184 MHz
    assert "82·switcher" in left(only_spur(FOLLOWING, text.format(more=", harmonics: 90")))
    assert "82·switcher" not in left(only_spur(FOLLOWING, text.format(more="")))
    few = "sources: {name: clock, frequency: 25.05 MHz, harmonics: 1}\nseen: {frequency: 50.1 MHz ± 1 kHz}\n"
    assert "2·clock" not in left(only_spur(FOLLOWING, few))
    assert "2·clock" in left(only_spur(FOLLOWING, few.replace(", harmonics: 1", "")))


def test_a_source_that_wanders_takes_its_harmonics_along() -> None:
    """The fifth harmonic of 10 MHz, 2 kHz either way, may be 10 kHz off."""
    text = "sources: {{name: clock, frequency: 10 {around} MHz}}\nseen: {{frequency: 50.013 MHz ± 1 kHz}}\n"
    assert "5·clock" in left(only_spur(FOLLOWING, text.format(around="± 0.002")))
    assert "5·clock" not in left(only_spur(FOLLOWING, text.format(around="± 0.001")))


# --- responses by name ----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("signal", "lo", "image", "half_if"),
    [
        # Closed form: 900 MHz, IF 100 MHz: half-IF low side 850, high side 950 MHz.
        ("900 MHz", "800 MHz", "700 MHz", "850 MHz"),
        ("900 MHz", "1000 MHz", "1.1 GHz", "950 MHz"),
        # Own example: 144.3 to 28.3 MHz, oscillator 116 MHz: image 87.7, half-IF 130.15 MHz.
        ("144.3 MHz", "116 MHz", "87.7 MHz", "130.15 MHz"),
    ],
)
def test_image_and_half_if_by_name(signal: str, lo: str, image: str, half_if: str) -> None:
    spur = only_spur(converter(signal, lo), f"seen: {{frequency: {signal}, tolerance: 1 kHz}}\n")
    by_name = {each.response: each.words for each in spur.candidates}
    assert f"({image} outside)" in by_name["image"]
    assert f"2·({half_if} outside)" in by_name["half-IF"]
    assert by_name["true signal"] == f"({signal} outside)"
    assert by_name["IF feed-through"].endswith("outside)")


def test_a_station_on_the_image_takes_the_place_of_the_unknown_signal() -> None:
    station = "sources: {name: station, frequency: 28.702 MHz, enters: input, movable: false}\n"
    spur = only_spur(FOLLOWING, f"{station}seen: {{frequency: 50.1 MHz ± 1 kHz}}\n")
    images = [each.words for each in spur.candidates if each.response == "image"]
    assert images == ["lo − station"]


def test_second_mixer_has_an_image_too() -> None:
    """145 MHz to 21.4 MHz with 123.6 MHz, then to 455 kHz with 20.945 MHz: second image 20.49 MHz, at 144.09 MHz."""
    chain = converter("145 MHz", "123.6 MHz", "15 kHz") + (
        "  - {name: second-mixer, loss: 6 dB, lo: 20.945 MHz}\n  - {name: tail, loss: 1 dB, bandwidth: 6 kHz}\n"
    )
    spur = only_spur(chain, "seen: {frequency: 145 MHz ± 0.5 kHz}\n")
    images = {each.spot.name: each.words for each in spur.candidates if each.response == "image"}
    assert "(102.2 MHz outside)" in images["mixer"]
    assert "(144.09 MHz outside)" in images["second-mixer"]
    assert "lo of mixer" in images["second-mixer"]


# --- evidence -------------------------------------------------------------------------------------


def heard_at(row: dict[str, int], hz: dict[str, float], near: float) -> float:
    """Where on the dial of the receiver FOLLOWING a product is heard: the tuning at which it stands in the IF."""

    def off(tuned: float) -> float:
        now = {**hz, "lo": tuned - 10.7 * MHZ + hz.get("lo error", 0.0)}
        return float(abs(sum(n * now[name] for name, n in row.items())) - 10.7 * MHZ)

    return float(optimize.brentq(off, near - 1e5, near + 1e5, xtol=1e-3))


# 3 lo - 4 clock stands in the IF when the dial shows 50.1 MHz; so does 3 reference - lo.
CLOCK = (3 * 39.4 - 10.7) / 4
REFERENCE = (39.4 + 10.7) / 3
PAIR = f"""\
sources:
  - {{name: clock, frequency: {CLOCK} MHz}}
  - {{name: reference, frequency: {REFERENCE} MHz}}
"""


@pytest.mark.parametrize(
    ("row", "words", "source"),
    [
        ({"lo": 3, "clock": -4}, "3·lo − 4·clock", "clock"),
        ({"lo": 3, "clock": -4}, "3·lo − 4·clock", "reference"),
        ({"lo": -1, "reference": 3}, "3·reference", "reference"),
        ({"lo": -1, "reference": 3}, "3·reference", "lo"),
        ({"lo": 3, "clock": -4}, "3·lo − 4·clock", "lo"),
    ],
)
def test_a_shift_seen_on_the_dial_leaves_what_moves_so(row: dict[str, int], words: str, source: str) -> None:
    """The receiver is really retuned after the shift, by a search for the root; the block must keep the true cause."""
    hz = {"clock": CLOCK * MHZ, "reference": REFERENCE * MHZ}
    before = heard_at(row, hz, 50.1 * MHZ)
    shifted = {**hz, "lo error": 2e3} if source == "lo" else {**hz, source: hz[source] + 2e3}
    seen = heard_at(row, shifted, 50.1 * MHZ) - before
    moves = f"moves: {{source: {source}, by: 2 kHz, seen: {seen / 1e3:.4f} ± 0.01 kHz}}"
    spur = only_spur(FOLLOWING, f"{PAIR}seen: {{frequency: 50.1 MHz ± 1 kHz, {moves}}}\n")
    wrong = "3·reference" if words != "3·reference" else "3·lo − 4·clock"
    assert named(spur)[words].struck == ()
    assert named(spur)[words].agreed == 1
    if source == "lo":
        # The dial is wrong by the shift for all that the oscillator converts: nothing is told apart.
        assert seen == pytest.approx(-2e3, abs=0.1)
        assert named(spur)[wrong].struck == ()
    else:
        assert len(named(spur)[wrong].struck) == 1
        assert source in named(spur)[wrong].struck[0]


DOUBLE = """\
chain: rx
signal: 14.3 MHz
stages:
  - {name: first, loss: 6 dB, lo: {follows: signal, offset: 45 MHz}}
  - {name: roofing, loss: 3 dB, bandwidth: 15 kHz}
  - {name: second, loss: 6 dB, lo: 44.545 MHz}
  - {name: if-filter, loss: 3 dB, bandwidth: 2.4 kHz}
"""


@pytest.mark.parametrize(
    ("cause", "row", "clock"),
    [
        # Rows of first and second oscillator, outside signal, clock; all stand at 455 kHz when the dial shows 14.2 MHz.
        ("(14.2 MHz outside)", (1, -1, -1, 0), 16.0),
        ("2·clock", (1, -1, 0, -2), 7.1),
        ("lo of second + (15.11 MHz outside) − lo of first", (-1, 1, 1, 0), 16.0),
        ("2·lo of second − 3·clock", (0, 2, 0, -3), 29.545),
        ("2·clock − lo of first", (-1, 0, 0, 2), 29.8275),
    ],
)
@pytest.mark.parametrize("source", ["lo of second", "lo of first", "clock"])
def test_a_shift_behind_two_mixers(cause: str, row: tuple[int, ...], clock: float, source: str) -> None:
    """The dial moves as a receiver with two mixers does that is really retuned, by a search for the root."""
    outside = 15.11 if "15.11" in cause else 14.2
    shifted = ("lo of first", "lo of second", "", "clock").index(source)

    def off(tuned: float, shift: float) -> float:
        hz = [tuned + 45 * MHZ, 44.545 * MHZ, outside * MHZ, clock * MHZ]
        hz[shifted] += shift
        return abs(sum(n * f for n, f in zip(row, hz, strict=True))) - 0.455 * MHZ

    assert off(14.2 * MHZ, 0.0) == pytest.approx(0.0, abs=1e-3)
    if row[0]:
        seen = float(optimize.brentq(off, 14.1 * MHZ, 14.3 * MHZ, args=(700.0,), xtol=1e-3)) - 14.2 * MHZ
    else:
        # No tuning moves it, so that it was not seen to move on the dial.
        seen = 0.0
    moves = f"moves: {{source: {source}, by: 700 Hz, seen: {seen:.3f} ± 1 Hz}}"
    sources = f"sources: {{name: clock, frequency: {clock} MHz}}\n"
    names = named(only_spur(DOUBLE, f"{sources}order: 5\nseen: {{frequency: 14.2 MHz ± 0.5 kHz, {moves}}}\n"))
    assert names[cause].struck == ()
    assert names[cause].agreed == (1 if row[0] else 0)


def test_tuning_tells_the_harmonic_of_the_oscillator() -> None:
    """By 1 kHz of tuning a true signal's tone moves by 1 kHz, what meets the third harmonic by 3 kHz."""
    moves = "moves: {source: tuning, by: 1 kHz, seen: 3 kHz}"
    spur = only_spur(FOLLOWING, f"{PAIR}seen: {{frequency: 50.1 MHz ± 1 kHz, {moves}}}\n")
    assert left(spur) == ["3·lo − 4·clock"]


def test_drop_of_the_input_counts_what_comes_in_by_it() -> None:
    """10 dB at the input: 10 dB of an image, 20 dB of a half-IF, nothing of what is made inside."""
    text = "{pair}seen: {{frequency: 50.1 MHz ± 1 kHz, drops: {{by: 10 dB, seen: {seen}}}}}\n"

    def left_after(seen: str) -> set[str]:
        spur = only_spur(FOLLOWING, text.format(pair=PAIR, seen=seen))
        return {each.response or each.words for each in spur.candidates if not each.struck}

    assert left_after("0 ± 1 dB") == {"3·lo − 4·clock", "3·reference"}
    assert left_after("10 ± 1 dB") >= {"image", "IF feed-through", "true signal"}
    assert "half-IF" in left_after("20 dB")
    assert "half-IF" not in left_after("10 dB")
    struck = named(only_spur(FOLLOWING, text.format(pair=PAIR, seen="19 ± 2 dB")))["3·reference"].struck
    assert struck == ("with the input 10 dB lower it would stay as it is; it fell by 19 dB",)


def test_a_drop_of_one_source() -> None:
    drops = "drops: {source: reference, by: 3 dB, seen: 9 ± 1 dB}"
    assert left(only_spur(FOLLOWING, f"{PAIR}seen: {{frequency: 50.1 MHz ± 1 kHz, {drops}}}\n")) == ["3·reference"]


def test_what_stays_at_every_tuning_did_not_move() -> None:
    """A clock on the IF itself is heard all over the dial: a move that was seen speaks against it, none does not."""
    text = "sources: {{name: clock, frequency: 10.7 MHz}}\nseen: {{frequency: 50.1 MHz ± 1 kHz, {moves}}}\n"
    moved = named(only_spur(FOLLOWING, text.format(moves="moves: {source: clock, by: 1 kHz, seen: 1 kHz}")))["clock"]
    assert "every tuning" in moved.struck[0]
    stayed = named(only_spur(FOLLOWING, text.format(moves="moves: {source: clock, by: 1 kHz, seen: 0 kHz}")))["clock"]
    assert stayed.struck == ()


def test_ranking_puts_what_is_struck_out_last_and_few_orders_first() -> None:
    spur = only_spur(FOLLOWING, f"{PAIR}seen: {{frequency: 50.1 MHz ± 1 kHz, drops: {{by: 10 dB, seen: 0 dB}}}}\n")
    struck = [bool(each.struck) for each in spur.candidates]
    assert struck == sorted(struck)
    orders = [each.order for each in spur.candidates if not each.struck]
    assert orders == sorted(orders) == [3, 7]


# --- the next trial -------------------------------------------------------------------------------


def test_next_trial_tells_the_rest_apart() -> None:
    spur = only_spur(FOLLOWING, f"{PAIR}seen: {{frequency: 50.1 MHz ± 0.2 kHz, drops: {{by: 10 dB, seen: 0 dB}}}}\n")
    assert left(spur) == ["3·reference", "3·lo − 4·clock"]
    assert spur.trial is not None
    assert spur.trial.words == "Tune by 1 kHz and listen how far the spur's tone moves."
    outcomes = {words: [each.words for each in found] for words, found in spur.trial.outcomes}
    assert outcomes == {"moves by 1 kHz": ["3·reference"], "moves by 3 kHz": ["3·lo − 4·clock"]}


def test_a_trial_that_was_made_is_not_asked_for_again() -> None:
    seen = "seen: {frequency: 50.1 MHz ± 0.2 kHz, drops: {by: 10 dB, seen: 10 dB}}\n"
    spur = only_spur(FOLLOWING, seen)
    assert spur.trial is None or "ahead of the input" not in spur.trial.words


def test_nobody_is_asked_to_move_a_broadcast_station() -> None:
    station = "sources: {name: station, frequency: 25.05 MHz, enters: input, movable: false}\n"
    drop = "drops: {by: 10 dB, seen: 20 dB}"
    spur = only_spur(FOLLOWING, f"{station}seen: {{frequency: 50.1 MHz ± 1 kHz, {drop}}}\n")
    assert {each.words for each in spur.candidates if not each.struck} >= {"2·station"}
    assert spur.trial is None or "station" not in spur.trial.words


def test_page_says_what_is_left_and_what_to_do() -> None:
    book = book_with(FOLLOWING, f"{PAIR}seen: {{name: whistle, frequency: 50.1 MHz ± 1 kHz}}\n")
    shown = page(book)
    assert "Spur “whistle” at 50.1 MHz" in shown
    assert "3·lo − 4·clock" in shown
    assert "Next: Tune by 1 kHz and listen how far the spur's tone moves." in shown
    assert "moves by 3 kHz  " in shown
    one = book_with(
        FOLLOWING, f"{PAIR}seen: {{frequency: 50.1 MHz ± 1 kHz, drops: {{source: clock, by: 3 dB, seen: 12 dB}}}}\n"
    )
    assert "Only 3·lo − 4·clock is left." in page(one)
    none = book_with(FOLLOWING, "seen: {frequency: 50.1 MHz ± 1 kHz, moves: {source: lo, by: 1 kHz, seen: 99 kHz}}\n")
    assert "The evidence strikes out all of them." in page(none)


# --- levels ---------------------------------------------------------------------------------------


def test_level_is_a_result_at_the_unit_with_its_key() -> None:
    text = """\
bench: shack
through: [pad]
seen:
  - {name: whistle, frequency: 50.1 MHz ± 1 kHz, level: -112.5(3) dBm}
  - {frequency: 50.3 MHz ± 1 kHz, level: -120 dBm}
"""
    book = book_with(FOLLOWING, text)
    found = {each.key: each for each in book.results if each.quantity == "spur_level"}
    assert set(found) == {"rx/spur_level@50.1MHz#whistle", "rx/spur_level@50.3MHz"}
    whistle = found["rx/spur_level@50.1MHz#whistle"]
    assert whistle.value == pytest.approx(-102.5)
    assert whistle.shown == pytest.approx(-112.5)
    # Root sum of squares: 0.3 dB read, 1.5 and 0.3 and 0.2 dB limits over the root of 3.
    assert whistle.u == pytest.approx((0.3**2 + (1.5**2 + 0.3**2 + 0.2**2) / 3) ** 0.5, rel=1e-6)


def test_level_has_a_delta_and_can_be_a_regression() -> None:
    text = "bench: shack\nseen: {{name: whistle, frequency: 50.1 MHz ± 1 kHz, level: {level} dBm}}\n"
    book = book_with(FOLLOWING, text.format(level="-112.5(1)"), text.format(level="-105.0(1)"))
    (delta,) = [each for each in book.findings.deltas if each.quantity == "spur_level"]
    assert (delta.verdict, delta.delta) == ("worse", pytest.approx(7.5))
    assert any(each.key == delta.key for each in book.findings.regressions)


# --- plans ----------------------------------------------------------------------------------------

PLAN = """\
sources:
  - {name: clock, frequency: 12.528 MHz}
  - {name: station, frequency: 94.7 MHz, enters: input}
order: 5
bandwidth: 8 kHz
avoid:
  tune: [50 MHz, 52 MHz]
  if: [10.7 MHz, 21.4 MHz, 71.5 MHz]
"""


@pytest.mark.parametrize(
    ("if_mhz", "side"), [(10.7, "high"), (10.7, "low"), (21.4, "high"), (21.4, "low"), (71.5, "low")]
)
def test_plan_against_brute_force_at_every_kilohertz(if_mhz: float, side: str) -> None:
    """At each tuning, 1 kHz apart: is any product of order 5 or less in the IF, or on the signal, without the map?"""
    plan = report("", PLAN).plan
    assert plan is not None
    choice = next(each for each in plan.choices if each.if_hz == if_mhz * MHZ and each.side == side)
    assert not choice.why
    stretches = [(each.low_hz, each.high_hz) for each in (*choice.crossings, *plan.common)]
    rows = [
        row
        for row in product(range(-5, 6), repeat=4)
        if 0 < sum(map(abs, row)) <= 5 and sum(1 for n in row if n) <= 3 and next(n for n in row if n) > 0
    ]
    affected = 0
    for kilohertz in range(50_000, 52_001, 3):
        tuned = kilohertz * 1e3 + 137.0
        if tuned > 52 * MHZ:
            break
        lo = tuned + if_mhz * MHZ if side == "high" else abs(tuned - if_mhz * MHZ)
        hz = (tuned, lo, 12.528 * MHZ, 94.7 * MHZ)
        wanted = (1, 1, 0, 0) if side == "low" and if_mhz * MHZ > tuned else (1, -1, 0, 0)
        hit = False
        for row in rows:
            f = abs(row[0] * hz[0] + row[1] * hz[1] + row[2] * hz[2] + row[3] * hz[3])
            into_if = abs(f - if_mhz * MHZ) <= 4e3 and row != wanted
            hit = hit or into_if or (row[0] == 0 and abs(f - tuned) <= 4e3)
        told = any(low <= tuned <= high for low, high in stretches)
        assert hit == told, tuned
        affected += hit
    assert affected > 3


def test_the_choice_with_the_fewest_low_order_products_comes_first() -> None:
    """94.7 MHz is the image of 51.9 MHz with an IF of 21.4 MHz and the oscillator above: order 2, last of its IF."""
    plan = report("", PLAN).plan
    assert plan is not None
    usable = [each for each in plan.choices if not each.why]
    counts = [each.counts(5) for each in usable]
    assert counts == sorted(counts)
    above = next(each for each in usable if each.if_hz == 21.4 * MHZ and each.side == "high")
    first = above.crossings[0]
    assert (first.words, first.order, first.response) == ("station − lo", 2, "image")
    assert first.middle_hz == pytest.approx(51.9 * MHZ)
    assert above.image == pytest.approx((92.8 * MHZ, 94.8 * MHZ))
    assert above is usable[-1]


def test_an_if_inside_the_tuning_range_is_not_usable() -> None:
    plan = report("", PLAN.replace("71.5 MHz", "51 MHz")).plan
    assert plan is not None
    unusable = [each for each in plan.choices if each.why]
    assert {each.if_hz for each in unusable} == {51 * MHZ}
    assert list(plan.choices[-2:]) == unusable


def test_plan_takes_if_and_width_from_the_chain() -> None:
    plan = report(FOLLOWING, "avoid: {tune: [50 MHz, 52 MHz], side: low}\n").plan
    assert plan is not None
    (choice,) = plan.choices
    assert choice.if_hz == pytest.approx(10.7 * MHZ)
    assert choice.lo == pytest.approx((39.3 * MHZ, 41.3 * MHZ))
    assert plan.asked.bandwidth_hz == 8e3


def test_counts_are_results_and_the_map_has_words_and_numbers() -> None:
    book = book_with("", PLAN)
    counts = {each.name: each.value for each in book.results if each.quantity == "spur_crossings"}
    plan = report("", PLAN).plan
    assert plan is not None
    assert counts == {each.key: len(each.crossings) for each in plan.choices if not each.why}
    html = render(block_pieces(book, book.entries[-1], book.entries[-1].blocks[0]), lambda to, _: to, draw)
    assert "<svg" in html
    shown = page(book)
    assert "Fewest low-order products: " in shown
    assert "products from 50 MHz to 52 MHz; the first is" in shown
    assert "station − lo" in shown


# --- faults ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "code", "line", "column"),
    [
        ("order: 7\n", "missing-key", 6, 1),
        ("order: 16\nseen: {frequency: 50.1 MHz ± 1 kHz}\n", "number", 6, 8),
        ("seen: {name: whistle}\n", "missing-key", 6, 7),
        ("seen: {frequency: 50.1 MHz, tolerance: -1 kHz}\n", "sign", 6, 40),
        ("seen: {frequency: 50.1 MHz ± 1 kHz, where: if-filtr}\n", "unknown-stage", 6, 44),
        ("seen: {frequency: 10.7 MHz, where: if-filter}\n", "tolerance", 6, 19),
        ("seen: {frequency: 50.1 MHz ± 1 kHz, tolerance: 1 kHz}\n", "given-twice", 6, 48),
        ("seen: {frequency: 50.1 MHz ± 1 kHz, tuned: 50 MHz}\n", "given-twice", 6, 44),
        (
            "seen: {frequency: 50.1 MHz ± 1 kHz, moves: {source: clok, by: 1 kHz, seen: 1 kHz}}\n",
            "unknown-source",
            6,
            53,
        ),
        ("seen: {frequency: 50.1 MHz ± 1 kHz, moves: {source: lo, by: 0 kHz, seen: 1 kHz}}\n", "no-change", 6, 61),
        ("sources: {name: lo, frequency: 1 MHz}\nseen: {frequency: 50.1 MHz ± 1 kHz}\n", "duplicate-source", 6, 17),
        ("avoid: {tune: [52 MHz, 50 MHz]}\n", "pair", 6, 15),
        ("avoid: {tune: [50 MHz, 52 MHz], side: hihg}\n", "unknown-word", 6, 39),
    ],
)
def test_faults_stand_where_they_are(text: str, code: str, line: int, column: int) -> None:
    book = book_with(FOLLOWING, text)
    assert [(p.code, p.place.line, p.place.column) for p in book.problems] == [(code, line, column)]


def test_the_other_spurs_are_computed_beside_one_at_fault() -> None:
    text = (
        "seen:\n  - {frequency: 50.1 MHz ± 1 kHz, where: nowhere}\n  - {frequency: 50.2 MHz ± 1 kHz, level: -110 dBm}\n"
    )
    book = book_with(FOLLOWING, text)
    assert [p.code for p in book.problems] == ["unknown-stage"]
    found = book.outcome(book.entries[-1].blocks[0])
    assert [spur.seen_hz for spur in found.data.spurs] == [50.2 * MHZ]
    assert [each.at_hz for each in found.results] == [50.2 * MHZ]


def test_without_a_chain_only_named_sources_are_combined() -> None:
    assert left(only_spur("", "sources: {name: clock, frequency: 10 MHz}\nseen: {frequency: 30 MHz ± 1 kHz}\n")) == [
        "3·clock"
    ]
    assert [p.code for p in book_with("", "seen: {frequency: 30 MHz ± 1 kHz}\n").problems] == ["no-sources"]


def test_nothing_is_seen_on_a_plan() -> None:
    files = {
        "a.md": f"---\ntitle: A\ndate: 2026-01-01\nrevision: A\n---\n```yaml chain\n{FOLLOWING}```\n",
        "b.md": "---\ntitle: B\ndate: 2026-01-02\nrevision: B\nstate: planned\n---\n```yaml change\nchain: rx\nsteps:\n"
        "  - set: lna\n    to: {gain: 12 dB}\n```\n```yaml spurs\nseen: {frequency: 50.1 MHz ± 1 kHz}\n```\n",
    }
    book = make_book([SourceFile(path, text.encode()) for path, text in files.items()], Path("/nowhere"))
    assert [p.code for p in book.problems] == ["reading-of-plan"]
