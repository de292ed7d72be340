"""Where the doubt of a difference comes from, source by source."""

from __future__ import annotations

from dataclasses import dataclass

from logbook.model import Parts, Source


@dataclass(frozen=True, slots=True)
class BudgetRow:
    """One source's share in a comparison's doubt: its own u there, and how much of it enters the difference.

    `cancelled`: both sides share the source in full, and it drops out.
    """

    source: Source
    u: float
    sensitivity: float
    cancelled: bool

    @property
    def contribution(self) -> float:
        """What the source adds to the doubt of the difference."""
        return abs(self.u * self.sensitivity)


# What is left of a difference by rounding alone, relative to what cancelled.
CANCELLED = 1e-9


def budget(before: Parts | None, after: Parts | None) -> tuple[BudgetRow, ...]:
    """Each source's share in the doubt of a difference, largest first; a source on both sides cancels."""
    rows = []
    old, new = before or {}, after or {}
    for source in dict.fromkeys([*new, *old]):
        one, other = old.get(source, 0.0), new.get(source, 0.0)
        size = max(abs(one), abs(other))
        if size == 0.0:
            continue
        left = (other - one) / size
        cancelled = source in old and source in new and abs(left) <= CANCELLED
        rows.append(BudgetRow(source, size, 0.0 if cancelled else left, cancelled))
    return tuple(sorted(rows, key=lambda row: (row.cancelled, -row.contribution)))
