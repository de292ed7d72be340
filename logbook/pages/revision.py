"""A revision's page: what changed, predicted, planned and measured side by side; its chains; what to change next."""

from __future__ import annotations

from math import isnan

from logbook.book import Book
from logbook.compare.deltas import chain_deltas
from logbook.compare.next_change import next_change
from logbook.compare.verdicts import DISAGREES, GONE, NEW
from logbook.findings import Delta
from logbook.model import BUILT, PLANNED, PREDICTED
from logbook.pages.links import entry_link
from logbook.pieces import Heading, Items, Line, Muted, Note, Piece, Table, Text, Verdict
from logbook.prediction import Terms
from logbook.quantity_display import show_delta, show_value
from logbook.revision import Revision
from logbook.showing.chains import chain_pieces
from logbook.showing.deltas import (
    agreement_table,
    budget_pieces,
    delta_words,
    deltas_table,
    folded,
    one_sided,
    revision_change,
    shares_pieces,
)
from logbook.showing.next_change import next_change_pieces
from logbook.showing.plans import plan_pieces
from logbook.showing.regressions import regression_pieces
from logbook.showing.targets import targets_table
from logbook.showing.words import change, difference_unit, doubt_words, reason, result_words


def revision_pieces(book: Book, revision: Revision) -> list[Piece]:
    """All that is known of a revision."""
    said = revision_change(revision.label, revision.comes_from)
    pieces: list[Piece] = [Text((*said, f", {revision.state}, {revision.date}."))]
    pieces += _entries(book, revision)
    if revision.broken:
        words = "A problem in the entries keeps part of this revision from being computed."
        pieces.append(Note(words, "problem"))
    pieces.append(Text(Muted(doubt_words(book.settings.coverage))))
    pieces += regression_pieces(book.findings, revision.label)
    pieces += _changes(book, revision)
    pieces += _targets(book, revision)
    pieces += _alternatives(book, revision)
    pieces += _agreement(book, revision)
    pieces += _next(book, revision)
    parent = book.revisions.get(revision.comes_from or "")
    for name, chain in revision.chains.items():
        pieces.append(Heading(2, f"Chain {name}"))
        made = revision.made.get(name)
        if made is not None and made.steps:
            why = f" Why: {made.why}." if made.why else ""
            pieces.append(Text(f"Changed here.{why}"))
            pieces.append(Items(tuple(step.words for step in made.steps)))
        elif made is None and parent is not None:
            pieces.append(Text(("Unchanged since revision ", *revision_change(parent.label, None)[1:], ".")))
        before = parent.chains.get(name) if parent is not None and made is not None and not made.full else None
        pieces += chain_pieces(book.predict(chain, Terms()), before)
    return pieces


def _entries(book: Book, revision: Revision) -> list[Piece]:
    titles = {entry.path: entry for entry in book.entries}
    plan = revision.planned
    lines: list[Line] = []
    if plan is not None:
        lines += [("planned: ", *entry_link(titles[path])) for path in plan.entries]
    lines += [entry_link(titles[path]) for path in revision.entries]
    return [Heading(2, "Entries"), Items(tuple(lines))] if lines else []


def _changes(book: Book, revision: Revision) -> list[Piece]:
    """Predicted, planned and measured deltas side by side; the doubt of the measured ones beneath."""
    deltas = book.findings.deltas_to(revision.label)
    if not deltas:
        return []
    measured = [d for d in deltas if d.basis != PREDICTED]
    predicted = [d for d in deltas if d.basis == PREDICTED]
    planned = _planned(book, revision)
    pieces: list[Piece] = [Heading(2, f"What changed since {revision.comes_from}")]
    if measured:
        sided = [d for d in measured if d.verdict not in (NEW, GONE)]
        pieces += [_side_by_side(sided, predicted, planned)] if sided else []
        pieces += one_sided(measured, chains=len(revision.chains) > 1)
        budgets: list[Piece] = []
        for d in measured:
            if d.budget:
                budgets += [Text(result_words(d.quantity, d.at_hz, d.name)), *budget_pieces(d, book.settings.coverage)]
        pieces += folded("Where the doubt of the measured changes comes from", budgets)
    changed = [d for d in predicted if d.verdict != "same"]
    if changed:
        pieces.append(deltas_table(changed, "Predicted", chains=len(revision.chains) > 1))
    same = [d for d in predicted if d.verdict == "same"]
    pieces += folded("Predicted to stay the same", [deltas_table(same, "", chains=True)] if same else [])
    if planned and not measured:
        pieces.append(deltas_table(planned, "As it was planned", chains=len(revision.chains) > 1))
    return pieces


