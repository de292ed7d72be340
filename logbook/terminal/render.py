"""Each piece by its sort."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any

from logbook.pieces import (
    Cards,
    Diagram,
    Download,
    Folded,
    Heading,
    Items,
    Note,
    Picture,
    Piece,
    Table,
    Text,
    Tree,
    Written,
)
from logbook.terminal.lines import clean, line_text, width_of, wrapped
from logbook.terminal.sorts import (
    Signs,
    cards_lines,
    diagram_lines,
    picture_lines,
    tree_lines,
    written_lines,
)
from logbook.terminal.tables import table_lines

_TONES = {"plain": "Note", "good": "In order", "caution": "Caution", "problem": "Attention"}
_UNICODE = Signs("─", "→", "•")
_ASCII = Signs("-", "->", "*")
_PLAIN: dict[str, str | int | None] = {
    "±": "+/-", "µ": "u", "μ": "u", "Ω": "ohm", "√": "rt", "°": "deg", "–": "-", "—": "-", "“": '"', "”": '"',
    "’": "'", "‘": "'", "…": "...", "×": "x", "·": "*", "θ": "theta", "≤": "<=", "≥": ">=", "→": "->", "−": "-",
    "\xa0": " ", "\u202f": " ", "\u2009": " ",
}  # fmt: skip


def render(pieces: Iterable[Piece], width: int = 100, ascii_only: bool = False) -> str:
    """Pieces as plain text, a blank line between them.

    Pictures are their words and numbers. `ascii_only` writes `+/-` for the sign and `?` for what has no plain form.
    """
    signs = _ASCII if ascii_only else _UNICODE
    blocks = ["\n".join(lines) for lines in (_lines(piece, width, signs) for piece in pieces) if lines]
    text = "\n\n".join(blocks) + "\n" if blocks else ""
    return _in_ascii(text) if ascii_only else text


def _in_ascii(text: str) -> str:
    return text.translate(str.maketrans(_PLAIN)).encode("ascii", "replace").decode("ascii")


def _lines(piece: Piece, width: int, signs: Signs) -> list[str]:
    return _SORTS[type(piece)](piece, width, signs)


def _heading(piece: Heading, width: int, signs: Signs) -> list[str]:
    words = clean(piece.text)
    return [words, signs.rule * width_of(words)]


def _text(piece: Text, width: int, signs: Signs) -> list[str]:
    words = line_text(piece.line)
    return wrapped(words, width) if words else []


def _note(piece: Note, width: int, signs: Signs) -> list[str]:
    return wrapped(f"{_TONES[piece.tone]}: {line_text(piece.line)}", width, "", "  ")


def _items(piece: Items, width: int, signs: Signs) -> list[str]:
    lines: list[str] = []
    for number, line in enumerate(piece.lines, 1):
        sign = f"{number}. " if piece.ordered else f"{signs.bullet} "
        lines += wrapped(line_text(line), width, sign, " " * len(sign))
    return lines


def _table(piece: Table, width: int, signs: Signs) -> list[str]:
    return table_lines(piece, width, signs.rule)


def _folded(piece: Folded, width: int, signs: Signs) -> list[str]:
    lines = [clean(piece.summary)]
    for inner in piece.pieces:
        lines += ["  " + line for line in _lines(inner, width - 2, signs)]
    return lines


def _download(piece: Download, width: int, signs: Signs) -> list[str]:
    return [clean(f"{piece.text}: {piece.file}")]


_SORTS: dict[type, Callable[[Any, int, Signs], list[str]]] = {
    Heading: _heading,
    Text: _text,
    Note: _note,
    Items: _items,
    Table: _table,
    Picture: picture_lines,
    Diagram: diagram_lines,
    Tree: tree_lines,
    Cards: cards_lines,
    Written: written_lines,
    Folded: _folded,
    Download: _download,
}
