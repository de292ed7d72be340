"""What an emission block comes to: the carrier, its lines, and each line against each rule."""

from __future__ import annotations

from dataclasses import dataclass

from logbook.model import Parts, Result
from logbook.rules import Rule


@dataclass(frozen=True, slots=True)
class LineLevel:
    """A line: its level at the unit (dBm) with its doubt by source, and relative to the carrier as a result."""

    at_hz: float
    level_dbm: float
    parts: Parts | None
    relative: Result


@dataclass(frozen=True, slots=True)
class Judged:
    """A line against a rule: what it allows (dBm) and the margin; or, in words, why the rule does not speak of it."""

    rule: Rule
    line: LineLevel | None
    silent: str
    allowed_dbm: float
    margin: Result | None


@dataclass(frozen=True, slots=True)
class Emission:
    """One measurement of a transmitter's lines."""

    carrier: Result
    lines: tuple[LineLevel, ...]
    rules: tuple[Rule, ...]
    judged: tuple[Judged, ...]
    results: tuple[Result, ...]
