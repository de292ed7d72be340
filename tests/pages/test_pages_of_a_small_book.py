"""The pages of a small logbook, read as a person would: what each page is for stands on it."""

from __future__ import annotations

import re

import pytest
from reader import Read, read_pieces
from workshop import block, book_of, chain, change, entry, reading

from logbook.book import Book
from logbook.pages import block_pieces, generated_pages, head_pieces, home_pieces

STAGES = """name: preselector, loss: 1.2 dB
    name: lna, gain: 18 ± 0.5 dB, nf: 1.1 ± 0.2 dB, oip3: 24 dBm, op1db: 10 dBm
    name: mixer, gain: -6.5 dB, nf: 7 dB, iip3: 13 dBm, lo: 71.5 MHz
    name: filter, loss: 3 dB
    name: amp, gain: 15 dB, nf: 9 dB"""

BENCH = block(
    "bench",
    """bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, rbw_filter: gaussian}
path:
  - {name: pad, loss: 10 ± 0.2 dB}
calibrated: 2025-01-01
due: 2026-02-15""",
)
CONDITIONS = "at: 50.1 MHz\nrbw: 10 kHz\naveraging: log\nbench: shack\nthrough: [pad]"
TARGETS = block(
    "target",
    """- {quantity: output_noise, at: 50.1 MHz, rbw: 10 kHz, limit: <= -99 dBm, why: quiet}
- {quantity: nf, limit: <= 3 dB}""",
)
TODO = block("todo", "- {id: relay, what: replace the relay}\n- {id: case, what: paint the case}")
PLAN = """what_if:
  - {name: less loss, parts: 5 EUR, steps: [{set: preselector, to: {loss: 0.3 dB}}]}
"""

BOOK = book_of(
    entry(
        "01-01",
        BENCH,
        chain(STAGES, more="bandwidth: 10 kHz\nlevel: -60 dBm\nsnr: 10 dB"),
        reading("output_noise: -113.2(2) dBm, gain: [22.1 dB, 22.3 dB, 22.2 dB]", CONDITIONS),
        TARGETS,
        TODO,
        revision="A",
        title="First light",
    ),
    entry(
        "02-01",
        change("  - {insert: {name: post-amp, gain: 6 dB, nf: 3 dB}, after: mixer}", more="why: to lift the signal"),
        reading("output_noise: -107.0(2) dBm, gain: 27.9 dB", CONDITIONS),
        block("todo", "{done: relay}"),
        revision="B",
        title="Post-mixer amplifier",
    ),
    entry("02-10", change("  - remove: filter"), revision="T", front="state: trial\n", title="Without the filter"),
    entry("02-20", reading("gain: 29.5 dB", CONDITIONS), title="Read again"),
    entry(
        "03-01",
        change("  - {set: lna, to: {nf: 0.6 dB}}", more=PLAN),
        revision="P",
        front="state: planned\n",
        title="A better first stage",
    ),
)


def page(path: str, book: Book = BOOK) -> Read:
    return read_pieces(next(p for p in generated_pages(book) if p.path == path).pieces)


def block_page(book: Book, day: int, kind: str) -> Read:
    found = book.entries[day]
    return read_pieces(block_pieces(book, found, next(b for b in found.blocks if b.kind == kind)))


def has(read: Read, *words: str) -> None:
    plain = re.sub(r"\s+", " ", read.words)
    for each in words:
        assert each in plain, (each, plain)


def test_home_says_where_the_project_stands() -> None:
    home = read_pieces(home_pieces(BOOK))
    has(home, "revision B", "2026-02-01")
    # The scorecard: target, now, verdict.
    has(home, "<= -99 dBm", "misses", "<= 3 dB")
    # The last change, the regression that is not accepted, what is planned and what is open.
    has(home, "worse", "not accepted", "paint the case")
    assert "replace the relay" not in home.words
    assert "Open items" in home.headings
    titles = ["A better first stage", "Read again", "Without the filter", "Post-mixer amplifier", "First light"]
    there = [home.words.rindex(title) for title in titles]
    assert there == sorted(there), "the entries stand from the latest to the first"
    to = {address for _, address in home.links}
    assert any("revision:B" in address or "revisions/B" in address for address in to), to


def test_home_shows_the_last_change_measured() -> None:
    home = read_pieces(home_pieces(BOOK))
    has(home, "+7.30 ± 0.25 dB", "changed")


def test_revision_page_has_chain_plan_cascade_shares_changes_and_entries() -> None:
    read = page("revisions/B.md")
    has(read, "built", "2026-02-01", "Post-mixer amplifier", "Read again", "from A")
    has(read, "post-amp inserted after mixer", "to lift the signal")
    captions = list(read.tables)
    assert any("Chain rx" in caption for caption in captions)
    # The cascade, by hand: 18 - 1.2 - 6.5 + 6 - 3 + 15 dB.
    has(read, "28.30 ± 0.29 dB", "post-amp", "21.4 MHz")
    has(read, "of the noise", "distortion")
    # Taken as ideal, and not known, said in words.
    has(read, "taken as ideal: preselector, post-amp, filter, amp", "no stage gives a second-order intercept")
    # Measured and predicted changes side by side.
    (side,) = (t for t in read.tables.values() if {"measured change", "predicted"} <= set(t[0]))
    rows = {row[0]: dict(zip(side[0], row, strict=True)) for row in side[1:]}
    gain = next(row for name, row in rows.items() if name.startswith("gain"))
    assert gain["measured change"].startswith("+7.30")
    assert gain["predicted"].startswith("+6.00")
    has(read, "What to change next", "Where the doubt of")


