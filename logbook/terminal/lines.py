"""Lines as plain words, and how wide they are."""

from __future__ import annotations

import re
import textwrap
from unicodedata import combining, east_asian_width

from logbook.pieces import Code, Line, Link, Muted, Span, Strong, Verdict

_CONTROL = re.compile(r"[\x00-\x1f\x7f-\x9f\ud800-\udfff]")


def line_text(line: Line) -> str:
    """A line as words; what would move the cursor of a terminal is shown as a question mark."""
    spans = line if isinstance(line, tuple) else (line,)
    return "".join(_span(span) for span in spans).strip()


def clean(words: str) -> str:
    """Words without control characters: a file cannot make the terminal do things."""
    return _CONTROL.sub("?", words.replace("\t", "    "))


def width_of(words: str) -> int:
    """The columns that words take in a terminal."""
    return sum(0 if combining(c) else 2 if east_asian_width(c) in "WF" else 1 for c in words)


def padded(words: str, width: int, right: bool = False) -> str:
    """Words filled up with blanks to a width."""
    blanks = " " * max(width - width_of(words), 0)
    return blanks + words if right else words + blanks


def wrapped(words: str, width: int, first: str = "", rest: str = "") -> list[str]:
    """Words in lines no wider than this, where their parts allow."""
    made = textwrap.wrap(
        words,
        max(width, 8),
        initial_indent=first,
        subsequent_indent=rest,
        break_on_hyphens=False,
        break_long_words=False,
    )
    return made or [first.rstrip()]


def _span(span: Span) -> str:
    match span:
        case str():
            return clean(span)
        case Verdict(word=word, detail=detail):
            return clean(f"{word} ({detail})" if detail else word)
        case Code(text=text) | Link(text=text) | Muted(text=text) | Strong(text=text):
            return clean(text)
