"""A revision's page: its chains as predicted, what was changed, predicted and measured deltas."""

from __future__ import annotations

from logbook.book import Book
from logbook.pieces import Heading, Items, Note, Piece, Text
from logbook.prediction import Terms
from logbook.revision import Revision
from logbook.showing.chains import chain_pieces
from logbook.showing.deltas import deltas_table, revision_change


def revision_pieces(book: Book, revision: Revision) -> list[Piece]:
    """All that is known of a revision."""
    pieces: list[Piece] = [Text((revision_change(revision.label, revision.comes_from), f", {revision.state}."))]  # type: ignore[arg-type]
    if revision.broken:
        pieces.append(Note("A problem in the entries keeps part of this revision from being computed.", "problem"))
    parent = book.revisions.get(revision.comes_from or "")
    for name, chain in revision.chains.items():
        made = revision.made.get(name)
        pieces.append(Heading(2, f"Chain {name}"))
        if made is not None and made.steps:
            pieces.append(Items(tuple(step.words for step in made.steps)))
        before = parent.chains.get(name) if parent is not None else None
        pieces += chain_pieces(book.predict(chain, Terms()), before)
    for basis in ("measured", "predicted"):
        deltas = book.findings.deltas_to(revision.label, basis=basis)
        if deltas:
            pieces.append(deltas_table(deltas, f"What changed, {basis}", chains=True))
    return pieces
