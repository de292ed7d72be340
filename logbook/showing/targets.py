"""Targets with their verdicts."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import isnan

from logbook.findings import Target, TargetVerdict
from logbook.pieces import Line, Muted, Span, Table, Verdict
from logbook.quantity_display import show_frequency, show_value
from logbook.showing.words import difference_unit, plain, result_words


def target_words(target: Target) -> str:
    """What a target is about."""
    words = result_words(target.quantity, target.at_hz, target.name, target.chain)
    return words if target.rbw_hz is None else f"{words} in {show_frequency(target.rbw_hz)}"


def probability_words(verdict: TargetVerdict) -> str:
    """The probability that the limit is met, in percent; why not, where there is none."""
    return probability_text(verdict.probability)


def probability_text(probability: float | None) -> str:
    """A probability in percent; nothing where there is none."""
    if probability is None or isnan(probability):
        return ""
    p = 100 * probability
    if p > 99.9 or p < 0.1:
        return "over 99.9 %" if p > 99.9 else "under 0.1 %"
    return f"{p:.1f} %" if p < 10 or p > 90 else f"{p:.0f} %"


def target_verdict_line(verdict: TargetVerdict | None) -> tuple[Span, ...]:
    """A target's verdict with its probability, as a line."""
    if verdict is None:
        return (Muted("not judged"),)
    words = probability_words(verdict)
    said = [each for each in (f"{words} probable" if words else "", verdict.why) if each]
    return (Verdict(verdict.verdict), " ", Muted(", ".join(said))) if said else (Verdict(verdict.verdict),)


def missing_words(verdict: TargetVerdict) -> str:
    """What is missing to the limit, where something is."""
    if isnan(verdict.gap) or verdict.gap <= 0:
        return ""
    unit = verdict.target.unit
    return f"{show_value(verdict.gap, difference_unit(unit))} missing"


def targets_table(targets: Sequence[Target], verdicts: Mapping[str, TargetVerdict], label: str) -> Table:
    """Each target with the value of one revision and the verdict on it."""
    rows: list[tuple[Line, ...]] = []
    for target in targets:
        found = verdicts.get(target.key)
        value: Line = "" if found is None else (plain(found.value, target.unit, found.u), " ", Muted(found.basis))
        missing = missing_words(found) if found is not None else ""
        rows.append((target_words(target), target.written, value, target_verdict_line(found), missing, target.why))
    head = ("target", "limit", f"revision {label}" if label else "now", "verdict", "gap", "why")
    return Table(head, tuple(rows), "Targets", frozenset({1, 2}))
