"""`emission`: a transmitter's lines against its carrier, and against the rules that are named."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import isfinite, isnan

from logbook.emissions import Emission, Judged, LineLevel
from logbook.entry_text import decode
from logbook.fields import Field, many, mapping, quantity, text
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, each_mapping, measured, not_on_a_plan, setting_of
from logbook.kinds._setting_fields import SETTING_FIELDS
from logbook.model import MEASURED, Block, Result, Values
from logbook.physics.uncertainty import linear_sum
from logbook.problems import Place, did_you_mean
from logbook.quantity import Quantity
from logbook.quantity_display import show_value
from logbook.rules import Rule, read_rule, shipped_rules
from logbook.showing.emission import show_emission
from logbook.stage_fields import LEVEL

FIELDS = (
    *SETTING_FIELDS,
    Field("name", text()),
    Field("drive", quantity(LEVEL)),
    Field("at", quantity("frequency", positive=True), required=True, help="The carrier's frequency, 'at: 50.075 MHz'."),
    Field("carrier", quantity(LEVEL, repeated=True), required=True, help="Its level as read, 'carrier: -13.9 dBm'."),
    Field(
        "lines",
        many(
            mapping(
                Field("at", quantity("frequency", positive=True), required=True, help="Such as 'at: 100.15 MHz'."),
                Field(
                    "level",
                    quantity((*LEVEL, "relative"), repeated=True),
                    required=True,
                    help="As read, 'level: -78 dBm', or relative to the carrier, 'level: -64 dBc'.",
                ),
                Field("note", text()),
            )
        ),
        required=True,
        help="A list such as '- {at: 100.15 MHz, level: -64 dBc}'.",
    ),
    Field("rule", many(text())),
    Field("note", text()),
)

EXAMPLE = """\
bench: shack
through: [tap, pad]
rbw: 100 kHz
averaging: power
at: 50.075 MHz
carrier: -3.9(1) dBm
lines:
  - {at: 100.15 MHz, level: -68.0(2) dBc}
  - {at: 150.225 MHz, level: -71.5(3) dBc}
rule: us-97-307-e
"""

HAZARD = (
    "RF power burns, and burns out instruments: use a dummy load, and taps and pads that bear the power. The numbers "
    "below decide nothing: the text in force and the licensed operator do."
)

# A line within this part of a whole multiple of the carrier's frequency is a harmonic.
_WHOLE = 1e-4


def calculate(block: Block, session: Session) -> Outcome:
    """The carrier, each line relative to it, and its margin to each rule."""
    if not not_on_a_plan("read", block.place, session):
        return Outcome()
    return each_mapping(block, session, _one)


def _one(values: Values, session: Session) -> Emission | None:
    setting = setting_of(values, session)
    rules = _rules(values, session)
    if setting is None:
        return None
    at = values["at"].value
    carrier = measured("output_level", values["carrier"], setting, values.place("carrier"), at)
    if carrier is None:
        return None
    lines = [_line(each, carrier, setting) for each in _once(values["lines"], at, session)]
    sound = tuple(line for line in lines if line is not None)
    judged = tuple(each for rule in rules for each in _judged(rule, carrier, sound, setting))
    results = (carrier, *(line.relative for line in sound), *(j.margin for j in judged if j.margin is not None))
    return Emission(carrier, sound, tuple(rules), judged, results)


def _once(lines: Iterable[Values], carrier_hz: float, session: Session) -> list[Values]:
    found: dict[float, Values] = {}
    for each in lines:
        at = each["at"]
        if at.value == carrier_hz:
            message = f"A line stands at {at.written}, where the carrier is."
            session.fault(each.place("at"), "duplicate-line", message, "The lines are what stands beside the carrier.")
        elif at.value in found:
            message = f"Two lines stand at {at.written}."
            session.fault(each.place("at"), "duplicate-line", message, "Give repeated readings as a list in one line.")
        else:
            found[at.value] = each
    return list(found.values())


def _line(values: Values, carrier: Result, setting: Setting) -> LineLevel | None:
    """A line as a level at the unit and relative to the carrier; what both readings share cancels in the ratio."""
    level: Quantity = values["level"]
    at, place = values["at"].value, values.place("level")
    name = _name(at, carrier.at_hz or 0.0)
    if level.dimension == "relative":
        relative = measured(name, level, setting, place, at, "lower")
        if relative is None or not _borne(relative.value, carrier, setting, place):
            return None
        parts = linear_sum([(1.0, relative.parts), (1.0, carrier.parts)])
        return LineLevel(at, relative.value + carrier.value, parts, relative)
    absolute = measured("spur_level", level, setting, place, at)
    if absolute is None:
        return None
    parts = linear_sum([(1.0, absolute.parts), (-1.0, carrier.parts)])
    ratio = absolute.value - carrier.value
    if not _borne(ratio, carrier, setting, place):
        return None
    relative = derived(name, ratio, "dBc", parts, setting, place, at_hz=at, better="lower", notes=absolute.notes)
    relative = replace(relative, basis=MEASURED, bound=absolute.bound)
    return LineLevel(at, absolute.value, absolute.parts, relative)


def _name(line_hz: float, carrier_hz: float) -> str:
    """`harmonic` for a whole multiple of the carrier's frequency, `spurious` for any other line."""
    multiple = line_hz / carrier_hz
    order = round(multiple) if isfinite(multiple) else 0
    return "harmonic" if order >= 2 and abs(line_hz - order * carrier_hz) <= _WHOLE * line_hz else "spurious"


