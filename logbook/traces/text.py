"""A file's bytes as lines, and its faults by line and column, with a limit for files that are wrong throughout."""

from __future__ import annotations

import re
from codecs import BOM_UTF8, BOM_UTF16_BE, BOM_UTF16_LE
from types import TracebackType

from logbook.problems import Place, Problems

_LONGEST_QUOTE = 40
_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")


class Faults:
    """The faults of one file; past the first `most` they are counted only. Used as a context: the count comes last."""

    def __init__(self, file: str, problems: Problems, most: int = 20) -> None:
        self.file = file
        self._problems = problems
        self._most = most
        self._found = 0
        self._beyond: Place | None = None

    def add(self, line: int, column: int, code: str, message: str, hint: str = "") -> None:
        """One more fault; line and column count from 1."""
        self._found += 1
        place = Place(self.file, line, column)
        if self._found <= self._most:
            self._problems.add(place, code, message, hint)
        elif self._beyond is None:
            self._beyond = place

    def __len__(self) -> int:
        return self._found

    def __enter__(self) -> Faults:
        return self

    def __exit__(self, sort: type[BaseException] | None, error: BaseException | None, at: TracebackType | None) -> None:
        if self._beyond is not None:
            more = self._found - self._most
            message = f"This file has {more} more fault{'s' if more > 1 else ''}, from this line on."
            self._problems.add(self._beyond, "more", message, "Mend those above first.")


def read_lines(data: bytes, faults: Faults) -> list[str] | None:
    """The lines of a text in UTF-8, UTF-16 with its mark, or a Western code page; None with a fault for other bytes.

    Lines end with LF, CR LF or a lone CR, and with nothing else, so that they count as editors count them.
    """
    text = _decoded(data)
    if text is None:
        faults.add(1, 1, "encoding", "This is no text file.", "Save the trace as text, not as a screen or a state.")
        return None
    lines = text.replace("\r\n", "\n").replace("\r", "\n").rstrip("\x1a\n").split("\n")
    if not any(line.strip() for line in lines):
        faults.add(1, 1, "empty", "The file is empty.")
        return None
    return lines


def _decoded(data: bytes) -> str | None:
    if data.startswith((BOM_UTF16_LE, BOM_UTF16_BE)):
        text = data.decode("utf-16", "replace")
    else:
        plain = data.removeprefix(BOM_UTF8)
        try:
            text = plain.decode("utf-8")
        except UnicodeDecodeError:
            # Instruments write the degree and the micro sign in one byte, as this code page does.
            text = plain.decode("cp1252", "replace")
    return None if "\x00" in text else text


def quoted(text: str) -> str:
    """What is written, in quotes: cut where it is long, and with a mark for what cannot be shown."""
    shown = "".join(c if c.isprintable() else "\ufffd" for c in text.strip()[: _LONGEST_QUOTE + 1])
    return f"'{shown[:_LONGEST_QUOTE]}...'" if len(shown) > _LONGEST_QUOTE else f"'{shown}'"


def is_number(text: str) -> bool:
    """Whether a text is a plain decimal number with a point, and nothing that only Python takes for one."""
    return _NUMBER.fullmatch(text) is not None


def word_column(line: str, index: int) -> int:
    """The column, from 1, of a word of a line by its index from 0; past the last word, the end of the line."""
    for position, match in enumerate(re.finditer(r"\S+", line)):
        if position == index:
            return match.start() + 1
    return len(line.rstrip()) + 1
