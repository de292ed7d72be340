"""Targets against revisions: by what was measured on each, else by what is predicted for it."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from math import hypot, isnan

from logbook.compare.equal import in_rbw
from logbook.compare.verdicts import MEETS, MISSES, NOT_STATED, UNDECIDED, Rules, target_verdict
from logbook.findings import Target, TargetVerdict
from logbook.hardware import Chain
from logbook.model import MEASURED, PLANNED, PREDICTED, Result, standard_uncertainty
from logbook.physics.uncertainty import conformity, linear_sum
from logbook.prediction import Estimate, Prediction, Terms
from logbook.quantities import known_quantity
from logbook.revision import Revision

Predict = Callable[[Chain, Terms], Prediction]


@dataclass(frozen=True, slots=True)
class _Value:
    """What a target is held against."""

    basis: str
    value: float
    u: float | None
    words: str = ""
    bound: str = ""


def fits(target: Target, result: Result, signal_hz: float | None) -> bool:
    """Whether a result is the one that a target speaks of; no frequency means the chain's own signal."""
    if (target.chain, target.quantity, target.name) != (result.chain, result.quantity, result.name):
        return False
    wanted = target.at_hz if target.at_hz is not None else signal_hz
    found = result.at_hz if result.at_hz is not None else signal_hz
    return wanted == found or (target.at_hz is None and signal_hz is None)


def judge_target(
    target: Target,
    revision: Revision,
    results: Sequence[Result],
    parent: TargetVerdict | None,
    predict: Predict,
    parent_chains: Mapping[str, Chain],
    rules: Rules,
) -> TargetVerdict:
    """One target against one revision.

    `results` are its own, in order: what the blocks of its plan predict, then what was measured.
    """
    chain = revision.chains.get(target.chain)
    signal = chain.signal_hz if chain is not None else None
    own = [result for result in results if fits(target, result, signal)]
    found = _measured(target, own[-1]) if own else _predicted(target, chain, predict)
    probability = None if isnan(found.value) else conformity(found.value, found.u, target.low, target.high)
    verdict = target_verdict(found.value, probability, target.low, target.high)
    why = found.words
    if found.bound and not _settled(found.bound, verdict, target):
        verdict, why, probability = UNDECIDED, f"only {_BOUNDS[found.bound]} bound is known", None
    elif probability is None and not why:
        why = NOT_STATED
    gap = gap_of(target, found.value)
    closes = None
    if revision.state == PLANNED and parent is not None:
        closes = _closes(target, chain, parent_chains.get(target.chain), parent, predict)
        if own and parent.gap > 0 and not isnan(gap):
            closes = 1 - gap / parent.gap
    return TargetVerdict(
        target, revision.label, found.basis, found.value, found.u, probability, verdict, why, gap, closes
    )


_BOUNDS = {"upper": "an upper", "lower": "a lower"}


def _settled(bound: str, verdict: str, target: Target) -> bool:
    """Whether a verdict on a bound holds for whatever lies beyond the bound."""
    open_below, open_above = target.low is None, target.high is None
    if verdict == MEETS:
        return open_below if bound == "upper" else open_above
    return verdict == MISSES and (open_above if bound == "upper" else open_below)


def _measured(target: Target, result: Result) -> _Value:
    value = in_rbw(result, target.rbw_hz)
    words = result.words
    known = known_quantity(target.quantity)
    if known is not None and known.noise and result.conditions.averaging == "peak":
        return _Value(MEASURED, float("nan"), None, "a peak reading says nothing of the noise power")
    return _Value(result.basis, value, result.u, words, result.bound)


def _predicted(target: Target, chain: Chain | None, predict: Predict) -> _Value:
    nan = float("nan")
    if chain is None:
        return _Value(PREDICTED, nan, None, "not measured, and there is no chain to predict it from")
    estimate = predict(chain, target.terms).totals.get(target.quantity)
    if estimate is None or target.name:
        return _Value(PREDICTED, nan, None, "not measured yet")
    words = f"not known: {estimate.words}" if isnan(estimate.value) else ""
    return _Value(PREDICTED, estimate.value, standard_uncertainty(estimate.parts), words)


def gap_of(target: Target, value: float) -> float:
    """How much is missing to the limit: positive when missed, negative or zero when met; nan when not known."""
    over = [] if target.high is None else [value - target.high]
    under = [] if target.low is None else [target.low - value]
    return max([*over, *under]) if over or under else float("nan")


def _closes(
    target: Target, chain: Chain | None, parent: Chain | None, before: TargetVerdict, predict: Predict
) -> float | None:
    """The part of the parent's remaining gap that a plan is expected to close; None where nothing is missing."""
    if chain is None or parent is None or isnan(before.gap) or before.gap <= 0:
        return None
    terms = target.terms
    old, new = (predict(each, terms).totals.get(target.quantity) for each in (parent, chain))
    if old is None or new is None or isnan(old.value) or isnan(new.value):
        return None
    return 1 - gap_of(target, before.value + new.value - old.value) / before.gap


@dataclass(frozen=True, slots=True)
class Weighed:
    """One alternative of a plan against one target that its parent does not meet."""

    name: str
    target: Target
    value: float
    u: float | None
    closes: float | None
    verdict: str
    cost: float | None
    currency: str


def _expected_u(before: TargetVerdict, old: Estimate, new: Estimate) -> float | None:
    """u of what is expected: of the new prediction alone where nothing was measured, else of reading and change."""
    if before.basis == PREDICTED:
        return new.u
    parts = linear_sum([(1.0, new.parts), (-1.0, old.parts)])
    spread = [u for u in (before.u, standard_uncertainty(parts)) if u is not None]
    return hypot(*spread) if spread else None


def weigh(revision: Revision, parent: Revision, before: TargetVerdict, predict: Predict) -> list[Weighed]:
    """The plan and its alternatives against one target, best first: by part of the gap closed, then by cost.

    The expected value is what the parent has, measured where it was, plus the predicted change.
    """
    target = before.target
    old = parent.chains.get(target.chain)
    ways: list[tuple[str, Chain | None, float | None, str]] = []
    if any(made.steps for made in revision.made.values()):
        ways.append(("as planned", revision.chains.get(target.chain), None, ""))
    ways += [(each.name, each.chains.get(target.chain), each.cost, each.currency) for each in revision.alternatives]
    terms = target.terms
    found = []
    for name, chain, cost, currency in ways:
        if chain is None or old is None:
            continue
        one, other = (predict(each, terms).totals.get(target.quantity) for each in (old, chain))
        if one is None or other is None or isnan(one.value) or isnan(other.value):
            continue
        u = _expected_u(before, one, other)
        value = before.value + other.value - one.value
        verdict = target_verdict(value, conformity(value, u, target.low, target.high), target.low, target.high)
        closes = 1 - gap_of(target, value) / before.gap if before.gap > 0 else None
        found.append(Weighed(name, target, value, u, closes, verdict, cost, currency))
    return sorted(found, key=lambda w: (-(w.closes or 0.0), w.cost if w.cost is not None else float("inf")))
