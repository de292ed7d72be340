"""Small logbooks written in a few words, read as anybody's would be."""

from __future__ import annotations

from logbook.book import Book, Settings, SourceFile, make_book
from logbook.findings import Delta
from logbook.model import Result
from logbook.prediction import Estimate, Prediction, Terms


def block(kind: str, text: str) -> str:
    """A block as it stands in an entry."""
    return f"```yaml {kind}\n{text.strip()}\n```\n"


def entry(day: str, *blocks: str, revision: str = "", front: str = "", title: str = "Session") -> SourceFile:
    """An entry of 2026 with its blocks: `day` is month and day, `02-14`."""
    label = f"revision: {revision}\n" if revision else ""
    head = f"---\ntitle: {title}\ndate: 2026-{day}\n{label}{front}---\n\n"
    return SourceFile(f"2026-{day}-{revision.lower() or 'x'}.md", (head + "\n".join(blocks)).encode())


def book_of(*sources: SourceFile, settings: Settings | None = None, sound: bool = True) -> Book:
    """The book of these entries; `sound`: it has no problems."""
    book = make_book(sources, None, settings)
    if sound:
        assert [str(problem) for problem in book.problems] == []
    return book


def chain(stages: str, *, name: str = "rx", signal: str = "50.1 MHz", more: str = "bandwidth: 10 kHz") -> str:
    """A chain block; each line of `stages` is what stands between the braces of a stage."""
    lines = "\n".join(f"  - {{{line.strip()}}}" for line in stages.strip().split("\n"))
    return block("chain", f"chain: {name}\nsignal: {signal}\n{more}\nstages:\n{lines}")


def change(steps: str, *, name: str = "rx", more: str = "") -> str:
    """A change block."""
    return block("change", f"chain: {name}\n{more}\nsteps:\n{steps}")


def reading(results: str, more: str = "") -> str:
    """A reading block; `results` is what stands between the braces."""
    return block("reading", f"{more.strip()}\nresults: {{{results}}}")


def prediction(stages: str, *, signal: str = "50.1 MHz", more: str = "bandwidth: 10 kHz") -> Prediction:
    """What a chain on its own is predicted to do."""
    book = book_of(entry("01-01", chain(stages, signal=signal, more=more), revision="A"))
    return book.predict(book.revisions["A"].chains["rx"], Terms())


def totals(book: Book, label: str, name: str = "rx") -> dict[str, Estimate]:
    """The predicted totals of a revision's chain."""
    return dict(book.predict(book.revisions[label].chains[name], Terms()).totals)


def measured(book: Book, key: str, label: str = "") -> Result:
    """The latest measured result of a key."""
    return [r for r in book.results if r.key == key and r.basis == "measured" and label in ("", r.revision)][-1]


def delta(book: Book, key: str, to: str, basis: str = "measured") -> Delta:
    """The delta of a key to a revision."""
    return next(d for d in book.findings.deltas if (d.key, d.to, d.basis) == (key, to, basis))
