"""The words of judgement, and when each is due."""

from __future__ import annotations

from dataclasses import dataclass
from math import isnan

from logbook.quantities import Better, smallest_change

BETTER, WORSE, SAME, CHANGED = "better", "worse", "same", "changed"
NOT_COMPARABLE, NEW, GONE = "not comparable", "new", "gone"
MEETS, MISSES, UNDECIDED = "meets", "misses", "undecided"
AGREES, DISAGREES = "agrees", "disagrees"

NOT_STATED = "doubt not stated"

# JCGM 106:2012 leaves the probability to the user; the logbook's contract sets it.
MEETS_FROM, MISSES_UP_TO = 0.95, 0.05


@dataclass(frozen=True, slots=True)
class Rules:
    """What verdicts rest on: the coverage factor k, and the smallest changes that matter where the user set them."""

    coverage: float = 2.0
    matters: dict[str, float] | None = None

    def smallest(self, quantity: str, unit: str, before: float) -> float:
        """The smallest change of a quantity that matters, in its unit."""
        return smallest_change(quantity, unit, before, self.matters)


def delta_verdict(before: float, after: float, u: float | None, smallest: float, better: Better, k: float) -> str:
    """The verdict on a change: beyond k times its doubt and not below what matters, else `same`."""
    if isnan(before) or isnan(after):
        return NOT_COMPARABLE
    change = abs(after) - abs(before) if better == "towards zero" else after - before
    if abs(change) <= k * (u or 0.0) or abs(change) < smallest:
        return SAME
    if better == "neither":
        return CHANGED
    gained = change > 0 if better == "higher" else change < 0
    return BETTER if gained else WORSE


def target_verdict(value: float, probability: float | None, low: float | None, high: float | None) -> str:
    """The verdict on a target by the probability of conformity; by the value alone where no doubt is stated."""
    if isnan(value):
        return UNDECIDED
    if probability is None:
        met = (low is None or value >= low) and (high is None or value <= high)
        return MEETS if met else MISSES
    if probability >= MEETS_FROM:
        return MEETS
    return MISSES if probability <= MISSES_UP_TO else UNDECIDED
