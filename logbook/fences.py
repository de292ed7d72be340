"""The fences of blocks in a Markdown text, found as the site's Markdown finds them."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import islice
from math import inf
from typing import NamedTuple

from logbook.problems import Place, Problems


@dataclass(frozen=True, slots=True)
class Fence:
    """A block's fence. Lines count from 1; `text` has lost the fence's own indentation of `indent` characters.

    `line` is the opening fence, `first_line` the first line of the text, `last_line` the closing fence. A fence that is
    not closed ends where the next one opens, or with the file; `last_line` is then its last line of text.
    """

    kind: str
    text: str
    line: int
    first_line: int
    last_line: int
    indent: int
    closed: bool


# What a fence holds, or what a comment begins with; then the line of a fence, where a list's marker may stand ahead.
_HIT = re.compile(r"```|~~~|<!--")
_FENCE = re.compile(r"([ \t>]*)((?:[-*+]|[0-9]{1,9}[.)])[ \t]+)?(`{3,}|~{3,})([^\n]*)")
_KIND = re.compile(r"yaml[ \t]+([A-Za-z][A-Za-z0-9_-]*)")
_KIND_AND_MORE = re.compile(r"yaml[ \t]+[A-Za-z][A-Za-z0-9_-]*[ \t]+\S.*")


@dataclass(frozen=True, slots=True)
class _Mark:
    """A line that may open or close a fence, or, with an empty `run`, the start of a comment. `line` counts from 0."""

    start: int
    line: int
    prefix: str = ""
    marker: str = ""
    run: str = ""
    info: str = ""

    @property
    def kind(self) -> str:
        """The kind of block that the fence would hold; empty for any other fence."""
        found = _KIND.fullmatch(self.info)
        return found[1] if found else ""

    @property
    def opens(self) -> bool:
        """Backticks in the info string of backticks make the line a piece of inline code."""
        return bool(self.run) and not (self.run[0] == "`" and "`" in self.info)

    def fits(self, opening: _Mark) -> bool:
        """Whether the fence is of the opening one's sort, and at least as long."""
        same = self.run[:1] == opening.run[0] and len(self.run) >= len(opening.run)
        return same and self.prefix.count(">") == opening.prefix.count(">")

    def closes(self, opening: _Mark) -> bool:
        """Whether the line closes what the other opened."""
        return not self.info and not self.marker and self.fits(opening)

    def interrupts(self, opening: _Mark) -> bool:
        """Whether the line opens a fence of its own where the other was forgotten to be closed.

        YAML has no line that begins so; any other text may have one, but hardly the fence of a block.
        """
        return self.opens and self.fits(opening) and bool(self.kind or (opening.kind and self.info))


def find_fences(
    text: str, lines: Sequence[str], start: int, path: str, problems: Problems, kinds: Collection[str] = ()
) -> Iterator[tuple[Fence, str]]:
    """The fences of blocks from line `start` on, each with what stands before it in its line."""
    marks = _marks(text)
    unclosed: dict[str, tuple[int, _End]] = {}
    free_from = start
    comment_end = 0
    for number, mark in enumerate(marks):
        if mark.line < free_from or mark.start < comment_end:
            continue
        if not mark.run:
            comment_end = _comment_end(text, mark.start)
        elif mark.opens:
            end = _known_end(mark, unclosed) or _end(marks, number, lines)
            if not end.closed:
                _not_closed(mark, end.line, len(lines), path, problems)
                unclosed.update(_worth_knowing(mark, end))
            _strange(mark, path, problems, kinds)
            if mark.kind and not mark.marker:
                yield _fence(mark, end.line, end.closed, lines), mark.prefix
            if end.closed or mark.kind:
                free_from = end.line


def _marks(text: str) -> list[_Mark]:
    found: list[_Mark] = []
    line, counted, line_end = 0, 0, 0
    for hit in _HIT.finditer(text):
        start = hit.start()
        if start < line_end:
            continue
        line_start = text.rfind("\n", 0, start) + 1
        line += text.count("\n", counted, start)
        counted = start
        if hit[0] == "<!--":
            found.append(_Mark(start, line))
        elif fence := _FENCE.match(text, line_start):
            prefix, marker, run, info = fence.groups()
            found.append(_Mark(line_start, line, prefix, marker or "", run, info.strip()))
            line_end = fence.end()
    return found


