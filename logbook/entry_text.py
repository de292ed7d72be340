"""The text of an entry: front matter and the fences of blocks, each with its lines. One scanner for all."""

from __future__ import annotations

import codecs
import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from itertools import islice

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


@dataclass(frozen=True, slots=True)
class EntryText:
    """What a file consists of; `front` is None without front matter, `front_line` the line its text begins in."""

    path: str
    front: str | None
    front_line: int
    fences: tuple[Fence, ...]
    lines: tuple[str, ...]


# What a fence holds, or what a comment begins with; then the line of a fence, where a list's marker may stand ahead.
_HIT = re.compile(r"```|~~~|<!--")
_FENCE = re.compile(r"([ \t>]*)((?:[-*+]|[0-9]{1,9}[.)])[ \t]+)?(`{3,}|~{3,})([^\n]*)")
_KIND = re.compile(r"yaml[ \t]+([A-Za-z][A-Za-z0-9_-]*)")
_KIND_AND_MORE = re.compile(r"yaml[ \t]+[A-Za-z][A-Za-z0-9_-]*[ \t]+\S.*")
_FRONT_START = re.compile(r"---[ \t]*")
_FRONT_END = re.compile(r"(?:---|\.\.\.)[ \t]*")
_KEY = re.compile(r"[A-Za-z][\w -]*:(?:\s|$)")


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


def scan(text: str, path: str, problems: Problems) -> EntryText:
    """Find the front matter and the fences of blocks in a text with LF line ends."""
    lines = text.split("\n")
    front_end = _front_end(lines, path, problems)
    has_front = front_end > 0
    fences = tuple(fence for fence, _ in _fences(text, lines, front_end, path, problems))
    front = "".join(line + "\n" for line in lines[1 : front_end - 1]) if has_front else None
    if lines and not lines[-1]:
        lines.pop()
    return EntryText(path, front, 2 if has_front else 1, fences, tuple(lines))


def replace_fences(text: str, replacement: Callable[[int, Fence], str]) -> str:
    """The text with something else in place of each block's fence, at the fence's own indentation.

    `replacement` gets the block's number in the text, from 0, and its fence. All other lines stay as they are. The text
    is the Markdown of a page, without front matter.
    """
    lines = text.split("\n")
    kept: list[str] = []
    done = 0
    for number, (fence, prefix) in enumerate(_fences(text, lines, 0, "", Problems())):
        kept += lines[done : fence.line - 1]
        kept += [prefix + line if line else prefix.rstrip() for line in replacement(number, fence).split("\n")]
        done = fence.last_line
    return "\n".join(kept + lines[done:])


# --- front matter --------------------------------------------------------------------------------


def _front_end(lines: list[str], path: str, problems: Problems) -> int:
    """How many lines the front matter takes with both its rules; 0 where there is none, as MkDocs sees it."""
    start = next((number for number, line in enumerate(lines) if line.strip()), 0)
    if not _FRONT_START.fullmatch(lines[start]):
        return 0
    has_key = start + 1 < len(lines) and _KEY.match(lines[start + 1]) is not None
    end = next((n for n in range(start + 1, len(lines)) if _FRONT_END.fullmatch(lines[n])), None)
    if start and has_key and end:
        message = f"Front matter stands in line {start + 1}, behind empty lines; there it is ordinary text."
        problems.add(Place(path, start + 1), "front-matter", message, "Let the file begin with its '---'.")
        return 0
    if end is None and has_key and not start:
        message = "The front matter that begins here has no end."
        problems.add(Place(path, 1), "front-matter", message, "Close it with a line '---' before the text.")
    return end + 1 if end and not start else 0


# --- fences --------------------------------------------------------------------------------------


def _fences(text: str, lines: Sequence[str], start: int, path: str, problems: Problems) -> Iterator[tuple[Fence, str]]:
    """The fences of blocks from line `start` on, each with what stands before it in its line."""
    marks = _marks(text)
    free_from = start
    comment_end = 0
    for number, mark in enumerate(marks):
        if mark.line < free_from or mark.start < comment_end:
            continue
        if not mark.run:
            comment_end = _comment_end(text, mark.start)
        elif mark.opens:
            end, closed = _end(marks, number, lines)
            if not closed:
                _not_closed(mark, end, len(lines), path, problems)
            _strange(mark, path, problems)
            if mark.kind and not mark.marker:
                yield _fence(mark, end, closed, lines), mark.prefix
            if closed or mark.kind:
                free_from = end


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


