"""Readings brought to equal terms, by closed forms and by solving with SciPy."""

from __future__ import annotations

import math

import pytest
from scipy.optimize import brentq
from scipy.special import exp1
from workshop import block, book_of, chain, delta, entry, measured, reading

from logbook.book import Book
from logbook.model import Result

CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB")
GAUSSIAN = 0.5 * math.sqrt(math.pi / math.log(2))


def bench(reads: str, path: str = "[]") -> str:
    return block("bench", f"bench: shack\nreads: {{{reads}}}" + (f"\npath: {path}" if path != "[]" else ""))


def read(results: str, more: str, reads: str = "accuracy: ± 1 dB", path: str = "[]") -> Book:
    conditions = f"bench: shack\n{more}"
    return book_of(entry("01-01", CHAIN, bench(reads, path), reading(results, conditions), revision="A"))


def one(results: str, more: str, reads: str = "accuracy: ± 1 dB", path: str = "[]") -> Result:
    (found,) = [r for r in read(results, more, reads, path).results if r.basis == "measured"]
    return found


def noise(dbm: float) -> float:
    return 10 ** (dbm / 10)


def test_power_average_as_read() -> None:
    found = one("output_noise: -100 dBm", "rbw: 10 kHz\naveraging: power")
    assert found.value == pytest.approx(-100)
    assert found.corrections == ()


@pytest.mark.parametrize(("averaging", "db"), [("log", 2.507), ("voltage", 1.049), ("power", 0.0)])
def test_averaging_of_noise(averaging: str, db: float) -> None:
    # Closed form: 10 lg e^gamma, 10 lg 4/pi.
    found = one("output_noise: -100 dBm", f"rbw: 10 kHz\naveraging: {averaging}")
    assert found.value == pytest.approx(-100 + db, abs=0.0005)


@pytest.mark.parametrize(
    ("name", "ratio"),
    [
        ("gaussian", GAUSSIAN),
        ("gaussian_6db", 0.7527),
        ("synchronous_4", 1.1285),
        ("synchronous_5", 1.1138),
        ("1.2", 1.2),
    ],
)
def test_noise_bandwidth_of_the_rbw_filter(name: str, ratio: float) -> None:
    # The published table of synchronously tuned poles; the value is in a noise bandwidth equal to the RBW.
    found = one("output_noise: -100 dBm", "rbw: 10 kHz\naveraging: power", f"rbw_filter: {name}")
    assert found.value == pytest.approx(-100 - 10 * math.log10(ratio), abs=0.0003)


def test_noise_bandwidth_leaves_carriers_alone() -> None:
    found = one("output_level: -30 dBm", "rbw: 10 kHz\naveraging: power", "rbw_filter: gaussian")
    assert found.value == pytest.approx(-30)


PATH = "[{name: tap, loss: 30 ± 0.4 dB}, {name: pad, loss: 10.0(1) dB}]"


def test_losses_between_unit_and_instrument_are_added() -> None:
    found = one("output_level: -20.0(2) dBm", "through: [tap, pad]", "accuracy: ± 1.5 dB, linearity: ± 0.3 dB", PATH)
    assert found.value == pytest.approx(20)
    # By hand: accuracy, linearity, both pads and the reading's own doubt, all independent.
    parts = (1.5 / math.sqrt(3), 0.3 / math.sqrt(3), 0.4 / math.sqrt(3), 0.1, 0.2)
    assert found.u == pytest.approx(math.sqrt(sum(p * p for p in parts)))


def test_value_that_is_shown_at_the_unit_is_not_corrected_again_and_keeps_the_doubt_of_the_path() -> None:
    found = one("output_level: 20 dBm", "through: [tap, pad]\nshown_at: unit", path=PATH)
    assert found.value == pytest.approx(20)
    assert found.u == pytest.approx(math.sqrt((1 + 0.16) / 3 + 0.01))


def test_only_the_named_part_of_the_path_counts() -> None:
    assert one("output_level: -20 dBm", "through: pad", path=PATH).value == pytest.approx(-10)
    assert one("output_level: -20 dBm", "", path=PATH).value == pytest.approx(-20)


def test_ratios_and_points_at_the_input_owe_nothing_to_the_path() -> None:
    book = read("gain: 20 dB, iip3: -5 dBm", "through: [tap, pad]", path=PATH)
    assert measured(book, "rx/gain").value == pytest.approx(20)
    assert measured(book, "rx/iip3").value == pytest.approx(-5)


FLOOR = "floor: -150 dBm/Hz"


