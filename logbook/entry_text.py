"""The text of an entry: front matter and the fences of blocks, each with its lines. One scanner for all."""

from __future__ import annotations

import codecs
import re
from collections.abc import Callable, Collection
from dataclasses import dataclass

from logbook.fences import Fence, find_fences
from logbook.problems import Place, Problems

__all__ = ["EntryText", "Fence", "decode", "replace_fences", "scan"]


@dataclass(frozen=True, slots=True)
class EntryText:
    """What a file consists of; `front` is None without front matter, `front_line` the line its text begins in."""

    path: str
    front: str | None
    front_line: int
    fences: tuple[Fence, ...]
    lines: tuple[str, ...]


_FRONT_START = re.compile(r"---[ \t]*")
_FRONT_END = re.compile(r"(?:---|\.\.\.)[ \t]*")
_KEY = re.compile(r"[A-Za-z][\w -]*:(?:\s|$)")


def scan(text: str, path: str, problems: Problems, kinds: Collection[str] = ()) -> EntryText:
    """Find the front matter and the fences of blocks in a text with LF line ends; `kinds` are the words of blocks."""
    lines = text.split("\n")
    front_end = _front_end(lines, path, problems)
    has_front = front_end > 0
    fences = tuple(fence for fence, _ in find_fences(text, lines, front_end, path, problems, kinds))
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
    for number, (fence, prefix) in enumerate(find_fences(text, lines, 0, "", Problems())):
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