def _end(marks: Sequence[_Mark], number: int, lines: Sequence[str]) -> tuple[int, bool]:
    """The line behind the fence that the mark of this number opens (from 0), and whether it is closed."""
    opening = marks[number]
    last = len(lines)
    if ">" in opening.prefix:
        inside = (number for number in range(opening.line + 1, last) if not lines[number].lstrip().startswith(">"))
        last = next(inside, last)
    for mark in islice(marks, number + 1, None):
        if mark.line >= last or mark.interrupts(opening):
            return min(mark.line, last), False
        if mark.closes(opening):
            return mark.line + 1, True
    while last > opening.line + 1 and not lines[last - 1].strip():
        last -= 1
    return last, False


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
    message = f"The fence '{mark.run}{mark.info and ' ' + mark.info}' is not closed; it would run on to {until}."
    hint = f"Close it with a line '{mark.run}' behind its text."
    if end < line_count and not mark.kind:
        hint = f"{hint[:-1]}; a fence that shows another one needs to be longer than that."
    problems.add(Place(path, mark.line + 1, column), "unclosed-fence", message, hint)


def _strange(mark: _Mark, path: str, problems: Problems) -> None:
    """A fence that looks like a block's and is none."""
    place = Place(path, mark.line + 1, len(mark.prefix) + len(mark.marker) + 1)
    if mark.kind and mark.marker:
        message = f"The block's fence stands behind '{mark.marker.strip()}' in its line, so it is not read."
        problems.add(place, "fence-position", message, "Begin it in a line of its own, indented to the list's text.")
    elif _KIND_AND_MORE.fullmatch(mark.info) and "=" not in mark.info.split()[1]:
        message = f"'{mark.info}' holds more than the word yaml and a kind, so the block is not read."
        problems.add(place, "fence-info", message, f"Write '{' '.join(mark.info.split()[:2])}' alone.")


# --- bytes ---------------------------------------------------------------------------------------

_WIDE = (
    (codecs.BOM_UTF32_LE, "utf-32"),
    (codecs.BOM_UTF32_BE, "utf-32"),
    (codecs.BOM_UTF16_LE, "utf-16"),
    (codecs.BOM_UTF16_BE, "utf-16"),
)


def decode(data: bytes, path: str, problems: Problems) -> str:
    """The text of a file with LF line ends and no byte order mark; what is not UTF-8 is reported and replaced."""
    for mark, encoding in _WIDE:
        if data.startswith(mark):
            message = f"The file is in {encoding.upper()}; entries are read as UTF-8."
            problems.add(Place(path, 1), "encoding", message, "Save it as UTF-8.")
            return _text(data.decode(encoding, "replace"), path, problems)
    data = data.removeprefix(codecs.BOM_UTF8)
    try:
        return _text(data.decode("utf-8"), path, problems)
    except UnicodeDecodeError as error:
        before = _line_ends(data[: error.start].decode("utf-8"))
        byte = data[error.start]
        place = _place(path, before)
        message = f"The byte 0x{byte:02X} here is not UTF-8."
        likely = bytes([byte]).decode("cp1252", "replace")
        meant = f" It may be meant as '{likely}'." if likely.isprintable() and likely != "\ufffd" else ""
        problems.add(place, "encoding", message, f"Save the file as UTF-8.{meant}")
        return _text(data.decode("utf-8", "replace"), path, problems)


def _text(text: str, path: str, problems: Problems) -> str:
    text = _line_ends(text)
    null = text.find("\0")
    if null >= 0:
        problems.add(_place(path, text[:null]), "null-byte", "A null byte stands here.", "Take it out of the file.")
    return text.replace("\0", "\ufffd")


def _line_ends(text: str) -> str:
    return text.replace("\r\n", "\n").replace("\r", "\n")


def _place(path: str, before: str) -> Place:
    return Place(path, before.count("\n") + 1, len(before) - (before.rfind("\n") + 1) + 1)
