"""Any two revisions compared, whether or not one comes from the other."""

from __future__ import annotations

from logbook.book.book import Book
from logbook.compare.deltas import by_key, measured_deltas, predicted_deltas
from logbook.compare.verdicts import Rules
from logbook.findings import Delta
from logbook.model import PREDICTED, Result
from logbook.prediction import Terms


def deltas_between(book: Book, before: str, after: str) -> list[Delta]:
    """The measured deltas, then the predicted ones, from one revision to another. KeyError: a label is not known."""
    old, new = book.revisions[before], book.revisions[after]
    rules = Rules(book.settings.coverage, book.settings.matters)
    own, others = (by_key(_measured(book, label)) for label in (after, before))
    found = measured_deltas(own, [(before, others)], after, rules)
    for name, chain in new.chains.items():
        earlier = old.chains.get(name)
        if earlier is not None:
            one, other = book.predict(earlier, Terms()), book.predict(chain, Terms())
            found += predicted_deltas(one, other, before, after, rules)
    return found


def _measured(book: Book, label: str) -> list[Result]:
    return [result for result in book.results if result.revision == label and result.basis != PREDICTED]
