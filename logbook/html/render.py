"""Each piece by its sort."""

from __future__ import annotations

from base64 import b64encode
from collections.abc import Callable, Iterable
from typing import Any

from logbook.html.context import Context, Drawer, Url
from logbook.html.elements import element, text
from logbook.html.figures import cards_html, diagram_html, picture_html
from logbook.html.lines import line_html
from logbook.html.tables import table_html
from logbook.html.trees import tree_html
from logbook.html.written import written_html
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

_TONES = {"plain": "Note", "good": "In order", "caution": "Caution", "problem": "Attention"}
_MEDIA = {"csv": "text/csv", "json": "application/json", "svg": "image/svg+xml"}


def render(pieces: Iterable[Piece], url: Url, picture: Drawer) -> str:
    """Pieces as HTML, in order.

    `url(to, anchor)` gives the address of a link's target, or None, and then the link is plain words.
    `picture(drawing)` gives a drawing as inline SVG.
    """
    return _pieces(pieces, Context(url, picture))


def _pieces(pieces: Iterable[Piece], context: Context) -> str:
    return "\n".join(_SORTS[type(piece)](piece, context) for piece in pieces)


def _heading(piece: Heading, context: Context) -> str:
    return element(f"h{min(max(piece.level, 1), 6)}", text(piece.text), id=piece.id or None)


def _text(piece: Text, context: Context) -> str:
    return element("p", line_html(piece.line, context.url))


def _note(piece: Note, context: Context) -> str:
    word = element("strong", _TONES[piece.tone], "lb-tone")
    return element("p", f"{word} {line_html(piece.line, context.url)}", f"lb-note lb-note-{piece.tone}")


def _items(piece: Items, context: Context) -> str:
    lines = "\n".join(element("li", line_html(line, context.url)) for line in piece.lines)
    return element("ol" if piece.ordered else "ul", lines, "lb-items") if piece.lines else ""


def _folded(piece: Folded, context: Context) -> str:
    content = element("summary", text(piece.summary)) + _pieces(piece.pieces, context)
    return element("details", content, "lb-fold")


def _download(piece: Download, context: Context) -> str:
    media = _MEDIA.get(piece.file.rpartition(".")[2].lower(), "text/plain")
    data = b64encode(piece.content.encode("utf-8", "replace")).decode("ascii")
    link = element("a", text(piece.text), href=f"data:{media};charset=utf-8;base64,{data}", download=piece.file)
    return element("p", link, "lb-download")


_SORTS: dict[type, Callable[[Any, Context], str]] = {
    Heading: _heading,
    Text: _text,
    Note: _note,
    Items: _items,
    Table: table_html,
    Picture: picture_html,
    Diagram: diagram_html,
    Tree: tree_html,
    Cards: cards_html,
    Written: written_html,
    Folded: _folded,
    Download: _download,
}