def test_repeated_readings_that_differ_are_reported_on_the_revision() -> None:
    has(page("revisions/B.md"), "differ by +1.60 dB", "2026-02-01-b.md", "2026-02-20-x.md")


def test_plan_weighs_its_ways() -> None:
    read = page("revisions/P.md")
    has(read, "planned", "less loss", "5.00 EUR", "as planned", "part of the gap closed")
    assert "Measured" not in [heading for heading in read.headings if heading == "Measured"]


def test_history_is_a_tree_with_side_branches_and_courses() -> None:
    read = page("history.md")
    has(read, "A", "to lift the signal", "trial", "planned")
    has(read, "gain at 50.1 MHz", "measured", "-99 dBm")


def test_targets_by_revisions() -> None:
    read = page("targets.md")
    (table,) = read.tables.values()
    assert [cell.split()[0] for cell in table[0][2:]] == ["P", "T", "B", "A"]
    assert len(table) == 3
    noise, figure = table[1], table[2]
    assert "measured" in noise[5]
    assert "measured misses" in noise[4]
    assert all("predicted" in cell for cell in figure[2:])


def test_open_items_and_closed_ones() -> None:
    read = page("open-items.md")
    assert read.headings == ["Open (1)", "Closed (1)"]
    first, second = read.words.split("Closed (1)")
    assert "paint the case" in first
    assert "First light" in first
    assert "replace the relay" in second
    assert "Post-mixer amplifier" in second


def test_benches_name_what_was_read_after_calibration_was_due() -> None:
    has(page("benches.md"), "shack", "2026-02-15", "Read again")


def test_entry_shows_its_results_with_their_change() -> None:
    read = block_page(BOOK, 1, "reading")
    has(read, "-107.00 dBm", "worse", "log average to power average +2.51 dB", "loss of pad +10.00 dB")
    has(read, "bench shack", "through pad", "RBW 10 kHz", "log averaging")
    has(read_pieces(head_pieces(BOOK, BOOK.entries[1])), "revision B", "from A")


def test_reading_after_the_due_date_is_marked_on_its_entry() -> None:
    found = next(e for e in BOOK.entries if e.title == "Read again")
    has(read_pieces(block_pieces(BOOK, found, found.blocks[0])), "calibration of bench shack was due")


def test_every_verdict_is_a_word() -> None:
    known = {"better", "worse", "same", "changed", "not comparable", "new", "gone"}
    (table,) = (t for c, t in block_page(BOOK, 1, "reading").tables.items() if c.startswith("Results"))
    # Only the later one of two readings on a revision is compared; the earlier says so.
    verdicts = [row[-1] for row in table[1:] if not row[-1].startswith("another reading")]
    assert len(verdicts) < len(table) - 1
    assert verdicts
    for verdict in verdicts:
        assert any(verdict.startswith(word) for word in known), verdict


def test_a_bad_block_shows_its_text_and_its_problem_with_its_place() -> None:
    book = book_of(entry("01-01", chain(STAGES), reading("gain: 12 dBm"), revision="A", title="First"), sound=False)
    has(block_page(book, 0, "reading"), "gain: 12 dBm", "is a level", "dimension")


@pytest.mark.parametrize("path", ["history.md", "targets.md", "open-items.md", "benches.md", "parts.md"])
def test_an_empty_book_says_what_is_missing_on_every_page(path: str) -> None:
    assert page(path, book_of()).words.strip()


def test_home_of_an_empty_book_says_how_to_begin() -> None:
    has(read_pieces(home_pieces(book_of())), "no entry yet", "logbook new")


def test_one_entry_without_any_block() -> None:
    book = book_of(entry("01-01", title="First light"))
    home = read_pieces(home_pieces(book))
    has(home, "First light", "2026-01-01")
    assert [p.path for p in generated_pages(book) if p.path.startswith("revisions/")] == []


def test_one_entry_with_a_chain() -> None:
    book = book_of(entry("01-01", chain(STAGES), revision="A", title="First light"))
    has(page("revisions/A.md", book), "First light", "22.30", "built")
    has(read_pieces(home_pieces(book)), "No target is set yet")
    assert "not known" not in read_pieces(home_pieces(book)).words


def test_a_frequency_with_the_wrong_prefix_is_asked_about() -> None:
    described = "chain: rx\nsignal: 144.3 MHz\nstages:\n  - {name: lna, gain: 20 dB, nf: 1 dB}\n"
    blocks = (block("chain", described), block("reading", "at: 144.3 kHz\nresults:\n  gain: 20 dB\n"))
    book = book_of(entry("01-01", *blocks, revision="A"))
    (result,) = [r for r in book.results if r.basis == "measured"]
    assert result.notes == ("read at 144.3 kHz, and the signal of chain rx is at 144.3 MHz: is the prefix right?",)
