"""All findings of a book: deltas, agreement, targets, regressions, spreads and open items."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from logbook.book.history import History
from logbook.compare.agreement import agreement
from logbook.compare.deltas import by_key, chain_deltas, measured_deltas
from logbook.compare.regressions import regressions, spreads
from logbook.compare.targets import judge_target
from logbook.compare.verdicts import Rules
from logbook.findings import Agreement, Delta, Findings, TargetVerdict, Todo
from logbook.hardware import Chain
from logbook.model import PLANNED, PREDICTED, Result
from logbook.prediction import Prediction, Terms
from logbook.problems import Problems, did_you_mean
from logbook.revision import Revision

Predict = Callable[[Chain, Terms], Prediction]

# Revision -> key -> results in order.
Results = dict[str, dict[str, list[Result]]]


def compare_all(
    history: History, results: Sequence[Result], predict: Predict, rules: Rules, problems: Problems
) -> Findings:
    """Compare everything with everything that it may be compared with."""
    measured = [r for r in results if r.basis != PREDICTED]
    of: dict[str, list[Result]] = {label: [] for label in history.revisions}
    for result in measured:
        of.setdefault(result.revision, []).append(result)
    own = {label: by_key(found) for label, found in of.items()}
    planned = _planned(history, results)
    findings = Findings(
        todo=_todo(history, problems),
        parts=history.parts,
        make_agreement=lambda: _agreement(measured, history, predict, rules),
        make_predicted=lambda label: _predicted(history, label, predict, rules),
        make_spreads=lambda: [spread for label in history.revisions for spread in spreads(own[label], rules)],
    )
    for label, revision in history.revisions.items():
        findings.read[label] = _read(revision, history, own, planned, rules)
    findings.targets = _targets(history, own, planned, predict, rules)
    findings.regressions = regressions(
        [delta for found in findings.read.values() for delta in found],
        {label: findings.targets_of(label) for label in history.revisions},
        {label: [a.label for a in history.ancestors(label)] for label, r in history.revisions.items() if r.built},
        history.accepts,
        problems,
    )
    return findings


def _planned(history: History, results: Sequence[Result]) -> Results:
    """What the blocks of a plan predict by revision and key, beside the totals of its chains."""
    found: dict[str, list[Result]] = {label: [] for label in history.revisions}
    for result in results:
        if result.basis == PREDICTED and result.block not in ("chain", "change"):
            found.setdefault(result.revision, []).append(result)
    return {label: by_key(each) for label, each in found.items()}


def _agreement(measured: Sequence[Result], history: History, predict: Predict, rules: Rules) -> list[Agreement]:
    """Every measured result that has a prediction, against it."""
    found = []
    for result in measured:
        chain = _chain_of(result, history)
        if chain is not None:
            found.append(agreement(result, chain, predict, rules))
    return [each for each in found if each is not None]


def _chain_of(result: Result, history: History) -> Chain | None:
    revision = history.revisions.get(result.revision)
    return None if revision is None else revision.chains.get(result.chain)


def _predicted(history: History, label: str, predict: Predict, rules: Rules) -> list[Delta]:
    """What the totals of a revision's chains are predicted to change against its parent."""
    ancestors = history.ancestors(label)
    return chain_deltas(history.revisions[label], ancestors[0], predict, rules) if ancestors else []


def _read(revision: Revision, history: History, own: Results, planned: Results, rules: Rules) -> list[Delta]:
    """What the results of a revision's blocks changed against its ancestors'."""
    ancestors = history.ancestors(revision.label)
    if not ancestors:
        return []
    lines = [(each.label, own[each.label]) for each in ancestors]
    if revision.state == PLANNED:
        return measured_deltas(planned[revision.label], lines, revision.label, rules, ())
    return measured_deltas(own[revision.label], lines, revision.label, rules, set(revision.made))


def _targets(history: History, own: Results, planned: Results, predict: Predict, rules: Rules) -> list[TargetVerdict]:
    found: list[TargetVerdict] = []
    by_revision: dict[tuple[str, str], TargetVerdict] = {}
    flat, said = (
        {label: [r for each in keys.values() for r in each] for label, keys in by_revision_and_key.items()}
        for by_revision_and_key in (own, planned)
    )
    for label, revision in history.revisions.items():
        ancestors = history.ancestors(label)
        parent = ancestors[0] if ancestors else None
        for target in history.targets.values():
            before = by_revision.get((parent.label, target.key)) if parent is not None else None
            chains = parent.chains if parent is not None else {}
            verdict = judge_target(target, revision, [*said[label], *flat[label]], before, predict, chains, rules)
            by_revision[(label, target.key)] = verdict
            found.append(verdict)
    return found


def _todo(history: History, problems: Problems) -> list[Todo]:
    items: dict[str, Todo] = {}
    for entry, words in history.todo:
        for name, what, place in words.opens:
            if name in items:
                message = f"An item '{name}' was opened already in {items[name].opened}."
                problems.add(place, "duplicate-item", message, "Give the new item an id of its own.")
                continue
            items[name] = Todo(name, what, entry.path, place)
        for name, place in words.closes:
            known = items.get(name)
            if known is None:
                message = f"No item '{name}' was opened up to {entry.date}."
                problems.add(place, "unknown-item", message, did_you_mean(name, items), about=name)
            elif known.closed is not None:
                problems.add(place, "closed-twice", f"Item '{name}' was closed already in {known.closed}.")
            else:
                items[name] = Todo(name, known.what, known.opened, known.place, entry.path)
    return list(items.values())
