"""A block's results: as read, on equal terms, and what has changed since the revision before."""

from __future__ import annotations

from math import isnan

from logbook.compare.equal import conditions_words
from logbook.compare.verdicts import NEW
from logbook.findings import Delta
from logbook.kind import Outcome, View
from logbook.model import PREDICTED, Block, Result
from logbook.pieces import Items, Line, Muted, Note, Piece, Table, Text, Verdict
from logbook.quantity_display import show_delta, show_value
from logbook.showing.cautions import result_cautions
from logbook.showing.deltas import agreement_table, budget_pieces, folded, shares_pieces
from logbook.showing.words import change, plain, reason, result_words


def show_results(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The results of a block with their deltas, with the cautions that they call for."""
    return [*result_cautions(outcome.results), *results_pieces(outcome, view)]


def results_pieces(outcome: Outcome, view: View) -> list[Piece]:
    """The results with their deltas, and beneath them how the numbers came about."""
    results = list(outcome.results)
    if not results:
        return []
    pieces: list[Piece] = [results_table(results, view)]
    pieces += [Text(("Conditions: ", Muted(words))) for words in _conditions(results)]
    pieces += [Note(note, "caution") for note in dict.fromkeys(n for r in results for n in r.notes)]
    pieces += folded("How these values come onto equal terms", _corrections(results))
    pieces += _agreement(results, view)
    pieces += folded("Where the doubt of the changes comes from", _budgets(results, view))
    return pieces


def delta_of(result: Result, view: View) -> Delta | None:
    """The delta that ends in this very result, if it is the one that was compared."""
    for delta in view.findings.read.get(result.revision, ()):
        if delta.after_result is result:
            return delta
    return None


def results_table(results: list[Result], view: View) -> Table:
    """Each result as read and on equal terms, with its change against the revision before."""
    rows: list[tuple[Line, ...]] = []
    for result in results:
        delta = delta_of(result, view)
        rows.append(
            (
                result_words(result.quantity, result.at_hz, result.name),
                "" if result.shown is None else plain(result.shown, result.unit),
                _value(result),
                _before(delta),
                "" if delta is None else change(delta),
                _verdict(delta) if delta is not None else _stands_back(result, view),
            )
        )
    as_read = any(result.shown is not None for result in results)
    head = ("quantity", "as read", "on equal terms" if as_read else "value", "before", "change", "verdict")
    kept = [i for i in range(len(head)) if i in (0, 2) or any(row[i] for row in rows)]
    return Table(
        tuple(head[i] for i in kept),
        tuple(tuple(row[i] for i in kept) for row in rows),
        f"Results on revision {results[0].revision}",
        frozenset(place for place, i in enumerate(kept) if i in (1, 2, 3, 4)),
    )


def _stands_back(result: Result, view: View) -> Line:
    """A word for a reading that is not the one compared: another of this revision with the same key is."""
    if isnan(result.value) or result.basis == PREDICTED:
        return ""
    other = any(d.key == result.key and d.after_result for d in view.findings.read.get(result.revision, ()))
    return Muted("another reading of this revision is compared") if other else ""


def _value(result: Result) -> Line:
    if isnan(result.value):
        return Muted(f"not known: {result.words}" if result.words else "not known")
    value = plain(result.value, result.unit, result.u)
    if result.bound:
        return f"at {'most' if result.bound == 'upper' else 'least'} {value}"
    return value if result.u is not None else (value, " ", Muted("doubt not stated"))


def _before(delta: Delta | None) -> Line:
    if delta is None or isnan(delta.before):
        return ""
    return (plain(delta.before, delta.unit), " ", Muted(delta.from_))


def _verdict(delta: Delta | None) -> Line:
    if delta is None:
        return ""
    if delta.verdict == NEW:
        return Verdict(NEW)
    return (Verdict(delta.verdict), " ", reason(delta.why)) if delta.why else Verdict(delta.verdict)


def _conditions(results: list[Result]) -> list[str]:
    return [words for words in dict.fromkeys(conditions_words(r.conditions) for r in results) if words]


def _corrections(results: list[Result]) -> list[Piece]:
    """Each corrected value as a sum that can be followed with a pocket calculator."""
    lines: list[Line] = []
    for result in results:
        if result.shown is None or not (result.corrections or result.read_as):
            continue
        steps = "".join(f"; {label} {show_delta(amount, 'dB')}" for label, amount in result.corrections)
        words = result_words(result.quantity, result.at_hz, result.name)
        read, value = show_value(result.shown, result.unit), show_value(result.value, result.unit)
        read = f"{result.read_as}, which is {read}" if result.read_as else read
        lines.append(f"{words}: read {read}{steps}; on equal terms {value}")
    pieces: list[Piece] = [Items(tuple(lines))] if lines else []
    repeats = [r for r in results if r.repeats]
    for result in repeats:
        listed = ", ".join(show_value(v, result.unit) for v in result.repeats)
        pieces.append(Text(f"{result_words(result.quantity, result.at_hz, result.name)}: mean of {listed}"))
    return pieces


def _agreement(results: list[Result], view: View) -> list[Piece]:
    known = view.findings.agreement_by_result
    found = [known[id(result)] for result in results if id(result) in known]
    if not found:
        return []
    pieces: list[Piece] = [agreement_table(found)]
    for each in found:
        if each.verdict == "disagrees":
            pieces += shares_pieces(each)
    return pieces


def _budgets(results: list[Result], view: View) -> list[Piece]:
    pieces: list[Piece] = []
    for result in results:
        delta = delta_of(result, view)
        if delta is not None and delta.budget:
            pieces.append(Text(result_words(result.quantity, result.at_hz, result.name)))
            pieces += budget_pieces(delta, view.rules.coverage)
    return pieces
