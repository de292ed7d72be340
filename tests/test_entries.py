"""Folders of samples: each bad one says which problems it must bring, each good one brings none.

A new case is a new file (or a folder of files that belong together). Every sample is read together with
`ground.md`, which has a chain `rx` and a bench. What is expected stands in the sample, one comment a problem,
`<!-- expect: LINE:COLUMN code -->`, or in a file of the same name with the ending `.expect` where the bytes matter.
"""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from logbook.book import Book, SourceFile, make_book
from logbook.html import render
from logbook.pages import block_pieces, generated_pages, home_pieces
from logbook.plots import draw

SAMPLES = Path(__file__).parent / "entries"
GROUND = SAMPLES / "ground.md"
_EXPECT = re.compile(r"expect:\s*(?:(?P<file>[\w./-]+\.md):)?(?P<line>\d+):(?P<column>\d+)\s+(?P<code>[\w-]+)")


def cases(folder: str) -> list[Path]:
    return sorted(p for p in (SAMPLES / folder).iterdir() if p.suffix in (".md", "") and not p.name.startswith("."))


def sources(case: Path) -> list[SourceFile]:
    files = sorted(case.rglob("*.md")) if case.is_dir() else [case]
    root = case if case.is_dir() else case.parent
    return [SourceFile(p.relative_to(root).as_posix(), p.read_bytes()) for p in files]


def book_of(case: Path) -> Book:
    return make_book([SourceFile("ground.md", GROUND.read_bytes()), *sources(case)], SAMPLES / "files")


def expected(case: Path) -> list[tuple[str, int, int, str]]:
    found = []
    for source in sources(case):
        text = source.data.decode("utf-8", "replace")
        sidecar = case.with_suffix(".expect")
        if not case.is_dir() and sidecar.exists():
            text = sidecar.read_text(encoding="utf-8")
        for match in _EXPECT.finditer(text):
            place = (match["file"] or source.path, int(match["line"]), int(match["column"]), match["code"])
            found.append(place)
    return sorted(found)


@pytest.mark.parametrize("case", cases("bad"), ids=lambda p: p.stem)
def test_bad_sample_brings_just_its_problems(case: Path) -> None:
    book = book_of(case)
    wanted = expected(case)
    assert wanted, "a bad sample says what it expects"
    found = sorted((p.place.file, p.place.line, p.place.column, p.code) for p in book.problems)
    assert found == wanted, "\n".join(str(p) for p in book.problems)
    for problem in book.problems:
        assert problem.message.strip()
        assert "Traceback" not in problem.message


@pytest.mark.parametrize("case", cases("bad"), ids=lambda p: p.stem)
def test_sound_blocks_stand_beside_a_bad_sample(case: Path) -> None:
    """The ground keeps its results, and every page is still made and shows the text of the bad blocks."""
    book = book_of(case)
    ground = [r for r in book.results if r.entry == "ground.md" and r.basis == "measured"]
    assert {r.quantity for r in ground} == {"noise_floor", "gain"}
    for entry in book.entries:
        for block in entry.blocks:
            html = render(block_pieces(book, entry, block), lambda to, _: to, draw)
            for problem in book.problems_of(block):
                assert problem.code in html
    assert len(generated_pages(book)) >= 4
    assert home_pieces(book)


@pytest.mark.parametrize("case", cases("good"), ids=lambda p: p.stem)
def test_good_sample_brings_no_problem(case: Path) -> None:
    book = book_of(case)
    assert [str(p) for p in book.problems] == []
    own = [entry for entry in book.entries if entry.path != "ground.md"]
    assert own
    for entry in own:
        assert all(block.items for block in entry.blocks)


def test_every_problem_has_a_sentence_and_a_stable_code() -> None:
    codes = {code for case in cases("bad") for *_, code in expected(case)}
    assert all(re.fullmatch(r"[a-z0-9]+(-[a-z0-9]+)*", code) for code in codes)
    assert len(codes) > 40
