"""Emission rules as data: each file names the regulation, its paragraph, the text's date, and what it leaves out."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from math import isnan, nan
from typing import Any

from logbook.fields import Asked, Field, many, mapping, pair, quantity, read_mapping, text
from logbook.model import Values
from logbook.physics.emission import allowed_level
from logbook.problems import Problems
from logbook.quantity import level_dbm
from logbook.quantity_display import show_frequency, show_value
from logbook.yaml_nodes import read_yaml

_POWER = quantity(("power", "level"))

_LIMIT = mapping(
    Field("up_to", _POWER),
    Field("below", _POWER),
    Field("below_carrier", quantity("ratio", positive=True)),
    Field("below_carrier_log_power", quantity("ratio")),
    Field("at_most", _POWER),
    Field("not_needed_below", _POWER),
)

FIELDS = (
    Field("rule", text(), required=True, help="The name by which a block asks for the rule."),
    Field("title", text(), required=True, help="What it limits, in a few words."),
    Field("regulation", text(), required=True, help="The regulation, such as '47 CFR 97.307'."),
    Field("paragraph", text(), required=True, help="Where in it the limit stands."),
    Field("edition", text(), required=True, help="The date of the text, and how it was read."),
    Field("carrier", pair(quantity("frequency", not_negative=True)), required=True, help="Its range, [low, high]."),
    Field("carrier_power_up_to", _POWER),
    Field("lines", pair(quantity("frequency", not_negative=True))),
    Field("limits", many(_LIMIT), required=True, help="A list such as '- {below_carrier: 43 dB}'."),
    Field("left_out", many(text(), least=0)),
    Field("note", text()),
)


@dataclass(frozen=True, slots=True)
class Limit:
    """One limit for carriers up to a power (dBm), or below it; the levels as in `physics.emission.allowed_level`."""

    up_to_dbm: float
    open_end: bool
    below_carrier_db: float
    at_most_dbm: float
    log_power_db: float
    not_needed_below_dbm: float

    def holds(self, carrier_dbm: float) -> bool:
        """Whether the limit is the one for a carrier of this power."""
        if isnan(self.up_to_dbm):
            return True
        return carrier_dbm < self.up_to_dbm if self.open_end else carrier_dbm <= self.up_to_dbm


@dataclass(frozen=True, slots=True)
class Rule:
    """A rule as read. Ranges in Hz; `left_out` is what it does not speak of."""

    name: str
    title: str
    regulation: str
    paragraph: str
    edition: str
    carrier_hz: tuple[float, float]
    lines_hz: tuple[float, float] | None
    power_up_to_dbm: float
    limits: tuple[Limit, ...]
    left_out: tuple[str, ...]
    note: str

    def why_not(self, carrier_hz: float, carrier_dbm: float) -> str:
        """Why the rule does not speak of such a carrier; nothing when it does."""
        low, high = self.carrier_hz
        if not low <= carrier_hz <= high:
            span = f"{show_frequency(low)} to {show_frequency(high)}"
            return f"it covers carriers from {span}, and this one is at {show_frequency(carrier_hz)}"
        if carrier_dbm > self.power_up_to_dbm:
            return f"it covers carriers up to {show_value(self.power_up_to_dbm, 'dBm')}"
        if not any(limit.holds(carrier_dbm) for limit in self.limits):
            return f"it gives no limit for a carrier of {show_value(carrier_dbm, 'dBm')}"
        return ""

    def covers_line(self, line_hz: float) -> bool:
        """Whether the rule limits a line at this frequency."""
        return self.lines_hz is None or self.lines_hz[0] <= line_hz <= self.lines_hz[1]

    def allowed_dbm(self, carrier_dbm: float) -> float:
        """The level that a line may have beside a carrier of this power, dBm; nan when no limit holds."""
        holding = [each for each in self.limits if each.holds(carrier_dbm)]
        # Of several the one for the lowest power, in whatever order they are written; without a power it is the last.
        limit = min(holding, key=lambda each: (isnan(each.up_to_dbm), each.up_to_dbm), default=None)
        if limit is None:
            return nan
        return allowed_level(
            carrier_dbm, limit.below_carrier_db, limit.at_most_dbm, limit.log_power_db, limit.not_needed_below_dbm
        )


def read_rule(content: str, file: str, problems: Problems) -> Rule | None:
    """A rule from the text of its file; None with located faults."""
    node = read_yaml(content.replace("\r\n", "\n"), file, 1, 0, problems, "rule")
    values = read_mapping(node, FIELDS, Asked("a rule", problems))
    if values is None or not _sound(values, problems):
        return None
    carrier, lines = values["carrier"], values.get("lines")
    return Rule(
        name=values["rule"],
        title=values["title"],
        regulation=values["regulation"],
        paragraph=values["paragraph"],
        edition=values["edition"],
        carrier_hz=(carrier[0].value, carrier[1].value),
        lines_hz=None if lines is None else (lines[0].value, lines[1].value),
        power_up_to_dbm=_dbm(values, "carrier_power_up_to", float("inf")),
        limits=tuple(_limit(each) for each in values["limits"]),
        left_out=tuple(values.get("left_out", ())),
        note=values.get("note", ""),
    )


_LIMITING = ("below_carrier", "below_carrier_log_power", "at_most")


def _sound(values: Values, problems: Problems) -> bool:
    """Whether its ranges run upwards, and each of its limits limits something."""
    before = len(problems)
    for key in ("carrier", "lines"):
        if key in values and not values[key][0].value < values[key][1].value:
            low, high = (each.written for each in values[key])
            problems.add(values.place(key), "pair", f"The range runs from {low} to {high}; the lower comes first.")
    for each in values["limits"]:
        if not any(key in each for key in _LIMITING):
            message = "This limit limits nothing."
            problems.add(each.start, "limit", message, f"It needs one of {', '.join(_LIMITING)} at least.")
        if "up_to" in each and "below" in each:
            message = "A limit holds for carriers either 'up_to' a power or 'below' it."
            problems.add(each.place("below"), "limit", message)
    return len(problems) == before


def _limit(values: Values) -> Limit:
    ratio: Any = values.get("below_carrier")
    log_power: Any = values.get("below_carrier_log_power")
    return Limit(
        up_to_dbm=_dbm(values, "up_to", _dbm(values, "below", nan)),
        open_end="up_to" not in values,
        below_carrier_db=nan if ratio is None else ratio.value,
        at_most_dbm=_dbm(values, "at_most", nan),
        log_power_db=nan if log_power is None else log_power.value,
        not_needed_below_dbm=_dbm(values, "not_needed_below", nan),
    )


def _dbm(values: Values, key: str, otherwise: float) -> float:
    return level_dbm(values[key], 50.0)[0] if key in values else otherwise


@cache
def shipped_rules() -> dict[str, Rule]:
    """The rules that come with the logbook, by name. ValueError: one of them cannot be read."""
    found: dict[str, Rule] = {}
    for path in sorted(files(__name__).iterdir(), key=lambda p: p.name):
        if path.name.endswith(".yml"):
            problems = Problems()
            rule = read_rule(path.read_text(encoding="utf-8"), path.name, problems)
            if rule is None or len(problems):
                raise ValueError(f"rule {path.name}: {'; '.join(str(p) for p in problems)}")
            found[rule.name] = rule
    return found