def _borne(relative_db: float, carrier: Result, setting: Setting, place: Place) -> bool:
    """A line that is no lower than its carrier is a slip of the sign, or the carrier was read behind other loss."""
    if relative_db < 0:
        return True
    message = f"A line at {show_value(relative_db, 'dBc')} stands no lower than its carrier."
    hint = "A line below the carrier is a negative number of dBc; carrier and lines are read behind the same path."
    setting.session.fault(place, "sign", message, hint)
    return False


def _judged(rule: Rule, carrier: Result, lines: Iterable[LineLevel], setting: Setting) -> list[Judged]:
    """Every line against a rule; a rule that does not speak of this carrier says so."""
    assert carrier.at_hz is not None
    silent = rule.why_not(carrier.at_hz, carrier.value)
    if silent:
        return [Judged(rule, None, silent, float("nan"), None)]
    allowed, slope = _allowed(rule, carrier.value)
    found = []
    for line in lines:
        if not rule.covers_line(line.at_hz):
            found.append(Judged(rule, line, "it does not speak of lines at this frequency", float("nan"), None))
            continue
        parts = linear_sum([(slope, carrier.parts), (-1.0, line.parts)])
        place = setting.values.place("rule")
        name = f"{setting.values.get('name', '')} {rule.name}".strip()
        margin = derived("margin", allowed - line.level_dbm, "dB", parts, setting, place, at_hz=line.at_hz, name=name)
        found.append(Judged(rule, line, "", allowed, replace(margin, bound="lower" if line.relative.bound else "")))
    return found


def _allowed(rule: Rule, carrier_dbm: float) -> tuple[float, float]:
    """The level that the rule allows, and how it moves with the carrier: 1 for a limit relative to it, 0 else."""
    here = rule.allowed_dbm(carrier_dbm)
    step = 1e-3
    moved = rule.allowed_dbm(carrier_dbm - step)
    return here, 0.0 if isnan(moved) else round((here - moved) / step)


def _rules(values: Values, session: Session) -> list[Rule]:
    """The rules named: one that comes with the logbook, or a file of the logbook's own."""
    found = []
    for number, named in enumerate(values.get("rule", ())):
        place = values.place("rule", number)
        if named in values["rule"][:number]:
            session.fault(place, "duplicate-rule", f"The rule '{named}' is named twice.")
            continue
        if named.endswith((".yml", ".yaml")):
            data = session.read_file(named, place)
            path = session.file_path(named)
            rule = None if data is None else read_rule(decode(data, path, session.problems), path, session.problems)
        else:
            rule = shipped_rules().get(named)
            if rule is None:
                message = f"'{named}' is no rule known here."
                hint = did_you_mean(named, shipped_rules())
                session.fault(place, "unknown-rule", message, f"{hint} A rule of your own is named by its file, x.yml.")
        if rule is not None:
            found.append(rule)
    return found


KIND = Kind(
    word="emission",
    title="Emissions",
    about=(
        "A transmitter's lines as read through the bench's path: levels at the unit, relative to the carrier, in "
        "watts, and the margin to the rules that are named. Rules that come with the logbook: "
        + ", ".join(f"`{name}`" for name in sorted(shipped_rules()))
        + "; a logbook's own rule is a YAML file of the same form, named by its path."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show_emission,
    hazard=HAZARD,
)
