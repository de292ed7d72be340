"""The pages that the logbook makes itself, and what it puts into the entries."""

from logbook.pages.entry import block_pieces, head_pieces, tail_pieces
from logbook.pages.home import home_pieces
from logbook.pages.site import PagePlan, generated_pages, page_plans, revision_path

__all__ = [
    "PagePlan",
    "block_pieces",
    "generated_pages",
    "head_pieces",
    "home_pieces",
    "page_plans",
    "revision_path",
    "tail_pieces",
]
