"""Sweeps of 100,000 points: read, reported and shown, against what the csv module takes for the same numbers alone."""

from __future__ import annotations

import csv
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from timed import tell

from logbook.book import Book, SourceFile, make_book
from logbook.pages import block_pieces

pytestmark = pytest.mark.benchmark

POINTS = 100_000

CHAIN = """```yaml chain
chain: rx
signal: 10.7 MHz
stages:
  - {name: filter, loss: 3 dB}
```
"""
BENCH = """```yaml bench
bench: shack
reads: {linearity: ± 0.3 dB}
```
"""

BANDPASS = """
name: filter
of: bandpass
bench: shack
file: filter.csv
report:
  - peak
  - insertion_loss
  - centre
  - bandwidth: [3 dB, 6 dB, 20 dB, 40 dB]
  - shape_factor: [40 dB, 3 dB]
  - ripple
  - skirt_balance: [20 dB, 40 dB]
  - rejection: [10.61 MHz, 10.79 MHz]
"""
SPECTRUM = """
name: lines
of: spectrum
file: spectrum.csv
report: [lines: -80 dBm]
"""
NOISE = """
name: noise
of: noise
rbw: 100 Hz
file: spectrum.csv
report: [density, power: [10.65 MHz, 10.70 MHz], spot: [10.65 MHz, 10.70 MHz]]
"""


def write_traces(folder: Path) -> None:
    """A filter with noise on its skirts, and forty lines above noise."""
    random = np.random.default_rng(3)
    x = np.linspace(10.6e6, 10.8e6, POINTS)
    response = -3 - 20 * np.log10(1 + ((x - 10.7e6) / 3e3) ** 2) + random.normal(0, 0.05, POINTS)
    levels = -100 + random.normal(0, 2, POINTS)
    levels[2000 :: POINTS // 41][:40] = -40.0
    for name, unit, y in (("filter", "dB", response), ("spectrum", "dBm", levels)):
        rows = "".join(f"{a:.3f},{b:.4f}\n" for a, b in zip(x, y, strict=True))
        (folder / f"{name}.csv").write_text(f"Frequency (Hz),Level ({unit})\n{rows}")


def quickest(run: Callable[[], object]) -> float:
    found = []
    for _ in range(3):
        start = time.perf_counter()
        run()
        found.append(time.perf_counter() - start)
    return min(found)


def bare(path: Path) -> list[list[float]]:
    """The numbers of a file by the csv module, and nothing else."""
    with path.open(newline="") as file:
        rows = csv.reader(file)
        next(rows)
        return [[float(field) for field in row] for row in rows]


def shown(folder: Path, text: str) -> Book:
    head = "---\ntitle: A\ndate: 2026-01-01\nrevision: A\n---\n"
    entry = f"{head}{BENCH}\n{CHAIN}\n```yaml sweep\n{text.strip()}\n```\n"
    book = make_book([SourceFile("a.md", entry.encode())], folder)
    assert block_pieces(book, book.entries[0], book.entries[0].blocks[-1])
    return book


@pytest.mark.parametrize(("text", "results"), [(BANDPASS, 14), (SPECTRUM, 40), (NOISE, 4)])
def test_a_long_sweep_takes_four_times_its_bare_numbers(tmp_path: Path, text: str, results: int) -> None:
    write_traces(tmp_path)
    book = shown(tmp_path, text)
    assert not list(book.problems)
    assert len([r for r in book.results if r.block == "sweep"]) == results
    floor = quickest(lambda: bare(tmp_path / "spectrum.csv"))
    seconds = quickest(lambda: shown(tmp_path, text))
    of = book.outcome(book.entries[0].blocks[-1]).data.of
    tell(f"{of} of {POINTS} points: {1000 * seconds:.0f} ms, its bare numbers {1000 * floor:.0f} ms")
    assert seconds <= 4 * floor
    assert seconds < 1.0
