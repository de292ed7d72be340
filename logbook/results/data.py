"""The book as plain data: everything that was read, computed and compared. `null` is what is not known or stated."""

from __future__ import annotations

from typing import Any

from logbook.book import Book
from logbook.budget import BudgetRow
from logbook.findings import Agreement, Delta, Part, Regression, Spread, TargetVerdict, Todo
from logbook.model import MEASURED, PREDICTED, Result
from logbook.problems import Problem
from logbook.results.hardware import revision_data
from logbook.results.numbers import number, word

# The version counts up when a name is dropped or changes its meaning, never when one is added.
SCHEMA = "urn:signal-chain-logbook:results:1"


def results_data(book: Book) -> dict[str, Any]:
    """Everything that the site shows, as data in the order of the entries."""
    findings = book.findings
    return {
        "schema": SCHEMA,
        "title": book.settings.title,
        "coverage": number(book.settings.coverage),
        "entries": [
            {
                "path": entry.path,
                "title": entry.title,
                "date": entry.date.isoformat(),
                "revision": word(entry.speaks_of),
            }
            for entry in book.entries
        ],
        "revisions": [revision_data(revision, book.predict) for revision in book.revisions.values()],
        "results": [_result(result) for result in book.results],
        "deltas": [_delta(delta) for delta in findings.deltas],
        "agreement": [_agreement(found) for found in findings.agreement],
        "targets": [_target(verdict) for verdict in findings.targets],
        "regressions": [_regression(found) for found in findings.regressions],
        "spreads": [_spread(found) for found in findings.spreads],
        "todo": [_todo(item) for item in findings.todo],
        "parts": [_part(part) for part in findings.parts],
        "problems": [_problem(problem) for problem in book.problems],
    }


def _result(result: Result) -> dict[str, Any]:
    return {
        "key": result.key,
        "quantity": result.quantity,
        "chain": result.chain,
        "at_hz": number(result.at_hz),
        "name": word(result.name),
        "revision": word(result.revision),
        "entry": result.entry,
        "line": result.line,
        "block": result.block,
        "basis": result.basis,
        "value": number(result.value),
        "unit": result.unit,
        "u": number(result.u),
        "better": result.better,
        "bound": word(result.bound),
        "why": word(result.words),
        "shown": _shown(result),
        "corrections": [{"what": what, "db": number(amount)} for what, amount in result.corrections],
        "repeats": [number(value) for value in result.repeats],
        "notes": list(result.notes),
    }


def _shown(result: Result) -> dict[str, Any]:
    """What stood on the instrument, and under which conditions; all of it null for a prediction."""
    conditions = result.conditions
    return {
        "value": number(result.shown),
        "rbw_hz": number(conditions.rbw_hz),
        "averaging": conditions.averaging,
        "through": list(conditions.through),
        "vbw_hz": number(conditions.vbw_hz),
        "bench": conditions.bench,
        "bench_from": conditions.bench_from,
        "shown_at": conditions.shown_at,
        "drive_dbm": number(conditions.drive_dbm),
        "temperature_c": number(conditions.temperature_c),
        "source_temperature_k": number(conditions.source_temperature_k),
    }


def _delta(delta: Delta) -> dict[str, Any]:
    return {
        "key": delta.key,
        "quantity": delta.quantity,
        "chain": delta.chain,
        "at_hz": number(delta.at_hz),
        "name": word(delta.name),
        "from": delta.from_,
        "to": delta.to,
        "basis": delta.basis,
        "before": number(delta.before),
        "after": number(delta.after),
        "delta": number(delta.delta),
        "unit": delta.unit,
        "u": number(delta.u),
        "verdict": delta.verdict,
        "why": word(delta.why),
        "better": delta.better,
        "doubt_stated": bool(delta.stated),
        # A prediction owes its doubt to every tolerance of the chain: too much to be repeated for every total.
        "budget": [] if delta.basis == PREDICTED else [_budget(row) for row in delta.budget],
    }


def _budget(row: BudgetRow) -> dict[str, Any]:
    return {
        "source": row.source.words,
        "u": number(row.u),
        "sensitivity": number(row.sensitivity),
        "contribution": number(row.contribution),
        "cancelled": bool(row.cancelled),
    }


def _agreement(found: Agreement) -> dict[str, Any]:
    return {
        "key": found.key,
        "revision": found.revision,
        "entry": found.result.entry,
        "line": found.result.line,
        "measured": number(found.measured),
        "predicted": number(found.predicted),
        "unit": found.unit,
        "u_measured": number(found.u_measured),
        "u_predicted": number(found.u_predicted),
        "en": number(found.en),
        "verdict": found.verdict,
        "why": word(found.why),
        "shares": [
            {
                "stage": word(share.source.name),
                "parameter": share.source.what,
                "share": number(share.share),
                "shift": number(share.shift),
                "unit": share.unit,
            }
            for share in found.shares
        ],
    }


def _target(verdict: TargetVerdict) -> dict[str, Any]:
    target = verdict.target
    return {
        "key": target.key,
        "limit": target.written,
        "revision": verdict.revision,
        "basis": verdict.basis,
        "value": number(verdict.value),
        "u": number(verdict.u),
        "probability": number(verdict.probability),
        "verdict": verdict.verdict,
        "why": word(verdict.why),
        "unit": target.unit,
        "low": number(target.low),
        "high": number(target.high),
        "rbw_hz": number(target.rbw_hz),
        "source_temperature_k": number(target.source_temperature_k),
        "gap": number(verdict.gap),
        "closes": number(verdict.closes),
        "entry": target.entry,
        "line": target.place.line,
        "reason": word(target.why),
    }


def _regression(found: Regression) -> dict[str, Any]:
    return {
        "key": found.key,
        "from": found.from_,
        "to": found.to,
        "kind": found.kind,
        "delta": number(found.delta),
        "unit": found.unit,
        "accepted": bool(found.accepted),
        "why": word(found.why),
    }


def _spread(found: Spread) -> dict[str, Any]:
    return {
        "key": found.key,
        "revision": found.revision,
        "basis": MEASURED,
        "first": {"entry": found.first.entry, "line": found.first.line, "value": number(found.first.value)},
        "second": {"entry": found.second.entry, "line": found.second.line, "value": number(found.second.value)},
        "difference": number(found.difference),
        "unit": found.unit,
        "u": number(found.u),
    }


def _todo(item: Todo) -> dict[str, Any]:
    return {"id": item.id, "what": item.what, "opened": item.opened, "closed": item.closed}


def _part(part: Part) -> dict[str, Any]:
    return {
        "item": part.item,
        "quantity": part.count,
        "price": number(part.price),
        "cost": number(part.cost),
        "currency": part.currency,
        "chain": word(part.chain),
        "revision": part.revision,
        "planned": bool(part.planned),
        "entry": part.entry,
        "line": part.place.line,
    }


def _problem(problem: Problem) -> dict[str, Any]:
    return {
        "file": problem.place.file,
        "line": problem.place.line,
        "column": problem.place.column,
        "severity": problem.severity,
        "code": problem.code,
        "message": problem.message,
        "hint": word(problem.hint),
    }
