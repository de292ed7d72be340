"""Slots: empty places in a page's Markdown that are filled with computed HTML just before the template."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable

from mkdocs.structure.toc import AnchorLink, TableOfContents

from logbook.book import Book
from logbook.entry_text import replace_fences
from logbook.model import Entry
from logbook.pieces import Folded, Heading, Piece

WHOLE = "lb-page"
HEAD = "lb-head"
TAIL = "lb-tail"

_SLOT = re.compile(r'(?:<p>\s*)?<div class="lb-slot" id="([\w-]+)">\s*</div>(?:\s*</p>)?')


def slot(name: str) -> str:
    """The place itself, as Markdown takes it."""
    return f'<div class="lb-slot" id="{name}"></div>'


def with_slots(book: Book, entry: Entry, markdown: str) -> str:
    """An entry's Markdown with a slot in the place of each block, and a plain line that search finds."""

    def replaced(number: int, fence: object) -> str:
        block = entry.blocks[number]
        words = _search_words(book, entry, number)
        line = f'<p class="lb-search">{words}</p>' if words else ""
        return f"\n{slot(block.id)}\n\n{line}\n" if line else f"\n{slot(block.id)}\n"

    head = _after_title(replace_fences(markdown, replaced), entry.title)
    return f"{head}\n\n{slot(TAIL)}\n"


def _after_title(markdown: str, title: str) -> str:
    """The head's slot behind the first heading of level 1; a text that begins without one gets the entry's title."""
    lines = markdown.split("\n")
    for index, line in enumerate(lines):
        if line.startswith("# "):
            return "\n".join([*lines[: index + 1], "", slot(HEAD), "", *lines[index + 1 :]])
        if line.strip():
            break
    return f"# {title}\n\n{slot(HEAD)}\n\n{markdown}"


def _search_words(book: Book, entry: Entry, number: int) -> str:
    block = entry.blocks[number]
    names = dict.fromkeys(r.quantity.replace("_", " ") for r in book.outcome(block).results)
    words = ", ".join(names)
    return f"{block.kind}: {words}" if words else ""


def fill(content: str, html: Callable[[str], str | None]) -> str:
    """The page's HTML with every slot filled; an element with the slot's id stays, so that its address lives."""

    def filled(match: re.Match[str]) -> str:
        inner = html(match.group(1))
        return f'<div class="lb" id="{match.group(1)}">\n{inner}\n</div>' if inner else ""

    return _SLOT.sub(filled, content)


def add_to_contents(toc: TableOfContents, pieces: Iterable[Piece]) -> None:
    """Enter the headings of computed pieces into a page's table of contents, under its title."""
    titles = list(toc)
    below = titles[0].children if titles else []
    links = [AnchorLink(p.text, p.id, p.level) for p in _headings(pieces) if p.id]
    if titles:
        below.extend(link for link in links if link.level == 2)
    else:
        toc.items.extend(links)


def _headings(pieces: Iterable[Piece]) -> list[Heading]:
    found: list[Heading] = []
    for piece in pieces:
        if isinstance(piece, Heading):
            found.append(piece)
        elif isinstance(piece, Folded):
            found += _headings(piece.pieces)
    return found
