"""The pages that the logbook makes itself, and what it puts into the entries."""

from logbook.pages.entry import block_pieces, head_pieces, tail_pieces
from logbook.pages.home import home_pieces
from logbook.pages.site import generated_pages, revision_path

__all__ = ["block_pieces", "generated_pages", "head_pieces", "home_pieces", "revision_path", "tail_pieces"]
