"""Entries in, a computed book out: everything read, resolved, calculated and compared."""

from logbook.book.book import Book, Settings, make_book
from logbook.book.reading import Remembering
from logbook.book.sources import SourceFile, find_sources

__all__ = ["Book", "Remembering", "Settings", "SourceFile", "find_sources", "make_book"]
