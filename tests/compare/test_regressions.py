"""Regressions, their acceptance, and what a run fails on."""

from __future__ import annotations

from pathlib import Path

import pytest
from workshop import block, book_of, chain, change, entry, reading

from logbook.book import Book, SourceFile
from logbook.cli import main
from logbook.failing import failures
from logbook.options import PROBLEM, REGRESSION, TARGET

CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB")
TARGET_BLOCK = block("target", "quantity: nf\nlimit: <= 3.5 dB")
ALL = frozenset({PROBLEM, REGRESSION, TARGET})


def step(nf: float, label: str, day: str, *more: str) -> SourceFile:
    made = change(f"  - {{set: amp, to: {{gain: {20 + nf} dB}}}}")
    return entry(day, made, reading(f"nf: {nf}(1) dB"), *more, revision=label)


def start(nf: float = 3.0, *more: str) -> SourceFile:
    return entry("01-01", CHAIN, reading(f"nf: {nf}(1) dB"), *more, revision="A")


def accept(quantity: str = "nf", more: str = "") -> str:
    return block("accept", f"quantity: {quantity}\nwhy: the part was all there was\n{more}")


def kinds(book: Book) -> list[tuple[str, str, str, bool]]:
    return [(r.kind, r.from_, r.to, r.accepted) for r in book.findings.regressions]


def test_a_delta_that_is_worse_beyond_doubt() -> None:
    assert kinds(book_of(start(), step(3.4, "B", "02-01"))) == [("delta", "A", "B", False)]
    assert kinds(book_of(start(), step(3.2, "B", "02-01"))) == []
    assert kinds(book_of(start(), step(2.5, "B", "02-01"))) == []


def test_a_target_met_before_and_missed_now() -> None:
    book = book_of(start(3.0, TARGET_BLOCK), step(4.0, "B", "02-01"))
    assert kinds(book) == [("delta", "A", "B", False), ("target", "A", "B", False)]
    assert [r.delta for r in book.findings.regressions] == [pytest.approx(1.0)] * 2


def test_what_is_only_predicted_is_no_regression() -> None:
    made = change("  - {set: amp, to: {nf: 6 dB}}")
    assert kinds(book_of(start(3.0, TARGET_BLOCK), entry("02-01", made, revision="B"))) == []


def test_a_trial_is_no_regression() -> None:
    made = change("  - {set: amp, to: {gain: 21 dB}}")
    trial = entry("02-01", made, reading("nf: 5.0(1) dB"), revision="T", front="state: trial\n")
    assert kinds(book_of(start(3.0, TARGET_BLOCK), trial)) == []


def test_acceptance_covers_the_delta_and_the_target_of_its_revision() -> None:
    book = book_of(start(3.0, TARGET_BLOCK), step(4.0, "B", "02-01", accept()))
    assert kinds(book) == [("delta", "A", "B", True), ("target", "A", "B", True)]
    assert {r.why for r in book.findings.regressions} == {"the part was all there was"}


def test_acceptance_of_one_revision_says_nothing_of_the_next() -> None:
    book = book_of(start(), step(3.5, "B", "02-01", accept()), step(4.0, "C", "03-01"))
    assert kinds(book) == [("delta", "A", "B", True), ("delta", "B", "C", False)]


def test_acceptance_in_a_later_entry_of_the_revision() -> None:
    book = book_of(start(), step(3.5, "B", "02-01"), entry("02-09", accept()))
    assert kinds(book) == [("delta", "A", "B", True)]


@pytest.mark.parametrize("which", [accept("gain"), accept("nf", "at: 14 MHz"), accept("nf", "chain: rx\nat: 1 MHz")])
def test_acceptance_of_what_did_not_get_worse_is_a_problem(which: str) -> None:
    book = book_of(start(), step(3.5, "B", "02-01", which), sound=False)
    assert [p.code for p in book.problems] == ["accepts-nothing"]
    assert kinds(book) == [("delta", "A", "B", False)]


def test_an_acceptance_of_nothing_at_all_is_a_problem() -> None:
    book = book_of(start(), step(2.5, "B", "02-01", accept()), sound=False)
    (problem,) = book.problems
    assert problem.code == "accepts-nothing"
    assert "'nf'" in problem.message


def test_what_a_run_fails_on() -> None:
    book = book_of(start(3.0, TARGET_BLOCK), step(4.0, "B", "02-01"))
    assert failures(book, ALL) == {REGRESSION: 2, TARGET: 1}
    assert failures(book, frozenset({PROBLEM})) == {}
    accepted = book_of(start(3.0, TARGET_BLOCK), step(4.0, "B", "02-01", accept()))
    assert failures(accepted, ALL) == {TARGET: 1}
    mended = book_of(start(3.0, TARGET_BLOCK), step(4.0, "B", "02-01", accept()), step(3.0, "C", "03-01"))
    assert failures(mended, ALL) == {}


@pytest.mark.parametrize(
    ("fail_on", "more", "status"),
    [
        ("problem", (), 0),
        ("regression", (), 2),
        ("target", (), 2),
        ("problem,regression,target", (), 2),
        ("regression", (accept(),), 0),
        ("target", (accept(),), 2),
        ("target", (accept("gain"),), 1),
        ("everything", (), 3),
    ],
)
def test_exit_status(
    fail_on: str, more: tuple[str, ...], status: int, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    for source in (start(3.0, TARGET_BLOCK), step(4.0, "B", "02-01", *more)):
        (tmp_path / source.path).write_bytes(source.data)
    assert main(["check", str(tmp_path), "--fail-on", fail_on]) == status
    said = capsys.readouterr()
    assert ("worse" in said.out) == (status != 3)
