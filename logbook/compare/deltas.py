"""Deltas: measured ones between readings on equal terms, predicted ones between the totals of two chains."""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from math import isnan, sqrt

from logbook.budget import CANCELLED
from logbook.compare.equal import in_rbw, why_not_comparable
from logbook.compare.verdicts import GONE, NEW, NOT_COMPARABLE, NOT_STATED, SAME, Rules, delta_verdict
from logbook.findings import Delta
from logbook.hardware import Chain
from logbook.model import PREDICTED, Parts, Result, result_key
from logbook.prediction import Estimate, Prediction, Terms
from logbook.quantities import Better, known_quantity
from logbook.revision import Revision

ByKey = Mapping[str, Sequence[Result]]


def by_key(results: Iterable[Result]) -> dict[str, list[Result]]:
    """Results by their key, each key's in the order given."""
    found: dict[str, list[Result]] = {}
    for result in results:
        found.setdefault(result.key, []).append(result)
    return found


def best_pair(before: Sequence[Result], after: Sequence[Result]) -> tuple[Result, Result, str]:
    """The pair to compare: on equal terms if there is one, on the same bench if there is one, the latest ones."""
    best: tuple[tuple[bool, bool], Result, Result, str] | None = None
    # From the latest backwards, so that the first pair of the best sort is the one; as a rule it is the very first.
    for new in reversed(after):
        for old in reversed(before):
            why = why_not_comparable(old, new)
            one, other = old.conditions, new.conditions
            rank = (not why, (one.bench, one.bench_from) == (other.bench, other.bench_from))
            if best is None or rank > best[0]:
                best = (rank, old, new, why)
            if all(rank):
                return old, new, why
    assert best is not None
    return best[1:]


def measured_delta(before: Result, after: Result, why: str, rules: Rules, to: str = "", from_: str = "") -> Delta:
    """The difference of two results of one key; levels of noise in the later reading's bandwidth."""
    rbw = after.conditions.rbw_hz
    old, new = in_rbw(before, rbw), after.value
    # Where all that was stated cancels, what is fresh in each reading was not stated at all.
    u = u_of_difference(before.parts, after.parts) or None
    change = new - old
    stated = u is not None
    smallest = rules.smallest(after.quantity, after.unit, old)
    verdict, said = _judge(before, after, old, new, u, smallest, why, rules)
    return Delta(
        key=after.key,
        quantity=after.quantity,
        chain=after.chain,
        at_hz=after.at_hz,
        name=after.name,
        from_=from_ or before.revision,
        to=to or after.revision,
        basis=after.basis,
        before=old,
        after=new,
        delta=float("nan") if verdict == NOT_COMPARABLE else change,
        unit=after.unit,
        u=u,
        verdict=verdict,
        why=said,
        better=after.better,
        stated=stated,
        parts_before=before.parts,
        parts_after=after.parts,
        before_result=before,
        after_result=after,
    )


def _judge(
    before: Result, after: Result, old: float, new: float, u: float | None, smallest: float, why: str, rules: Rules
) -> tuple[str, str]:
    if why:
        return NOT_COMPARABLE, why
    if before.bound or after.bound:
        return _bounded(before, after, old, new, u, smallest, rules)
    verdict = delta_verdict(old, new, u, smallest, after.better, rules.coverage)
    return verdict, "" if u is not None else NOT_STATED


def _bounded(
    before: Result, after: Result, old: float, new: float, u: float | None, smallest: float, rules: Rules
) -> tuple[str, str]:
    """A change that the bounds can only make larger still counts; anything else cannot be told."""
    falls = after.bound in ("", "upper") and before.bound in ("", "lower")
    rises = after.bound in ("", "lower") and before.bound in ("", "upper")
    verdict = delta_verdict(old, new, u, smallest, after.better, rules.coverage)
    if verdict != SAME and (falls if new < old else rises):
        return verdict, f"at least: the {'later' if after.bound else 'earlier'} reading is only a bound"
    silent = after if after.bound else before
    if silent.bound == "lower":
        words = f"{silent.revision} is only known to be at least so much; read it again over a wider range"
        return NOT_COMPARABLE, words
    words = f"{silent.revision} is only known to be at most so high: it stands within 1 dB of its bench's own noise"
    return NOT_COMPARABLE, words + "; read it again behind less loss or with a quieter instrument"