def test_noise_near_the_floor_of_the_bench_by_power_subtraction() -> None:
    # Closed form: 10 dB above the floor, -0.46 dB. In 10 kHz the floor is -110 dBm.
    found = one("output_noise: -100 dBm", "rbw: 10 kHz\naveraging: power", FLOOR)
    assert found.value == pytest.approx(-100 - 0.4576, abs=0.0005)
    assert [round(amount, 2) for _, amount in found.corrections] == [-0.46]


def test_log_averaged_noise_is_made_a_power_before_the_floor_is_taken_off() -> None:
    found = one("output_noise: -102.507 dBm", "rbw: 10 kHz\naveraging: log", FLOOR)
    assert found.value == pytest.approx(-100.4576, abs=0.001)


def test_floor_counts_in_the_noise_bandwidth_of_the_filter() -> None:
    found = one("output_noise: -100 dBm", "rbw: 10 kHz\naveraging: power", FLOOR + ", rbw_filter: gaussian")
    floor = -110 + 10 * math.log10(GAUSSIAN)
    by_hand = 10 * math.log10(noise(-100) - noise(floor)) - 10 * math.log10(GAUSSIAN)
    assert found.value == pytest.approx(by_hand)


def test_carrier_as_strong_as_the_noise_in_a_log_average() -> None:
    # Moulthrop and Muha 1991: a carrier equal to the true noise reads 0.953 dB above it, which is within 1 dB of the
    # floor and so a bound; twice that carrier is solved for here with SciPy.
    assert one("output_level: -109.047 dBm", "rbw: 10 kHz\naveraging: log", FLOOR).bound == "upper"
    excess = 4.342944819 * (math.log(2) + float(exp1(2)))
    found = one(f"output_level: {-110 + excess:.6f} dBm", "rbw: 10 kHz\naveraging: log", FLOOR)
    assert found.value == pytest.approx(-110 + 10 * math.log10(2), abs=1e-5)
    assert found.bound == ""


@pytest.mark.parametrize("excess", [1.5, 3.0, 6.0, 12.0, 25.0])
def test_log_average_near_the_floor_against_a_solver(excess: float) -> None:
    found = one(f"output_level: {-110 + excess} dBm", "rbw: 10 kHz\naveraging: log", FLOOR)
    x = brentq(lambda x: 4.342944819 * (math.log(x) + exp1(x)) - excess, 1e-3, 1e6)
    assert found.value == pytest.approx(-110 + 10 * math.log10(x), abs=1e-6)


@pytest.mark.parametrize("excess", [1.5, 3.0, 10.0])
def test_power_average_near_the_floor(excess: float) -> None:
    found = one(f"output_level: {-110 + excess} dBm", "rbw: 10 kHz\naveraging: power", FLOOR)
    assert found.value == pytest.approx(10 * math.log10(noise(-110 + excess) - noise(-110)))


def test_within_one_decibel_of_the_floor_only_a_bound_is_known() -> None:
    found = one("output_noise: -109.1 dBm", "rbw: 10 kHz\naveraging: power", FLOOR)
    assert found.bound == "upper"
    assert found.value == pytest.approx(-109.1)
    assert any("upper bound" in note for note in found.notes)


def test_doubt_grows_as_the_floor_is_taken_off() -> None:
    # dP/dM = 1/(1 - N/M): 3 dB above the floor an error of the reading counts twice.
    found = one("output_level: -106.9897(5) dBm", "rbw: 10 kHz\naveraging: power", FLOOR)
    assert found.u == pytest.approx(0.0005 * 1 / (1 - 0.5), rel=1e-3)


def test_value_shown_at_the_unit_meets_the_floor_as_seen_from_there() -> None:
    # The floor of -110 dBm stands behind 40 dB: at the unit it is -70 dBm.
    found = one(
        "output_noise: -60 dBm", "rbw: 10 kHz\naveraging: power\nthrough: [tap, pad]\nshown_at: unit", FLOOR, PATH
    )
    assert found.value == pytest.approx(-60 - 0.4576, abs=0.0005)


def test_density_is_held_against_the_floor_without_a_bandwidth() -> None:
    found = one("noise_density: -140 dBm/Hz", "averaging: power", FLOOR)
    assert found.value == pytest.approx(-140.4576, abs=0.0005)


def two(first: str, second: str, result: str = "output_noise") -> Book:
    """One quantity read on A and on B, each given as `value; conditions`."""
    texts = [each.partition(";") for each in (first, second)]
    blocks = [
        reading(f"{result}: {value}", "\n".join(c.strip() for c in conditions.split(";")))
        for value, _, conditions in texts
    ]
    steps = block("change", "chain: rx\nsteps:\n  - {set: amp, to: {gain: 20.5 dB}}")
    sources = (
        entry("01-01", CHAIN, bench("linearity: ± 0.05 dB, rbw_filter: gaussian"), blocks[0], revision="A"),
        entry("02-01", steps, blocks[1], revision="B"),
    )
    return book_of(*sources)


