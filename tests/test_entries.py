"""Folders of samples: each bad one says which problems it must bring, each good one brings none.

A new case is a new file (or a folder of files that belong together). Every sample is read together with
`ground.md`, which has a chain `rx` and a bench; one whose name begins with `alone-` is read without it.

What is expected of a bad sample stands in it, one comment a problem, `<!-- expect: LINE:COLUMN code -->` (in a folder
`FILE.md:LINE:COLUMN code`), or in a file of the same name with the ending `.expect` where the bytes matter.

A good sample says in the same way what comes of it; a value counts at the digits that are written:

    entries 2                                    the sample's own entries
    blocks 3                                     the blocks in them
    measured rx/gain@14MHz 12.5 u 0.2            the latest such result, `measured of B ...` that of revision B
    predicted of B rx/nf 2.719                   or `unknown`
    planned B rx/gain 24.3                       what the plan of that label predicts
    delta rx/gain measured worse                 one of the deltas
    target rx/gain meets                         the target against the revision built last
    accepted rx/gain                             a regression that is accepted
    open relay, closed relay                     items
"""

from __future__ import annotations

import math
import re
from pathlib import Path

import pytest

from logbook.book import Book, SourceFile, make_book
from logbook.html import render
from logbook.pages import block_pieces, generated_pages, home_pieces
from logbook.plots import draw
from logbook.prediction import Terms

SAMPLES = Path(__file__).parent / "entries"
GROUND = SAMPLES / "ground.md"
_HOLDS = re.compile(r"<!-- expect: (\D.*?) -->")
_EXPECT = re.compile(r"expect:\s*(?:(?P<file>[\w./-]+\.md):)?(?P<line>\d+):(?P<column>\d+)\s+(?P<code>[\w-]+)")


def cases(folder: str) -> list[Path]:
    return sorted(p for p in (SAMPLES / folder).iterdir() if p.suffix in (".md", "") and not p.name.startswith("."))


def sources(case: Path) -> list[SourceFile]:
    files = sorted(case.rglob("*.md")) if case.is_dir() else [case]
    root = case if case.is_dir() else case.parent
    return [SourceFile(p.relative_to(root).as_posix(), p.read_bytes()) for p in files]


def book_of(case: Path) -> Book:
    ground = [] if case.name.startswith("alone-") else [SourceFile("ground.md", GROUND.read_bytes())]
    return make_book([*ground, *sources(case)], SAMPLES / "files")


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
def test_good_sample_brings_no_problem_and_what_it_says(case: Path) -> None:
    book = book_of(case)
    assert [str(p) for p in book.problems] == []
    assert all(block.items for entry in book.entries for block in entry.blocks)
    text = "".join(source.data.decode("utf-8") for source in sources(case))
    wanted = _HOLDS.findall(text)
    assert wanted, "a good sample says what comes of it"
    for each in wanted:
        check(book, each.split())
    for entry in book.entries:
        for block in entry.blocks:
            assert render(block_pieces(book, entry, block), lambda to, _: to, draw)
    assert home_pieces(book)


def check(book: Book, words: list[str]) -> None:
    """One line of what a good sample says."""
    sort, *rest = words
    own = [entry for entry in book.entries if entry.path != "ground.md"]
    if sort == "entries":
        assert len(own) == int(rest[0])
    elif sort == "blocks":
        assert sum(len(entry.blocks) for entry in own) == int(rest[0])
    elif sort in ("measured", "predicted", "derived"):
        check_result(book, sort, rest)
    elif sort == "planned":
        check_plan(book, *rest)
    else:
        assert tuple(rest) in found(book, sort), (words, found(book, sort))


def found(book: Book, sort: str) -> list[tuple[str, ...]]:
    """What the book has of a sort, as the words that a sample would say."""
    findings = book.findings
    if sort == "delta":
        return [(d.key, d.basis, *d.verdict.split()) for d in findings.deltas]
    if sort == "target":
        return [(t.target.key, t.verdict) for t in findings.targets if book.latest and t.revision == book.latest.label]
    if sort == "accepted":
        return [(r.key,) for r in findings.regressions if r.accepted]
    if sort in ("open", "closed"):
        return [(item.id,) for item in findings.todo if (item.closed is None) == (sort == "open")]
    raise ValueError(f"a sample says '{sort}', which is no expectation")


def check_result(book: Book, basis: str, words: list[str]) -> None:
    of = words[1] if words[0] == "of" else None
    key, value, *doubt = words[2:] if of else words
    there = [r for r in book.results if (r.basis, r.key) == (basis, key) and of in (None, r.revision)]
    assert there, f"no {basis} result {key}"
    agree(there[-1].value, value)
    if doubt:
        agree(there[-1].u, doubt[1])


def check_plan(book: Book, label: str, key: str, value: str) -> None:
    plan = book.revisions[label].planned
    assert plan is not None
    chain, quantity = key.split("/")
    agree(book.predict(plan.chains[chain], Terms()).totals[quantity].value, value)


def agree(value: float | None, written: str) -> None:
    """Within half a step of the last digit written, and not more exact than a float can be."""
    assert value is not None
    if written == "unknown":
        assert math.isnan(value)
        return
    step = 10.0 ** -len(written.partition(".")[2])
    assert abs(value - float(written)) <= 0.5 * step + 1e-9 * abs(value), (value, written)


def test_every_problem_has_a_sentence_and_a_stable_code() -> None:
    codes = {code for case in cases("bad") for *_, code in expected(case)}
    assert all(re.fullmatch(r"[a-z0-9]+(-[a-z0-9]+)*", code) for code in codes)
    assert len(codes) > 50