def u_of_difference(before: Parts | None, after: Parts | None) -> float | None:
    """u of after - before: None where neither states any, zero where all that was stated cancels."""
    if not before and not after:
        return None
    old, new = before or {}, after or {}
    squares = scale = 0.0
    for source, part in new.items():
        other = old.get(source, 0.0)
        squares += (part - other) ** 2
        scale += part * part
    for source, part in old.items():
        scale += part * part
        if source not in new:
            squares += part * part
    return 0.0 if squares <= CANCELLED**2 * scale else sqrt(squares)


def measured_deltas(
    own: ByKey, ancestors: Sequence[tuple[str, ByKey]], label: str, rules: Rules, touched: Collection[str] | None = None
) -> list[Delta]:
    """A revision's measured results against the nearest ancestor that has each; new ones, and ones not read again.

    What was not read again counts only on the chains that the revision touched; None: on all.
    """
    found: list[Delta] = []
    for key, results in own.items():
        old = next((results_of[key] for _, results_of in ancestors if key in results_of), None)
        if old is not None:
            before, after, why = best_pair(old, results)
            found.append(measured_delta(before, after, why, rules, to=label))
        elif ancestors:
            found.append(_one_sided(results[-1], label, ancestors[0][0], NEW))
    if own and ancestors:
        parent, results_of = ancestors[0]
        lost = [old[-1] for key, old in results_of.items() if key not in own]
        found += [_one_sided(r, label, parent, GONE) for r in lost if touched is None or r.chain in touched]
    return found


def _one_sided(result: Result, label: str, parent: str, verdict: str) -> Delta:
    nan = float("nan")
    new = verdict == NEW
    why = f"not read on {parent}" if new else f"not read on {label} yet"
    return Delta(
        key=result.key,
        quantity=result.quantity,
        chain=result.chain,
        at_hz=result.at_hz,
        name=result.name,
        from_=parent,
        to=label,
        basis=result.basis,
        before=nan if new else result.value,
        after=result.value if new else nan,
        delta=nan,
        unit=result.unit,
        u=None,
        verdict=verdict,
        why=why,
        better=result.better,
        before_result=None if new else result,
        after_result=result if new else None,
    )


def predicted_deltas(before: Prediction, after: Prediction, from_: str, to: str, rules: Rules) -> list[Delta]:
    """Every total of a chain against the same total of another; what both owe to one tolerance cancels."""
    found = []
    for name in dict.fromkeys([*after.totals, *before.totals]):
        old, new = before.totals.get(name), after.totals.get(name)
        delta = _predicted(name, after.chain.name, old, new, from_, to, rules)
        if delta is not None:
            found.append(delta)
    return found


def chain_deltas(
    revision: Revision, parent: Revision | None, predict: Callable[[Chain, Terms], Prediction], rules: Rules
) -> list[Delta]:
    """The predicted deltas of every chain that a revision has in common with its parent."""
    if parent is None:
        return []
    found: list[Delta] = []
    for name, chain in revision.chains.items():
        before = parent.chains.get(name)
        if before is not None:
            old, new = predict(before, Terms()), predict(chain, Terms())
            found += predicted_deltas(old, new, parent.label, revision.label, rules)
    return found


def _predicted(
    name: str, chain: str, old: Estimate | None, new: Estimate | None, from_: str, to: str, rules: Rules
) -> Delta | None:
    nan = float("nan")
    one, other = (nan if each is None else each.value for each in (old, new))
    if isnan(one) and isnan(other):
        return None
    known = known_quantity(name)
    better: Better = known.better if known else "neither"
    unit = (new or old).unit  # type: ignore[union-attr]
    old_parts, new_parts = (None if each is None else each.parts for each in (old, new))
    u = u_of_difference(old_parts, new_parts)
    if u == 0.0 and abs(other - one) > CANCELLED * abs(one):
        # All that was stated is common to both: of what makes the difference nothing was stated.
        u = None
    if isnan(one):
        verdict, why = NEW, f"not known on {from_}: {old.words if old else 'not asked for'}"
    elif isnan(other):
        verdict, why = GONE, f"not known on {to}: {new.words if new else 'not asked for'}"
    else:
        verdict = delta_verdict(one, other, u, rules.smallest(name, unit, one), better, rules.coverage)
        why = "" if u is not None else NOT_STATED
    return Delta(
        key=result_key(chain, name),
        quantity=name,
        chain=chain,
        at_hz=None,
        name="",
        from_=from_,
        to=to,
        basis=PREDICTED,
        before=one,
        after=other,
        delta=other - one,
        unit=unit,
        u=u,
        verdict=verdict,
        why=why,
        better=better,
        stated=u is not None,
        parts_before=old_parts,
        parts_after=new_parts,
    )
