"""What comparing says: deltas, agreement with the prediction, targets, regressions, open items."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from functools import cached_property

from logbook.budget import BudgetRow, budget
from logbook.model import PREDICTED, Parts, Result, Source
from logbook.prediction import Terms
from logbook.problems import Place
from logbook.quantities import Better


@dataclass(frozen=True)
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
    parts_before: Parts | None = None
    parts_after: Parts | None = None
    before_result: Result | None = None
    after_result: Result | None = None

    @cached_property
    def budget(self) -> tuple[BudgetRow, ...]:
        """Where the doubt of the difference comes from; made when it is asked for, since few are looked at."""
        return budget(self.parts_before, self.parts_after)


@dataclass(frozen=True, slots=True)
class Share:
    """Where a difference could come from: a source's share of the prediction's variance and its most likely shift."""

    source: Source
    share: float
    shift: float
    unit: str


@dataclass(frozen=True)
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
    why: str
    explain: Callable[[], tuple[Share, ...]]

    @cached_property
    def shares(self) -> tuple[Share, ...]:
        """Where the difference could come from; made when it is asked for."""
        return self.explain()


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
    """A known regression of a revision that is accepted, with the reason; a `name` of None stands for every name."""

    quantity: str
    chain: str | None
    at_hz: float | None
    why: str
    entry: str
    revision: str
    place: Place
    name: str | None = None


@dataclass(frozen=True, slots=True)
class Part:
    """An item that was bought for a revision, or is planned to be; `price` of one, in its currency."""

    item: str
    count: int
    price: float
    currency: str
    chain: str
    revision: str
    planned: bool
    entry: str
    place: Place

    @property
    def cost(self) -> float:
        """Price of one times how many."""
        return self.count * self.price


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


@dataclass
class Findings:
    """All that comparing found, in the order of the entries; what only pages and files show is made when asked for."""

    read: dict[str, list[Delta]] = field(default_factory=dict)
    targets: list[TargetVerdict] = field(default_factory=list)
    regressions: list[Regression] = field(default_factory=list)
    todo: list[Todo] = field(default_factory=list)
    parts: list[Part] = field(default_factory=list)
    make_predicted: Callable[[str], list[Delta]] = lambda label: []
    make_agreement: Callable[[], list[Agreement]] = list
    make_spreads: Callable[[], list[Spread]] = list
    _predicted: dict[str, list[Delta]] = field(default_factory=dict)

    @cached_property
    def agreement(self) -> list[Agreement]:
        """Measured results against their predictions."""
        return self.make_agreement()

    @cached_property
    def compared_in(self) -> dict[str, set[str]]:
        """The keys of the results that were compared, by the entry that holds the later side."""
        found: dict[str, set[str]] = {}
        for delta in (d for deltas in self.read.values() for d in deltas):
            if delta.after_result is not None:
                found.setdefault(delta.after_result.entry, set()).add(delta.key)
        return found

    @cached_property
    def agreement_by_result(self) -> dict[int, Agreement]:
        """The same by the identity of the measured result."""
        return {id(found.result): found for found in self.agreement}

    @cached_property
    def spreads(self) -> list[Spread]:
        """Repeated readings that differ by more than their doubt."""
        return self.make_spreads()

    @cached_property
    def deltas(self) -> list[Delta]:
        """All deltas by revision: the totals of its chains, then the results of its blocks."""
        return [delta for label in self.read for delta in self.deltas_to(label)]

    def deltas_to(self, revision: str) -> list[Delta]:
        """The deltas of a revision against its ancestors."""
        return [*self.predicted_to(revision), *self.read.get(revision, ())]

    def predicted_to(self, revision: str) -> list[Delta]:
        """The deltas of the totals of a revision's chains."""
        if revision not in self._predicted:
            self._predicted[revision] = self.make_predicted(revision)
        return self._predicted[revision]

    def read_to(self, revision: str) -> list[Delta]:
        """The deltas of what was read on a revision, or derived from it."""
        return [d for d in self.read.get(revision, ()) if d.basis != PREDICTED]

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
