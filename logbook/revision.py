"""A revision: a labelled state of the hardware, and what led to it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from logbook.hardware import Chain, Step
from logbook.model import BUILT


@dataclass(frozen=True, slots=True)
class Alternative:
    """One of several ways that a plan could go: its own steps and what its parts cost."""

    name: str
    chain: str
    chains: Mapping[str, Chain]
    steps: tuple[Step, ...]
    cost: float | None = None
    currency: str = ""


@dataclass(frozen=True, slots=True)
class Made:
    """What was done to one chain. `full`: the chain was written out in full."""

    steps: tuple[Step, ...] = ()
    why: str = ""
    full: bool = False
    as_planned: bool = False
    entry: str = ""
    line: int = 1


@dataclass(slots=True)
class Revision:
    """A revision of the hardware. `planned` is the plan of the same label, when it was planned before it was built."""

    label: str
    comes_from: str | None
    state: str
    date: str
    entry: str
    chains: dict[str, Chain] = field(default_factory=dict)
    made: dict[str, Made] = field(default_factory=dict)
    planned: Revision | None = None
    alternatives: list[Alternative] = field(default_factory=list)
    entries: list[str] = field(default_factory=list)
    broken: set[str] = field(default_factory=set)

    @property
    def built(self) -> bool:
        """Whether this is a state of the hardware that later ones inherit."""
        return self.state == BUILT
