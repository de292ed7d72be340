"""What a terminal shows: the same words and numbers as the site, within its width."""

from __future__ import annotations

import re
import unicodedata
from pathlib import Path

import pytest
from workshop import block, book_of, chain, change, entry, reading

from logbook.book import Book, SourceFile
from logbook.cli import main
from logbook.cli.report import report_pieces
from logbook.pages import generated_pages, home_pieces
from logbook.terminal import render

STAGES = """name: lna, gain: 18 ± 0.5 dB, nf: 1.1 ± 0.2 dB, oip3: 24 dBm, op1db: 10 dBm
    name: mixer, gain: -6.5 dB, nf: 7 dB, iip3: 13 dBm, lo: 71.5 MHz"""
BENCH = block("bench", "bench: shack\nreads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB}")
CONDITIONS = "at: 50.1 MHz\nrbw: 10 kHz\naveraging: log\nbench: shack"
TARGET = block("target", "{quantity: output_noise, at: 50.1 MHz, rbw: 10 kHz, limit: <= -99 dBm}")

SOURCES: tuple[SourceFile, ...] = (
    entry(
        "01-01",
        BENCH,
        chain(STAGES),
        reading("output_noise: -113.2(2) dBm, gain: 11.4 dB", CONDITIONS),
        TARGET,
        block("todo", "{id: case, what: paint the case}"),
        revision="A",
        title="First light – µ and Ω",
    ),
    entry(
        "02-01",
        change("  - {insert: {name: post-amp, gain: 6 dB, nf: 3 dB}, after: mixer}"),
        reading("output_noise: -97.0(2) dBm, gain: 17.5 dB", CONDITIONS),
        revision="B",
    ),
    entry("02-10", change("  - remove: mixer"), revision="T", front="state: trial\n"),
)
BOOK = book_of(*SOURCES)


def width(line: str) -> int:
    """Columns of a terminal."""
    return sum(2 if unicodedata.east_asian_width(c) in "WF" else 0 if unicodedata.combining(c) else 1 for c in line)


def texts(book: Book, columns: int, *, ascii_only: bool = False) -> list[str]:
    everything = [home_pieces(book), report_pieces(book), *(list(p.pieces) for p in generated_pages(book))]
    return [render(pieces, columns, ascii_only=ascii_only) for pieces in everything]


@pytest.mark.parametrize("columns", [60, 80, 120])
def test_lines_keep_to_the_width(columns: int) -> None:
    for text in texts(BOOK, columns):
        for line in text.split("\n"):
            assert width(line) <= columns, line


def test_plain_terminal_gets_plain_letters() -> None:
    for text in texts(BOOK, 80, ascii_only=True):
        assert text.isascii()
    (home, *_) = texts(BOOK, 80, ascii_only=True)
    assert "First light - u and ohm" in home


def test_no_trailing_spaces_and_no_markup() -> None:
    for text in texts(BOOK, 80):
        assert not re.search(r"[ \t]$", text, re.MULTILINE)
        assert not re.search(r"<[a-z]+[ >]|&amp;|&lt;", text)


def test_report_says_what_stands_and_what_got_worse() -> None:
    report = render(report_pieces(BOOK), 100)
    for words in ("3 entries", "revision B", "misses", "worse", "+6.1", "1 open item", "0 problems"):
        assert words in report, report


def test_history_marks_side_branches_in_words() -> None:
    history = render(next(p for p in generated_pages(BOOK) if p.path == "history.md").pieces, 100)
    assert re.search(r"T 2026-02-10, trial \(side branch\)", history)


def test_empty_book() -> None:
    for text in texts(book_of(), 80):
        assert text.strip()


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    for source in SOURCES:
        (tmp_path / source.path).write_bytes(source.data)
    return tmp_path


def test_compare_prints_the_deltas_between_any_two_revisions(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["compare", "T", "A", str(folder)]) == 0
    said = capsys.readouterr().out
    # From the trial back to the first: 18 + 6 dB against 18 - 6.5 dB.
    assert re.search(r"gain .*24\.00 dB +11\.50 dB +-12\.50 dB", said), said
    assert "changed" in said


def test_compare_with_its_budget(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["compare", "A", "B", str(folder), "--budget"]) == 0
    said = capsys.readouterr().out
    assert "common to both: cancels" in said
    assert "instrument accuracy, shack bench" in said
    assert "16.20" in said or "+16.2" in said
