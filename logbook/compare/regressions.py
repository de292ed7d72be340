"""Regressions, and which of them are accepted; repeated readings that spread beyond their doubt."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations
from math import inf, sqrt

from logbook.compare.deltas import u_of_difference
from logbook.compare.equal import in_rbw, why_not_comparable
from logbook.compare.verdicts import MEETS, MISSES, WORSE, Rules
from logbook.findings import Accept, Delta, Regression, Spread, TargetVerdict
from logbook.model import PREDICTED, Result
from logbook.problems import ANY_FAULT, Problems, did_you_mean


def regressions(
    deltas: Iterable[Delta],
    targets: Mapping[str, Sequence[TargetVerdict]],
    lines: Mapping[str, Sequence[str]],
    accepts: Sequence[Accept],
    problems: Problems,
) -> list[Regression]:
    """What got worse: measured deltas beyond doubt, targets met before and missed now, each with its acceptance.

    `targets` are the verdicts by revision, `lines` each built revision's ancestors, nearest first.
    """
    found = [
        _Found(d.key, d.quantity, d.chain, d.at_hz, d.from_, d.to, "delta", d.delta, d.unit)
        for d in deltas
        if d.verdict == WORSE and d.basis != PREDICTED and d.to in lines
    ]
    for label, ancestors in lines.items():
        found += _targets_lost(label, ancestors, targets)
    used: set[int] = set()
    done = [_with_acceptance(each, accepts, used) for each in found]
    for index, accept in enumerate(accepts):
        if index not in used:
            _accepts_nothing(accept, found, problems)
    return done


@dataclass(frozen=True, slots=True)
class _Found:
    """A regression before it is known whether it is accepted."""

    key: str
    quantity: str
    chain: str
    at_hz: float | None
    from_: str
    to: str
    kind: str
    delta: float | None
    unit: str


def _targets_lost(label: str, ancestors: Sequence[str], targets: Mapping[str, Sequence[TargetVerdict]]) -> list[_Found]:
    """Targets that the nearest ancestor with a measured verdict met, and that this revision is measured to miss."""
    found = []
    for now in targets.get(label, ()):
        if now.verdict != MISSES or now.basis == PREDICTED:
            continue
        before = _last_measured(now.target.key, ancestors, targets)
        if before is not None and before.verdict == MEETS:
            t = now.target
            change = now.value - before.value
            found.append(_Found(t.key, t.quantity, t.chain, t.at_hz, before.revision, label, "target", change, t.unit))
    return found


def _last_measured(
    key: str, ancestors: Sequence[str], targets: Mapping[str, Sequence[TargetVerdict]]
) -> TargetVerdict | None:
    for label in ancestors:
        for verdict in targets.get(label, ()):
            if verdict.target.key == key and verdict.basis != PREDICTED:
                return verdict
    return None


def _covers(accept: Accept, found: _Found) -> bool:
    same = accept.revision == found.to and accept.quantity == found.quantity
    same = same and accept.chain in (None, found.chain) and accept.name in (None, found.key.partition("#")[2])
    return same and (accept.at_hz is None or accept.at_hz == found.at_hz)


def _with_acceptance(found: _Found, accepts: Sequence[Accept], used: set[int]) -> Regression:
    covering = [index for index, accept in enumerate(accepts) if _covers(accept, found)]
    used.update(covering)
    why = accepts[covering[0]].why if covering else ""
    return Regression(found.key, found.from_, found.to, found.kind, found.delta, found.unit, bool(covering), why)


def _accepts_nothing(accept: Accept, found: Sequence[_Found], problems: Problems) -> None:
    there = sorted({each.quantity for each in found if each.to == accept.revision})
    message = f"'{accept.quantity}' is accepted, and revision {accept.revision} has no such regression."
    hint = did_you_mean(accept.quantity, there) if there else f"Revision {accept.revision} has no regression at all."
    problems.add(accept.place, "accepts-nothing", message, hint, about=ANY_FAULT)


def spreads(results: Mapping[str, Sequence[Result]], rules: Rules) -> list[Spread]:
    """Readings of one key on one revision that differ by more than their doubt allows: the worst pair of each key."""
    worst = (_worst_pair(repeated, rules) for repeated in results.values() if len(repeated) > 1)
    return [spread for spread in worst if spread is not None]


def _worst_pair(repeated: Sequence[Result], rules: Rules) -> Spread | None:
    """The two readings whose difference is largest against its doubt; None where all agree within theirs.

    What is fresh in two readings never cancels, so no difference is larger against its doubt than against that part:
    pairs are looked at in that order, and once one is worse than the next can be, the rest need no look.
    """
    found: Spread | None = None
    worst = rules.coverage
    for most, i, j in _by_fresh_doubt(repeated, rules):
        if most <= worst:
            break
        first, second = repeated[i], repeated[j]
        before = in_rbw(first, second.conditions.rbw_hz)
        change = second.value - before
        if abs(change) < rules.smallest(second.quantity, second.unit, before) or first.bound or second.bound:
            continue
        u = u_of_difference(first.parts, second.parts)
        if u and abs(change) > worst * u and not why_not_comparable(first, second):
            worst = abs(change) / u
            found = Spread(second.key, second.revision, first, second, change, u, second.unit)
    return found


def _by_fresh_doubt(repeated: Sequence[Result], rules: Rules) -> list[tuple[float, int, int]]:
    """Pairs that may differ beyond doubt, the largest difference over fresh doubt first: (their ratio, indices)."""
    rbw = next((r.conditions.rbw_hz for r in repeated if r.conditions.rbw_hz is not None), None)
    value = [in_rbw(result, rbw) for result in repeated]
    fresh = [sum(p * p for s, p in (r.parts or {}).items() if s.sort == "fresh") for r in repeated]
    found = []
    for i, j in combinations(range(len(repeated)), 2):
        apart, doubt = abs(value[j] - value[i]), sqrt(fresh[i] + fresh[j])
        if apart > rules.coverage * doubt:
            # Without fresh doubt nothing says how large it may become, and the pair is looked at first.
            found.append((apart / doubt if doubt else inf, i, j))
    return sorted(found, key=lambda pair: -pair[0])