def test_delta_of_noise_is_one_of_densities_in_the_later_bandwidth() -> None:
    book = two(
        "-90 dBm; bench: shack; rbw: 10 kHz; averaging: power", "-101 dBm; bench: shack; rbw: 1 kHz; averaging: power"
    )
    found = delta(book, "rx/output_noise", "B")
    assert found.delta == pytest.approx(-1)
    assert found.after == pytest.approx(-101 - 10 * math.log10(GAUSSIAN))
    assert found.before == pytest.approx(-100 - 10 * math.log10(GAUSSIAN))
    assert found.verdict == "better"


def test_delta_of_noise_between_averages_of_two_sorts() -> None:
    book = two(
        "-90 dBm; bench: shack; rbw: 10 kHz; averaging: power", "-92.507 dBm; bench: shack; rbw: 10 kHz; averaging: log"
    )
    found = delta(book, "rx/output_noise", "B")
    assert found.delta == pytest.approx(0, abs=0.0005)
    assert found.verdict == "same"


@pytest.mark.parametrize(
    ("first", "second", "words"),
    [
        ("-90 dBm; rbw: 10 kHz; averaging: log", "-85 dBm; rbw: 10 kHz; averaging: peak", ("log", "peak", "again")),
        ("-85 dBm; rbw: 10 kHz; averaging: peak", "-85 dBm; rbw: 1 kHz; averaging: peak", ("rbw", "10 kHz", "1 kHz")),
        (
            "-85 dBm; rbw: 1 kHz; vbw: 1 kHz; averaging: peak",
            "-85 dBm; rbw: 1 kHz; vbw: 3 kHz; averaging: peak",
            ("vbw", "3 kHz"),
        ),
        ("-90 dBm; rbw: 10 kHz; averaging: power", "-90 dBm; rbw: 10 kHz", ("B does not state", "averaging")),
        ("-90 dBm; averaging: power", "-90 dBm; rbw: 10 kHz; averaging: power", ("A does not state", "rbw")),
    ],
)
def test_unequal_terms_are_named_with_what_to_read_again(first: str, second: str, words: tuple[str, ...]) -> None:
    found = delta(two(first, second), "rx/output_noise", "B")
    assert found.verdict == "not comparable"
    assert math.isnan(found.delta)
    for word in words:
        assert word in found.why


def test_two_peaks_under_the_same_conditions_do_compare() -> None:
    peak = "rbw: 1 kHz; vbw: 3 kHz; averaging: peak"
    assert delta(two(f"-85 dBm; {peak}", f"-83 dBm; {peak}"), "rx/output_noise", "B").verdict == "worse"


def test_another_drive_is_another_condition_for_what_depends_on_the_level() -> None:
    found = delta(two("10 dBm; drive: -10 dBm", "12 dBm; drive: -8 dBm", "output_level"), "rx/output_level", "B")
    assert found.verdict == "not comparable"
    assert "-10.00 dBm" in found.why


def test_small_differences_of_the_drive_count_where_the_level_follows_it() -> None:
    level = delta(two("10 dBm; drive: -10 dBm", "10.3 dBm; drive: -9.7 dBm", "output_level"), "rx/output_level", "B")
    assert level.verdict == "not comparable"
    point = delta(two("20 dBm; drive: -10 dBm", "21 dBm; drive: -9.7 dBm", "oip3"), "rx/oip3", "B")
    assert point.verdict == "better"


@pytest.mark.parametrize(("averaging", "words"), [("", "not stated"), ("averaging: voltage", "voltage average")])
def test_carrier_near_the_floor_whose_average_follows_no_known_law(averaging: str, words: str) -> None:
    found = one("output_level: -100 dBm", f"rbw: 10 kHz\n{averaging}", FLOOR)
    assert found.value == pytest.approx(-100)
    assert any(words in note for note in found.notes)
    assert one("output_level: -80 dBm", f"rbw: 10 kHz\n{averaging}", FLOOR).notes == ()


def test_output_level_stands_for_its_drive_with_the_doubt_of_its_source() -> None:
    driven = block("bench", "bench: shack\nreads: {accuracy: ± 0.6 dB}\ndrives: {accuracy: ± 0.8 dB}")
    found = [
        next(
            r
            for r in book_of(
                entry("01-01", CHAIN, driven, reading("output_level: -10 dBm", more), revision="A")
            ).results
            if r.basis == "measured"
        )
        for more in ("bench: shack\ndrive: -30 dBm", "bench: shack")
    ]
    assert [r.u for r in found] == pytest.approx([math.sqrt(1.0 / 3), math.sqrt(0.36 / 3)])
