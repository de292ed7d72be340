"""Names and numbers as a person writes them."""

from __future__ import annotations

import re
from math import isnan

from logbook.findings import Delta
from logbook.pieces import Link, Muted, Span, Verdict
from logbook.quantity_display import show_delta, show_frequency, show_value

_ACRONYMS = {
    "nf": "noise figure",
    "iip3": "IIP3",
    "oip3": "OIP3",
    "iip2": "IIP2",
    "oip2": "OIP2",
    "ip1db": "input compression (IP1dB)",
    "op1db": "output compression (OP1dB)",
    "sfdr": "SFDR",
    "headroom_strongest": "headroom at the strongest signal",
    "snr_weakest": "signal to noise at the weakest signal",
    "if_rejection": "IF rejection",
}


# A level carried in the name, or two of them: bandwidth_3db, shape_factor_60_3.
_AT_LEVELS = re.compile(r"(?P<name>[a-z_]+)_(?P<first>\d+(?:\.\d+)?)(?:db|_(?P<second>\d+(?:\.\d+)?))")


def quantity_words(quantity: str) -> str:
    """`noise_floor` as `noise floor`, `nf` as `noise figure`."""
    found = _AT_LEVELS.fullmatch(quantity)
    if found is None:
        return _ACRONYMS.get(quantity, quantity.replace("_", " "))
    name, first, second = found["name"].replace("_", " "), found["first"], found["second"]
    if second:
        return f"{name} {first}:{second}"
    return f"range within ±{first} dB" if name == "log range" else f"{name} at -{first} dB"


def result_words(quantity: str, at_hz: float | None, name: str, chain: str = "") -> str:
    """What a result is, in words: quantity, name, frequency, chain."""
    words = quantity_words(quantity)
    if name:
        words += f" “{name}”"
    if at_hz is not None:
        words += f" at {show_frequency(at_hz)}"
    return f"{words} ({chain})" if chain else words


def plain(value: float, unit: str, u: float | None = None) -> str:
    """A value with its doubt; an empty cell for one that is not known."""
    return "" if isnan(value) else show_value(value, unit, u)


def decibels(value: float, decimals: int = 1) -> str:
    """A number of a table whose head bears the unit; an empty cell when not known."""
    return "" if isnan(value) else f"{value:.{decimals}f}"


def percent(share: float) -> str:
    """A share as percent; an empty cell when not known."""
    if isnan(share):
        return ""
    shown = f"{100 * share:.1f} %" if share < 0.1 else f"{100 * share:.0f} %"
    return "0.0 %" if shown == "-0.0 %" else shown


def verdict(delta: Delta) -> Verdict:
    """A delta's verdict with its reason."""
    return Verdict(delta.verdict, delta.why)


def change(delta: Delta) -> str:
    """A delta with its doubt and sign."""
    return "" if isnan(delta.delta) else show_delta(delta.delta, difference_unit(delta.unit), delta.u)


def difference_unit(unit: str) -> str:
    """The unit of a difference: of levels and densities it is a ratio in dB, of temperatures K."""
    return {"degC": "K"}.get(unit, "dB" if unit.startswith("dB") else unit)


def doubt_words(coverage: float) -> str:
    """What stands behind ± on the pages."""
    return f"Behind ± stands the standard uncertainty (k = 1); verdicts and error bars use k = {coverage:g}."


def revision_link(label: str) -> Link:
    """A link to a revision's page."""
    return Link(label, f"revision:{label}")


def reason(why: str) -> Span:
    """A reason in a quieter voice; nothing for none."""
    return Muted(why) if why else ""
