"""What comparing says: deltas, agreement with the prediction, targets, regressions, open items."""

from __future__ import annotations

from dataclasses import dataclass, field

from logbook.model import Conditions, Result, Source
from logbook.prediction import Terms
from logbook.problems import Place
from logbook.quantities import Better


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


@dataclass(frozen=True, slots=True)
class Delta:
    """The difference of two results with the same key. nan where not known; `why` says it in words."""

    key: str
    quantity: str
    chain: str
    at_hz: float | None
    name: str
    from_: str
    to: str
    basis: str
    before: float
    after: float
    delta: float
    unit: str
    u: float | None
    verdict: str
    why: str
    better: Better
    stated: bool = True
    budget: tuple[BudgetRow, ...] = ()
    before_result: Result | None = None
    after_result: Result | None = None


@dataclass(frozen=True, slots=True)
class Share:
    """Where a difference could come from: a source's share of the prediction's variance and its most likely shift."""

    source: Source
    share: float
    shift: float
    unit: str


@dataclass(frozen=True, slots=True)
class Agreement:
    """Measurement against the prediction for the reading's own conditions."""

    key: str
    revision: str
    result: Result
    measured: float
    predicted: float
    u_measured: float | None
    u_predicted: float | None
    unit: str
    en: float
    verdict: str
    why: str = ""
    shares: tuple[Share, ...] = ()


@dataclass(frozen=True, slots=True)
class Target:
    """A limit that the project wants a result to meet."""

    chain: str
    quantity: str
    at_hz: float | None
    name: str
    rbw_hz: float | None
    low: float | None
    high: float | None
    unit: str
    written: str
    why: str
    entry: str
    place: Place
    key: str
    source_temperature_k: float | None = None

    @property
    def terms(self) -> Terms:
        """What a prediction must be made for to be held against this target."""
        return Terms(self.at_hz, self.rbw_hz, self.source_temperature_k)


@dataclass(frozen=True, slots=True)
class TargetVerdict:
    """A target against one revision."""

    target: Target
    revision: str
    basis: str
    value: float
    u: float | None
    probability: float | None
    verdict: str
    why: str = ""
    gap: float = float("nan")
    closes: float | None = None


@dataclass(frozen=True, slots=True)
class Regression:
    """Something that got worse: a delta beyond doubt, or a target met before and missed now."""

    key: str
    from_: str
    to: str
    kind: str
    delta: float | None
    unit: str
    accepted: bool
    why: str


@dataclass(frozen=True, slots=True)
class Accept:
    """A known regression of a revision that is accepted, with the reason."""

    quantity: str
    chain: str | None
    at_hz: float | None
    why: str
    entry: str
    revision: str
    place: Place


@dataclass(frozen=True, slots=True)
class Todo:
    """An open item: where it was opened, and closed."""

    id: str
    what: str
    opened: str
    place: Place
    closed: str | None = None


@dataclass(frozen=True, slots=True)
class TodoWords:
    """What one todo block says: items opened and ids closed."""

    opens: tuple[tuple[str, str, Place], ...] = ()
    closes: tuple[tuple[str, Place], ...] = ()


@dataclass(slots=True)
class Findings:
    """All that comparing found, in the order of the entries."""

    deltas: list[Delta] = field(default_factory=list)
    agreement: list[Agreement] = field(default_factory=list)
    targets: list[TargetVerdict] = field(default_factory=list)
    regressions: list[Regression] = field(default_factory=list)
    todo: list[Todo] = field(default_factory=list)
    spreads: list[Spread] = field(default_factory=list)

    def deltas_to(self, revision: str, *, basis: str | None = None) -> list[Delta]:
        """The deltas of a revision against its ancestors."""
        return [d for d in self.deltas if d.to == revision and (basis is None or d.basis == basis)]

    def regressions_of(self, revision: str) -> list[Regression]:
        """The regressions of a revision."""
        return [r for r in self.regressions if r.to == revision]

    def targets_of(self, revision: str) -> list[TargetVerdict]:
        """The targets against a revision."""
        return [t for t in self.targets if t.revision == revision]


@dataclass(frozen=True, slots=True)
class Spread:
    """Repeated readings of one revision that differ by more than their stated doubt."""

    key: str
    revision: str
    first: Result
    second: Result
    difference: float
    u: float
    unit: str


__all__ = [
    "Accept",
    "Agreement",
    "BudgetRow",
    "Conditions",
    "Delta",
    "Findings",
    "Regression",
    "Share",
    "Spread",
    "Target",
    "TargetVerdict",
    "Todo",
    "TodoWords",
]
