"""What holds for every kind of block: its example works, what is required is missed, what is unknown is refused."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from logbook.book import Book, SourceFile, make_book
from logbook.html import render
from logbook.kind import Kind
from logbook.kinds import registry
from logbook.pages import block_pieces
from logbook.plots import draw
from logbook.terminal import render as render_text

CHAIN = registry()["chain"].example

# What an example needs to stand on: a revision with the chain rx, and a bench.
GROUND = f"""---
title: Ground
date: 2026-01-01
revision: A
---
```yaml chain
{CHAIN}```

```yaml bench
{registry()["bench"].example}```
"""


def entry(kind: Kind, text: str) -> str:
    """An entry that holds one block, on a revision of its own where the kind makes one."""
    front = "revision: B\n" if kind.word in ("chain", "change") else ""
    return f"---\ntitle: Example\ndate: 2026-02-01\n{front}---\n```yaml {kind.word}\n{text}```\n"


def book_with(kind: Kind, text: str) -> Book:
    files = {"2026-01-01-ground.md": GROUND, "2026-02-01-example.md": entry(kind, text)}
    return make_book([SourceFile(path, content.encode()) for path, content in files.items()], Path("/nowhere"))


def kinds() -> list[Kind]:
    return list(registry().values())


# Examples that speak of something from an earlier block stand on more than the ground.
EXPECTED = {"accept": {"accepts-nothing"}}


@pytest.mark.parametrize("kind", kinds(), ids=lambda kind: kind.word)
def test_example_reads_computes_and_draws(kind: Kind) -> None:
    book = book_with(kind, kind.example)
    codes = {problem.code for problem in book.problems}
    assert codes == EXPECTED.get(kind.word, set()), [str(p) for p in book.problems]
    example = book.entries[-1]
    assert example.blocks[0].items
    pieces = block_pieces(book, example, example.blocks[0])
    assert pieces
    html = render(pieces, lambda to, anchor: f"{to}#{anchor}", draw)
    assert "<script" not in html
    assert len(re.sub(r"<[^>]+>", "", html).strip()) > 20
    assert len(render_text(pieces, 100).strip()) > 20


@pytest.mark.parametrize("kind", kinds(), ids=lambda kind: kind.word)
def test_example_gives_the_same_twice(kind: Kind) -> None:
    def shown() -> str:
        book = book_with(kind, kind.example)
        return render(block_pieces(book, book.entries[-1], book.entries[-1].blocks[0]), lambda to, _: to, draw)

    assert shown() == shown()


def required() -> list[tuple[Kind, str]]:
    return [(kind, field.name) for kind in kinds() for field in kind.fields if field.required]


@pytest.mark.parametrize(("kind", "name"), required(), ids=lambda value: getattr(value, "word", value))
def test_required_key_is_missed(kind: Kind, name: str) -> None:
    """A block with nothing but an unneeded key misses each key that is required, at the block's first line."""
    book = book_with(kind, "unheard_of: 1\n")
    missing = [p for p in book.problems if p.code == "missing-key" and f"'{name}'" in p.message]
    assert len(missing) == 1
    assert missing[0].place.file == "2026-02-01-example.md"


@pytest.mark.parametrize("kind", kinds(), ids=lambda kind: kind.word)
def test_unknown_key_is_refused_with_the_likely_one(kind: Kind) -> None:
    likely = max((field.name for field in kind.fields), key=len)
    wrong = likely[:-1] + ("x" if likely[-1] != "x" else "y")
    book = book_with(kind, f"{wrong}: 1\n")
    unknown = [p for p in book.problems if p.code == "unknown-key"]
    assert len(unknown) == 1
    assert f"'{wrong}'" in unknown[0].message
    assert f"'{likely}'" in unknown[0].hint


@pytest.mark.parametrize("kind", kinds(), ids=lambda kind: kind.word)
def test_words_for_the_guide(kind: Kind) -> None:
    assert kind.title
    assert kind.about.endswith(".")
    assert kind.example.endswith("\n")
