"""The floor for a build: the same site for MkDocs without the plugin, each block already HTML in the Markdown."""

from __future__ import annotations

import json
import re
from pathlib import Path

from logbook_mkdocs.navigation import HOME, navigation
from logbook_mkdocs.slots import HEAD, TAIL, fill, with_slots

from logbook.book import Book, Settings, find_sources, make_book
from logbook.cache import Cache
from logbook.html import render
from logbook.pages import block_pieces, generated_pages, head_pieces, home_pieces, tail_pieces
from logbook.pieces import Piece
from logbook.plots import draw

# JSON is YAML. Both sites have the same theme, navigation and extensions.
SITE = {
    "site_name": "Bench",
    "use_directory_urls": False,
    "docs_dir": "entries",
    "theme": {"name": "material", "font": False, "features": ["navigation.prune", "navigation.indexes"]},
    "markdown_extensions": ["admonition", "attr_list", "tables", "pymdownx.superfences", {"toc": {"permalink": True}}],
}


def write_site(folder: Path, **more: object) -> None:
    """The site's `mkdocs.yml`."""
    folder.mkdir(parents=True, exist_ok=True)
    (folder / "mkdocs.yml").write_text(json.dumps({**SITE, **more}), encoding="utf-8")


def write_bare(entries: Path, folder: Path, cache: Cache) -> None:
    """A folder with the pages that the plugin would show, as Markdown with HTML in it, and the same navigation."""
    book = make_book(find_sources(entries), entries, Settings(title="Bench"))
    pages = generated_pages(book)
    for path, text in _texts(book, entries, cache).items():
        target = folder / "entries" / path
        target.parent.mkdir(parents=True, exist_ok=True)
        target.write_text(text, encoding="utf-8")
    write_site(folder, plugins=["search"], nav=navigation(book, pages, []))


def _texts(book: Book, entries: Path, cache: Cache) -> dict[str, str]:
    def html(pieces: list[Piece]) -> str:
        # An empty line would end the HTML in some Markdown; here it costs nothing to leave it out.
        return re.sub(r"\n\s*\n", "\n", render(pieces, lambda to, anchor: None, lambda drawing: draw(drawing, cache)))

    pages = generated_pages(book)
    found = {page.path: f"# {page.title}\n\n<div>\n{html(list(page.pieces))}\n</div>\n" for page in pages}
    found[HOME] = f"# Bench\n\n<div>\n{html(home_pieces(book))}\n</div>\n"
    for entry in book.entries:
        text = (entries / entry.path).read_text(encoding="utf-8")
        front, body = re.match(r"(---\n.*?\n---\n)(.*)", text, re.S).groups()  # type: ignore[union-attr]
        inside = {block.id: html(block_pieces(book, entry, block)) for block in entry.blocks}
        inside |= {HEAD: html(head_pieces(book, entry)), TAIL: html(tail_pieces(book, entry))}
        found[entry.path] = front + fill(with_slots(book, entry, body), inside.__getitem__)
    return found
