"""Emissions as pieces: every line as read, at the unit, in watts, and against each rule with its text's date."""

from __future__ import annotations

from math import isnan

from logbook.compare.verdicts import target_verdict
from logbook.emissions import Emission, Judged, LineLevel
from logbook.kind import Outcome, View
from logbook.model import Block, standard_uncertainty
from logbook.physics.decibels import watt_from_dbm
from logbook.physics.emission import reference_bandwidth
from logbook.physics.uncertainty import conformity
from logbook.pieces import Folded, Items, Line, Note, Piece, Strong, Table, Text, Verdict
from logbook.quantity_display import show_frequency, show_value
from logbook.rules import Rule
from logbook.showing.readings import results_pieces
from logbook.showing.targets import probability_text


def show_emission(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """Every measurement of the block: lines, rules, and the results with their changes."""
    pieces: list[Piece] = []
    for emission in outcome.data or ():
        if isinstance(emission, Emission):
            pieces += [_lines(emission), *_bandwidths(emission)]
            for rule in emission.rules:
                pieces += _rule(rule, [each for each in emission.judged if each.rule is rule])
    if not pieces:
        return []
    return [*pieces, Folded("These lines as results, with their changes", tuple(results_pieces(outcome, view)))]


def _lines(emission: Emission) -> Table:
    carrier = emission.carrier
    rows: list[tuple[Line, ...]] = [
        (
            "carrier",
            show_frequency(carrier.at_hz or float("nan")),
            show_value(carrier.value, "dBm", carrier.u),
            _watts(carrier.value),
            "",
        )
    ]
    for line in emission.lines:
        at_most = "at most " if line.relative.bound else ""
        rows.append(
            (
                _name(line, carrier.at_hz or float("nan")),
                show_frequency(line.at_hz),
                at_most + show_value(line.level_dbm, "dBm", standard_uncertainty(line.parts)),
                at_most + _watts(line.level_dbm),
                at_most + show_value(line.relative.value, "dBc", line.relative.u),
            )
        )
    head = ("line", "frequency", "level at the unit", "power", "relative to the carrier")
    return Table(head, tuple(rows), "Lines", frozenset({1, 2, 3, 4}))


def _name(line: LineLevel, carrier_hz: float) -> str:
    if line.relative.quantity != "harmonic":
        return "spurious line"
    order = round(line.at_hz / carrier_hz)
    ending = {2: "2nd", 3: "3rd"}.get(order, f"{order}th")
    return f"{ending} harmonic"


def _watts(dbm: float) -> str:
    return show_value(float(f"{watt_from_dbm(dbm):.3g}"), "W")


def _bandwidths(emission: Emission) -> list[Piece]:
    """A word where a line was read in another bandwidth than the one it is judged in."""
    rbw = emission.carrier.conditions.rbw_hz
    other = {
        show_frequency(reference_bandwidth(line.at_hz))
        for line in emission.lines
        if rbw is not None and reference_bandwidth(line.at_hz) != rbw and not isnan(reference_bandwidth(line.at_hz))
    }
    if not other or rbw is None:
        return []
    words = (
        f"Read in {show_frequency(rbw)}; the reference bandwidth at these frequencies is {', '.join(sorted(other))} "
        "(ITU Radio Regulations, Appendix 3). For a clean line that makes no difference; one that is modulated or "
        "noisy reads too low in a narrower bandwidth."
    )
    return [Note(words)]


def _rule(rule: Rule, judged: list[Judged]) -> list[Piece]:
    pieces: list[Piece] = [Text((Strong(f"{_cited(rule)}: "), f"{rule.title}."))]
    silent = next((each.silent for each in judged if each.line is None), "")
    if silent:
        pieces.append(Note(f"This rule says nothing here: {silent}.", "caution"))
    elif judged:
        pieces.append(_margins(rule, judged))
    pieces.append(Folded(f"What stands behind {rule.name}", _behind(rule)))
    return pieces


def _cited(rule: Rule) -> str:
    """`47 CFR 97.307(e)`, `Licence conditions 4.2`."""
    return rule.regulation + ("" if rule.paragraph.startswith("(") else " ") + rule.paragraph


def _margins(rule: Rule, judged: list[Judged]) -> Table:
    rows: list[tuple[Line, ...]] = []
    for each in judged:
        assert each.line is not None
        where = show_frequency(each.line.at_hz)
        if each.margin is None:
            rows.append((where, "", "", "", each.silent))
            continue
        margin = each.margin
        probability = conformity(margin.value, margin.u, 0.0)
        verdict = target_verdict(margin.value, probability, 0.0, None)
        at_least = "at least " if margin.bound else ""
        if margin.bound and margin.value < 0:
            verdict, probability = "undecided", None
        rows.append(
            (
                where,
                show_value(each.allowed_dbm, "dBm"),
                at_least + show_value(margin.value, "dB", margin.u),
                probability_text(probability),
                Verdict(verdict),
            )
        )
    head = ("line", "allowed at the unit", "margin", "probability that it is met", "verdict")
    return Table(head, tuple(rows), f"Margins to {rule.name}", frozenset({0, 1, 2, 3}))


def _behind(rule: Rule) -> tuple[Piece, ...]:
    lines: list[Line] = [f"Text: {_cited(rule)}, {rule.edition}."]
    lines += [f"Left out: {each}." for each in rule.left_out]
    lines += [rule.note] if rule.note else []
    lines.append("The path's loss is taken as the same for all lines; see that pads and taps keep it at the harmonics.")
    return (Items(tuple(lines)),)