def _planned(book: Book, revision: Revision) -> list[Delta]:
    """The deltas that the plan of this label promised, against the plan's own parent."""
    plan = revision.planned
    if plan is None:
        return []
    parent = book.revisions.get(plan.comes_from or "")
    return chain_deltas(plan, parent, book.predict, book.rules)


def _side_by_side(measured: list[Delta], predicted: list[Delta], planned: list[Delta]) -> Table:
    def beside(found: list[Delta], d: Delta) -> str:
        same = [p for p in found if (p.chain, p.quantity) == (d.chain, d.quantity) and not d.name]
        return change(same[0]) if same else ""

    rows: list[tuple[Line, ...]] = []
    for d in measured:
        row: list[Line] = [delta_words(d, chains=True), d.from_]
        row += [_figure(d.before, d.unit), _figure(d.after, d.unit), change(d)]
        row += [beside(planned, d)] if planned else []
        row += [beside(predicted, d)]
        row.append((Verdict(d.verdict), " ", reason(d.why)) if d.why else Verdict(d.verdict))
        rows.append(tuple(row))
    head = ["quantity", "against", "before", "after", "measured change"]
    head += ["planned"] if planned else []
    head += ["predicted", "verdict"]
    return Table(tuple(head), tuple(rows), "Measured", frozenset(range(2, len(head) - 1)))


def _figure(value: float, unit: str) -> str:
    return "" if isnan(value) else show_value(value, unit)


def _targets(book: Book, revision: Revision) -> list[Piece]:
    found = book.findings.targets_of(revision.label)
    if not found:
        return []
    by_key = {v.target.key: v for v in found}
    pieces: list[Piece] = [Heading(2, "Targets")]
    pieces.append(targets_table([v.target for v in found], by_key, revision.label))
    return pieces


def _alternatives(book: Book, revision: Revision) -> list[Piece]:
    plan = revision if revision.state == PLANNED else revision.planned
    if plan is None:
        return []
    parent = book.revisions.get(plan.comes_from or "")
    pieces = plan_pieces(plan, parent, book.findings, book.predict)
    title = "Ways weighed in the plan" if plan.alternatives else "Can the plan reach the targets?"
    return [Heading(2, title), *pieces] if pieces else []


def _agreement(book: Book, revision: Revision) -> list[Piece]:
    found = [a for a in book.findings.agreement if a.revision == revision.label]
    pieces: list[Piece] = []
    if found:
        pieces += [Heading(2, "Measured against predicted"), agreement_table(found, "")]
        shares = [piece for each in found if each.verdict == DISAGREES for piece in shares_pieces(each)]
        pieces += folded("Where the differences could come from", shares)
    for spread in book.findings.spreads:
        if spread.revision == revision.label:
            unit = difference_unit(spread.unit)
            words = (
                f"Two readings of {spread.key} on {revision.label} differ by {show_delta(spread.difference, unit)}, "
            )
            words += f"more than their stated doubt (u = {show_value(spread.u, unit)}) allows: "
            words += f"{spread.first.entry} line {spread.first.line}, {spread.second.entry} line {spread.second.line}."
            pieces.append(Note(words, "caution"))
    return pieces


def _next(book: Book, revision: Revision) -> list[Piece]:
    if revision.state != BUILT:
        return []
    pieces: list[Piece] = []
    for verdict in book.findings.targets_of(revision.label):
        found = next_change(verdict, revision.chains.get(verdict.target.chain), book.predict)
        if found is not None:
            pieces += next_change_pieces(found)
    return [Heading(2, "What to change next"), *pieces] if pieces else []
