"""Costs: by revision and in all, each currency by itself, and what measured improvement cost."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from logbook.compare.verdicts import BETTER
from logbook.findings import Delta, Findings, Part
from logbook.quantities import DECIBELS


@dataclass(frozen=True, slots=True)
class PriceOfImprovement:
    """What a revision's parts cost for each decibel of one measured improvement."""

    delta: Delta
    cost: float
    currency: str

    @property
    def per_db(self) -> float:
        """Cost of each decibel."""
        return self.cost / abs(self.delta.delta)


def cost_by_currency(parts: Iterable[Part]) -> dict[str, float]:
    """The sum of prices by currency, in the order in which the currencies come up."""
    found: dict[str, float] = {}
    for part in parts:
        found[part.currency] = found.get(part.currency, 0.0) + part.cost
    return found


def spent_on(findings: Findings, revision: str) -> list[Part]:
    """What was spent on a revision: parts of its plan do not count."""
    return [part for part in findings.parts if part.revision == revision and not part.planned]


def prices_of_improvement(findings: Findings, revision: str) -> list[PriceOfImprovement]:
    """Every measured improvement beyond doubt, in decibels, of a revision with parts; parts of one chain count for it.

    Each improvement is set against the whole of what was spent: parts are not divided among results.
    """
    spent = spent_on(findings, revision)
    found = []
    for delta in findings.read_to(revision):
        if delta.verdict != BETTER or delta.unit not in DECIBELS or not delta.delta:
            continue
        costs = cost_by_currency(part for part in spent if part.chain in ("", delta.chain))
        found += [PriceOfImprovement(delta, cost, currency) for currency, cost in costs.items() if cost > 0]
    return found
