"""An engineer with a pocket calculator gets the page's numbers from what the page shows, within its digits."""

from __future__ import annotations

import math
import re

import pytest
from reader import Read, read_pieces
from workshop import block, book_of, chain, change, entry, reading

from logbook.book import Book
from logbook.pages import block_pieces

STAGES = """name: lna, gain: 18 ± 0.5 dB, nf: 1.1 ± 0.2 dB
    name: pad, loss: 3.0(2) dB
    name: amp, gain: 15.0(4) dB, nf: 9.0(5) dB"""

BENCH = block(
    "bench",
    """bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, floor: -150 dBm/Hz, rbw_filter: gaussian}
path:
  - {name: tap, loss: 20.37 ± 0.2 dB}
  - {name: pad, loss: 10.13 ± 0.2 dB}""",
)


def conditions(rbw: str, averaging: str, more: str = "") -> str:
    return f"bench: shack\nrbw: {rbw}\naveraging: {averaging}\nthrough: [tap, pad]\n{more}"


READ = (
    ("output_noise: -105.2(2) dBm", conditions("10 kHz", "log")),
    ("output_noise: -98.37(11) dBm", conditions("30 kHz", "power")),
    ("output_noise: -101.6 dBm", conditions("10 kHz", "voltage")),
    ("output_noise: -77.0 dBm", conditions("3 kHz", "log", "shown_at: unit")),
    ("output_level: -104.9(3) dBm", conditions("10 kHz", "log")),
    ("output_level: -40.12 dBm", conditions("1 kHz", "power")),
)


def book() -> Book:
    first = "\n".join(reading(result, f"name: n{i}\n{more}") for i, (result, more) in enumerate(READ))
    second = "\n".join(
        reading(re.sub(r"-(\d+)\.", lambda m: f"-{int(m[1]) - 2}.", result), f"name: n{i}\n{more}")
        for i, (result, more) in enumerate(READ)
    )
    return book_of(
        entry("01-01", chain(STAGES), BENCH, first, reading("gain: 31.9(3) dB, nf: 2.9(2) dB"), revision="A"),
        entry("02-01", change("  - {set: pad, to: {loss: 1.0(2) dB}}"), second, revision="B"),
    )


BOOK = book()


def pages(day: int) -> list[Read]:
    """The blocks of readings of one entry, as read on its page."""
    found = BOOK.entries[day]
    return [read_pieces(block_pieces(BOOK, found, each)) for each in found.blocks if each.kind == "reading"]


def numbers(text: str) -> list[tuple[float, float]]:
    """Every number with a unit of decibels, and half a step of its last digit."""
    written = re.findall(r"([+-]?\d+(?:\.\d+)?) dB", text.replace("−", "-"))
    return [(float(n), half_step(n)) for n in written]


def half_step(number: str) -> float:
    return 0.5 * 10.0 ** -len(number.partition(".")[2])


@pytest.mark.parametrize("day", [0, 1])
@pytest.mark.parametrize("which", range(len(READ)))
def test_corrections_add_up_to_the_value_on_equal_terms(day: int, which: int) -> None:
    words = pages(day)[which].words
    sums = re.findall(r"read (-?[^\n]*on equal terms [^\n]*)", words)
    assert len(sums) == 1, words
    # The floor that was taken off stands in brackets, for information.
    found = numbers(re.sub(r"\([^)]*\)", "", sums[0]))
    (*terms, (value, digit)) = found
    assert len(terms) >= 2
    assert sum(n for n, _ in terms) == pytest.approx(value, abs=sum(d for _, d in terms) + digit)


@pytest.mark.parametrize("which", range(len(READ)))
def test_change_is_the_difference_of_what_is_shown(which: int) -> None:
    """Noise in the later reading's bandwidth, on both sides."""
    ((head, row),) = [
        (table[0], table[1]) for caption, table in pages(1)[which].tables.items() if caption.startswith("Results")
    ]
    cells = dict(zip(head, row, strict=True))
    written = {}
    for name in ("before", "on equal terms", "change"):
        number = re.match(r"[+-]?[\d.]+", cells[name])
        assert number, cells[name]
        written[name] = number[0]
    digits = sum(half_step(number) for number in written.values())
    difference = float(written["on equal terms"]) - float(written["before"])
    assert difference == pytest.approx(float(written["change"]), abs=digits)


@pytest.mark.parametrize("which", range(len(READ)))
def test_budget_of_a_change_adds_up_in_squares(which: int) -> None:
    read = pages(1)[which]
    (table,) = (t for caption, t in read.tables.items() if caption.startswith("Where the doubt"))
    head, *rows = table
    lowest = highest = 0.0
    for row in rows:
        cells = dict(zip(head, row, strict=True))
        contribution = cells["contribution, dB"]
        if "cancels" in contribution:
            assert float(cells["sensitivity"]) == 0
            continue
        size, half = float(contribution), half_step(contribution)
        u, sensitivity = float(cells["u, dB"]), abs(float(cells["sensitivity"]))
        relative = half_step(cells["u, dB"]) / u + half_step(cells["sensitivity"]) / sensitivity
        assert size == pytest.approx(u * sensitivity, abs=half + 1.1 * relative * size)
        lowest += max(size - half, 0) ** 2
        highest += (size + half) ** 2
    together = re.search(r"Together u = ([\d.]+) dB; with k = 2, ± ([\d.]+) dB", read.words)
    assert together
    u, expanded = float(together[1]), float(together[2])
    assert math.sqrt(lowest) - half_step(together[1]) <= u <= math.sqrt(highest) + half_step(together[1])
    assert expanded == pytest.approx(2 * u, abs=2 * half_step(together[1]) + half_step(together[2]))


def test_agreement_can_be_followed() -> None:
    """Difference, and E_n from the two standard uncertainties that are shown."""
    (table,) = (t for c, t in pages(0)[len(READ)].tables.items() if "measured" in t[0] and "E_n" in str(t[0]))
    head, *rows = table
    assert len(rows) == 2
    for row in rows:
        cells = dict(zip(head, row, strict=True))
        (measured, u), (predicted, v) = (
            tuple(map(float, re.findall(r"-?\d+\.\d+", cells[name]))) for name in ("measured", "predicted")
        )
        difference = float(cells["difference"].split()[0])
        assert measured - predicted == pytest.approx(difference, abs=0.0151)
        assert abs(difference) / (2 * math.hypot(u, v)) == pytest.approx(float(cells["E_n"]), rel=0.08, abs=0.02)


def test_what_is_shown_follows_the_uncertainty() -> None:
    """JCGM 100:2008 7.2.6: two significant digits of u, and the value to the same place."""
    for read in pages(0) + pages(1):
        for value, u in re.findall(r"(-?\d+(?:\.\d+)?) ± (\d+(?:\.\d+)?)", read.words):
            assert len(u.replace(".", "").lstrip("0")) == 2, (value, u)
            assert len(value.partition(".")[2]) == len(u.partition(".")[2])