def _comment_end(text: str, start: int) -> int:
    """Where a comment ends; it is none where it never ends, or stands in inline code."""
    line_start = text.rfind("\n", 0, start) + 1
    if text.count("`", line_start, start) % 2:
        return 0
    # `<!-->` is a whole comment.
    return text.find("-->", start + len("<!"))


class _End(NamedTuple):
    """Where a fence ends: the line behind it, from 0; `longest` is the longest fence that would end there too."""

    line: int
    closed: bool
    longest: float = inf


def _end(marks: Sequence[_Mark], number: int, lines: Sequence[str]) -> _End:
    """The end of the fence that the mark of this number opens."""
    opening = marks[number]
    last = len(lines)
    if ">" in opening.prefix:
        inside = (number for number in range(opening.line + 1, last) if not lines[number].lstrip().startswith(">"))
        last = next(inside, last)
    for mark in islice(marks, number + 1, None):
        if mark.line >= last or mark.interrupts(opening):
            return _End(min(mark.line, last), False, len(mark.run))
        if mark.closes(opening):
            return _End(mark.line + 1, True)
    while last > opening.line + 1 and not lines[last - 1].strip():
        last -= 1
    return _End(last, False)


# A text of a thousand fences that are all left open must not be searched to its end for each of them.


def _known_end(mark: _Mark, unclosed: Mapping[str, tuple[int, _End]]) -> _End | None:
    """The end that was already found for a shorter fence further up, which holds for this one too."""
    if mark.kind or ">" in mark.prefix or mark.run[0] not in unclosed:
        return None
    shortest, end = unclosed[mark.run[0]]
    return end if mark.line < end.line and shortest <= len(mark.run) <= end.longest else None


def _worth_knowing(mark: _Mark, end: _End) -> dict[str, tuple[int, _End]]:
    return {} if mark.kind or ">" in mark.prefix else {mark.run[0]: (len(mark.run), end)}


def _fence(opening: _Mark, end: int, closed: bool, lines: Sequence[str]) -> Fence:
    inside = lines[opening.line + 1 : end - 1 if closed else end]
    text = "".join(_dedented(line, opening.prefix) + "\n" for line in inside)
    return Fence(opening.kind, text, opening.line + 1, opening.line + 2, end, len(opening.prefix), closed)


def _dedented(line: str, prefix: str) -> str:
    if line.startswith(prefix):
        return line[len(prefix) :]
    own = len(line) - len(line.lstrip(prefix)) if prefix else 0
    return line[min(own, len(prefix)) :]


def _not_closed(mark: _Mark, end: int, line_count: int, path: str, problems: Problems) -> None:
    column = len(mark.prefix) + len(mark.marker) + 1
    until = "the end of the file" if end >= line_count else f"line {end}"
    message = f"The fence '{mark.run}{mark.info}' is not closed; it would run on to {until}."
    hint = f"Close it with a line '{mark.run}' behind its text."
    if end < line_count and not mark.kind:
        hint = f"{hint[:-1]}; a fence that shows another one needs to be longer than that."
    problems.add(Place(path, mark.line + 1, column), "unclosed-fence", message, hint)


def _strange(mark: _Mark, path: str, problems: Problems, kinds: Collection[str]) -> None:
    """A fence that looks like a block's and is none."""
    place = Place(path, mark.line + 1, len(mark.prefix) + len(mark.marker) + 1)
    if mark.kind and mark.marker:
        message = f"The block's fence stands behind '{mark.marker.strip()}' in its line, so it is not read."
        problems.add(place, "fence-position", message, "Begin it in a line of its own, indented to the list's text.")
    elif mark.info in kinds:
        message = f"A fence '{mark.info}' is shown as it is; a block's fence says that it is YAML."
        problems.add(place, "fence-info", message, f"Write 'yaml {mark.info}'.")
    elif _KIND_AND_MORE.fullmatch(mark.info) and "=" not in mark.info.split()[1]:
        message = f"'{mark.info}' holds more than the word yaml and a kind, so the block is not read."
        problems.add(place, "fence-info", message, f"Write '{' '.join(mark.info.split()[:2])}' alone.")
