"""Home: where the project stands, what the last change did, what is left, and the entries."""

from __future__ import annotations

from math import isnan

from logbook.book import Book
from logbook.findings import Target, TargetVerdict
from logbook.model import PLANNED, TRIAL
from logbook.pages.links import entry_link
from logbook.pieces import Card, Cards, Heading, Items, Line, Link, Muted, Note, Piece, Span, Text, Verdict
from logbook.quantity_display import show_delta, show_value
from logbook.revision import Revision
from logbook.showing.deltas import moved_pieces
from logbook.showing.regressions import regression_pieces
from logbook.showing.targets import missing_words, probability_words, target_words
from logbook.showing.words import difference_unit, doubt_words, revision_link

_EMPTY = "There is no entry yet. Start one in a terminal with: logbook new"


def home_pieces(book: Book) -> list[Piece]:
    """Where the project stands."""
    if not book.entries:
        return [Note(_EMPTY)]
    latest = book.latest
    pieces: list[Piece] = []
    if latest is not None:
        pieces.append(Text(("Built now: revision ", revision_link(latest.label), f", {latest.date}.")))
        pieces += _scorecard(book, latest)
        pieces += _unaccepted(book)
        pieces += _last_change(book, latest)
        pieces.append(Text(Muted(doubt_words(book.settings.coverage))))
    pieces += _ahead(book)
    pieces += _open_items(book)
    pieces += _timeline(book)
    return pieces


def _scorecard(book: Book, latest: Revision) -> list[Piece]:
    found = book.findings.targets_of(latest.label)
    if not found:
        return [Note("No target is set yet: a target block says what the project wants to reach.")]
    return [Heading(2, "Targets"), Cards(tuple(_card(book, latest, verdict) for verdict in found))]


def _card(book: Book, latest: Revision, verdict: TargetVerdict) -> Card:
    target = verdict.target
    figure = "not known" if isnan(verdict.value) else show_value(verdict.value, target.unit, verdict.u)
    words = [f"{target.written}, {verdict.basis}"]
    words += [
        each for each in (probability_words(verdict), missing_words(verdict), _trend(book, latest, target)) if each
    ]
    return Card(target_words(target), figure, Verdict(verdict.verdict, verdict.why), "; ".join(words))


def _trend(book: Book, latest: Revision, target: Target) -> str:
    """How the value has moved since the revision before, when both were had in the same way."""
    now = next((v for v in book.findings.targets_of(latest.label) if v.target.key == target.key), None)
    for ancestor in book.history.ancestors(latest.label):
        then = next((v for v in book.findings.targets_of(ancestor.label) if v.target.key == target.key), None)
        if now is None or then is None or then.basis != now.basis or isnan(then.value) or isnan(now.value):
            continue
        return f"{show_delta(now.value - then.value, difference_unit(target.unit))} since {ancestor.label}"
    return ""


def _unaccepted(book: Book) -> list[Piece]:
    found: list[Piece] = []
    for revision in book.revisions.values():
        keys = {r.key for r in book.findings.regressions_of(revision.label) if not r.accepted}
        if keys:
            found += regression_pieces(book.findings, revision.label, keys)
    return [Heading(2, "Regressions not accepted"), *found] if found else []


def _last_change(book: Book, latest: Revision) -> list[Piece]:
    deltas = book.findings.read_to(latest.label)
    kind = "measured"
    if not deltas:
        deltas = [d for d in book.findings.deltas_to(latest.label) if d.verdict != "same"]
        kind = "predicted, nothing is measured yet"
    if not deltas:
        return []
    title = f"What {latest.label} did, against {latest.comes_from}"
    return [Heading(2, title), *moved_pieces(deltas, kind.capitalize(), chains=len(latest.chains) > 1)]


def _ahead(book: Book) -> list[Piece]:
    """Plans that are not built yet."""
    plans = [r for r in book.revisions.values() if r.state == "planned"]
    lines: list[Line] = [("revision ", revision_link(r.label), f", planned on {r.date}") for r in plans]
    return [Heading(2, "Planned"), Items(tuple(lines))] if lines else []


def _open_items(book: Book) -> list[Piece]:
    titles = {entry.path: entry for entry in book.entries}
    open_ = [t for t in book.findings.todo if t.closed is None]
    if not open_:
        return []
    lines: list[Line] = [(t.what, " ", Muted("since "), *entry_link(titles[t.opened])) for t in open_]
    return [Heading(2, "Open items"), Items(tuple(lines))]


def _timeline(book: Book) -> list[Piece]:
    lines: list[Line] = []
    for entry in reversed(book.entries):
        revision = book.history.of(entry)
        line: list[Span] = [f"{entry.date} ", Link(entry.title, f"entry:{entry.path}")]
        if revision is not None:
            state = f", {revision.state}" if revision.state in (TRIAL, PLANNED) else ""
            line += [" ", Muted("revision "), revision_link(revision.label), Muted(state)]
        lines.append(tuple(line))
    return [Heading(2, "Entries"), Items(tuple(lines))]
