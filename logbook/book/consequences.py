"""One fault, one report: what is missed only because another block or entry is at fault is not reported besides."""

from __future__ import annotations

import re
from collections.abc import Iterable

from logbook.book.reading import ReadFile
from logbook.problems import ANY_FAULT, Place, Problems

_WORD = re.compile(r"[\w.+-]+")


def drop_consequences(files: Iterable[ReadFile], problems: Problems) -> None:
    """Drop the faults about something that stands in a block, or in an entry, which could not be read."""
    following = [problem for problem in problems if problem.about]
    if not following:
        return
    roots = [problem.place for problem in problems if not problem.about]
    lost = _lost_words(files, roots + [named for place in roots for named in problems.naming(place.file)])
    problems.drop(p for p in following if p.about != ANY_FAULT and set(_WORD.findall(p.about)) <= lost)
    left = list(problems)
    if any(p.about != ANY_FAULT for p in left):
        problems.drop(p for p in left if p.about == ANY_FAULT)


def _lost_words(files: Iterable[ReadFile], roots: list[Place]) -> set[str]:
    """Every word of the blocks and entries in which a fault of their own stands."""
    by_file: dict[str, list[int]] = {}
    for place in roots:
        by_file.setdefault(place.file, []).append(place.line)
    words: set[str] = set()
    for file in files:
        lines = by_file.get(file.path)
        if not lines:
            continue
        if file.entry is None and file.text.fences:
            words.update(_WORD.findall("\n".join(file.text.lines)))
        for fence in file.text.fences:
            if any(fence.line <= line <= fence.last_line for line in lines):
                words.update(_WORD.findall(fence.text), ("revision",))
    return words
