"""A page read as a person would: its words, its headings, its links, its tables."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field
from html.parser import HTMLParser

from logbook.html import render
from logbook.pieces import Piece

_ENDS_WORD = frozenset({"p", "li", "td", "th", "tr", "caption", "summary", "h1", "h2", "h3", "h4", "dt", "dd", "div"})


@dataclass
class Read:
    """What stands on a page. Tables are lists of rows of cells; `links` are words with their addresses."""

    words: str = ""
    headings: list[str] = field(default_factory=list)
    links: list[tuple[str, str]] = field(default_factory=list)
    tables: dict[str, list[list[str]]] = field(default_factory=dict)


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__()
        self.found = Read()
        self._open: list[tuple[str, dict[str, str | None], list[str]]] = []
        self._rows: list[list[str]] = []
        self._caption = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        if tag in ("br", "img", "hr", "col", "meta"):
            return
        self._open.append((tag, dict(attrs), []))
        if tag == "table":
            self._rows, self._caption = [], ""
        elif tag == "tr":
            self._rows.append([])

    def handle_data(self, data: str) -> None:
        self.found.words += data
        for _, _, texts in self._open:
            texts.append(data)

    def handle_endtag(self, tag: str) -> None:
        while self._open:
            name, attributes, texts = self._open.pop()
            self._closed(name, attributes, re.sub(r"\s+", " ", "".join(texts)).strip())
            if name == tag:
                return

    def _closed(self, tag: str, attributes: dict[str, str | None], text: str) -> None:
        if tag in _ENDS_WORD:
            self.found.words += "\n"
        if re.fullmatch("h[1-6]", tag):
            self.found.headings.append(text)
        elif tag == "a":
            self.found.links.append((text, attributes.get("href") or ""))
        elif tag in ("td", "th") and self._rows:
            self._rows[-1].append(text)
        elif tag == "caption":
            self._caption = text
        elif tag == "table":
            self.found.tables[self._caption] = self._rows


def read_html(html: str) -> Read:
    """Read a page's HTML."""
    reader = _Reader()
    reader.feed(html)
    reader.close()
    return reader.found


def read_pieces(pieces: Iterable[Piece]) -> Read:
    """Read what pieces look like as HTML; pictures are left blank, links lead to what they name."""
    return read_html(render(pieces, lambda to, anchor: to + ("#" + anchor if anchor else ""), lambda picture: ""))
