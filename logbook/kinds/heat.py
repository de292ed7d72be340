"""`heat`: how hot a part gets inside, how much is in hand, and the sink that it needs."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import isfinite, isinf, nan

from logbook.fields import Field, quantity, text
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, fresh, setting_of
from logbook.model import Block, Parts, Result, Source, Values
from logbook.physics.propagation import propagate
from logbook.physics.thermal import (
    amplifier_power,
    junction_margin,
    junction_temperature,
    needed_sink,
    regulator_power,
)
from logbook.problems import Place
from logbook.quantity import Quantity
from logbook.showing.heat import Heat, show_heat

_RESISTANCE = quantity("thermal_resistance", not_negative=True)
_VOLTAGE = quantity("voltage", positive=True)
_CURRENT = quantity("current", not_negative=True, repeated=True)
_POWER = quantity("power", not_negative=True)

FIELDS = (
    Field("name", text(), required=True, help="The part that gets hot, such as 'name: pa'."),
    Field("chain", text()),
    Field("power", _POWER),
    Field("input_voltage", _VOLTAGE),
    Field("output_voltage", quantity("voltage", not_negative=True)),
    Field("current", _CURRENT),
    Field("own_current", _CURRENT),
    Field("rf_output", _POWER),
    Field("rf_input", _POWER),
    Field("junction_case", _RESISTANCE),
    Field("case_sink", _RESISTANCE),
    Field("sink_ambient", _RESISTANCE),
    Field("ambient", quantity("temperature", repeated=True)),
    Field("case", quantity("temperature", repeated=True)),
    Field("maximum", quantity("temperature")),
    Field("rated_power", _POWER),
    Field("note", text()),
)

EXAMPLE = """\
- name: pa
  input_voltage: 13.8 V
  current: 0.71(1) A
  rf_output: 3.9 W
  junction_case: 3.2 degC/W
  case: 61(1) degC
  ambient: 24 degC
  maximum: 175 degC
- name: regulator
  input_voltage: 13.8 V
  output_voltage: 5 V
  current: 90 mA
  junction_case: 5 degC/W
  case_sink: 1 degC/W
  sink_ambient: 24 degC/W
  ambient: 35 degC
  maximum: 125 degC
"""

HAZARD = (
    "Hot parts and their supplies: what is too hot to touch burns you and sets fire to what lies on it. Switch off "
    "before you touch; mains and anything above 50 V is work for those whom the local code allows it."
)

Numbers = Mapping[str, float]


@dataclass(frozen=True, slots=True)
class _Case:
    """One part as given: numbers with their doubt, and the way in which its power and its junction follow."""

    inputs: Mapping[str, tuple[float, float | None]]
    values: Values

    def __contains__(self, key: str) -> bool:
        return key in self.inputs

    def power(self, given: Numbers) -> float:
        """W turned into heat."""
        if "power" in given:
            return given["power"]
        if "output_voltage" in given:
            own = given.get("own_current", 0.0)
            return regulator_power(given["input_voltage"], given["output_voltage"], given["current"], own)
        rf = given.get("rf_output", 0.0), given.get("rf_input", 0.0)
        return amplifier_power(given["input_voltage"], given["current"], *rf)

    def resistance(self, given: Numbers) -> float:
        """K/W from the temperature that is known to the junction: from the case if that was measured."""
        names = ("junction_case",) if "case" in given else ("junction_case", "case_sink", "sink_ambient")
        return sum(given.get(name, 0.0) for name in names)

    def junction(self, given: Numbers) -> float:
        """degC of the junction; nan when the path from a known temperature is not complete."""
        known = given.get("case", given.get("ambient", nan))
        if "junction_case" not in given or ("case" not in given and "sink_ambient" not in given):
            return nan
        return junction_temperature(self.power(given), self.resistance(given), known)

    def sink(self, given: Numbers) -> float:
        """K/W from sink to ambient that the part may have at most; nan when not all of it is given."""
        if "maximum" not in given or "ambient" not in given or "junction_case" not in given:
            return nan
        to_sink = given["junction_case"] + given.get("case_sink", 0.0)
        return needed_sink(self.power(given), given["maximum"], given["ambient"], to_sink)


def calculate(block: Block, session: Session) -> Outcome:
    """Junction temperature, margin and the sink needed of every part."""
    results: list[Result] = []
    shown: list[Heat] = []
    for values in block.items:
        setting = setting_of(values, session)
        case = _case(values, session) if setting is not None else None
        if setting is None or case is None:
            continue
        found = _results(case, setting)
        results += found
        given = {name: value for name, (value, _) in case.inputs.items()}
        power, parts = propagate(case.power, case.inputs)
        spread = sum(part * part for part in parts.values()) ** 0.5 if parts else None
        shown.append(Heat(values["name"], given, power, spread, case.junction(given), case.sink(given), tuple(found)))
    return Outcome(tuple(results), tuple(shown))


# Ways to say how much power turns to heat; what one of them needs means nothing in the others.
_REGULATOR = ("output_voltage", "own_current")
_AMPLIFIER = ("rf_output", "rf_input")
_BY_SUPPLY = ("input_voltage", "current", *_REGULATOR, *_AMPLIFIER)

_WAYS = "Give 'power:', or 'input_voltage:' with 'current:' and, for a regulator, 'output_voltage:'."


def _case(values: Values, session: Session) -> _Case | None:
    """The part's numbers; None with a fault when its power, or a temperature to start from, is not given."""
    inputs = {name: (each.value, each.u) for name, each in values.items() if isinstance(each, Quantity)}
    case = _Case(inputs, values)
    if "power" not in case and not ("input_voltage" in case and "current" in case):
        session.fault(
            values.start, "missing-key", f"Nothing says how much power '{values['name']}' turns to heat.", _WAYS
        )
        return None
    if "case" not in case and "ambient" not in case:
        message = f"Neither a case nor an ambient temperature is given for '{values['name']}'."
        session.fault(values.start, "missing-key", message, "Give 'case:' as measured, or 'ambient:'.")
        return None
    if not _one_way(values, session):
        return None
    given = {name: value for name, (value, _) in inputs.items()}
    if case.power(given) < 0:
        message = f"'{values['name']}' would give out more power than it takes in."
        session.fault(values.start, "power", message, "Look at the voltages, the current and the RF output again.")
        return None
    return case


def _one_way(values: Values, session: Session) -> bool:
    """Whether the power is given in one way; a fault at the first key that belongs to another."""
    also, why = "", ""
    if "power" in values:
        also, why = next((key for key in _BY_SUPPLY if key in values), ""), "'power' says already how much it is"
    elif "output_voltage" in values:
        also, why = next((key for key in _AMPLIFIER if key in values), ""), "'output_voltage' makes it a regulator"
    elif "own_current" in values:
        also, why = "own_current", "it belongs to a regulator, and no 'output_voltage' is given"
    if also:
        message = f"'{also}' has no part in the power of '{values['name']}': {why}."
        session.fault(values.place(also), "given-twice", message, "Take one of them out.")
    return not also


# What is read afresh at every reading; the rest belongs to the part and is the same error whenever it is used.
_FRESH = ("power", "current", "own_current", "rf_output", "rf_input", "ambient", "case", "input_voltage")


def _parts(parts: Mapping[str, float], case: _Case, setting: Setting) -> Parts:
    return {_source(name, case, setting): part for name, part in parts.items()}


def _source(name: str, case: _Case, setting: Setting) -> Source:
    if name in _FRESH:
        return fresh(case.values.place(name), name, "reading")
    return Source("stage", setting.chain, case.values["name"], name, case.values[name].written)


def _results(case: _Case, setting: Setting) -> list[Result]:
    place = case.values.start
    found = []
    junction, parts = propagate(case.junction, case.inputs)
    if isfinite(junction):
        found.append(derived("junction", junction, "degC", _parts(parts, case, setting), setting, place))
        if "maximum" in case:
            margin = junction_margin(junction, case.inputs["maximum"][0])
            less = {name: -part for name, part in parts.items()}
            most_u = case.inputs["maximum"][1]
            if most_u is not None:
                less["maximum"] = most_u
            found.append(derived("junction_margin", margin, "K", _parts(less, case, setting), setting, place))
    sink, parts = propagate(case.sink, case.inputs)
    if isfinite(sink) and not isinf(sink) and "sink_ambient" not in case:
        found.append(derived("sink_needed", sink, "K/W", _parts(parts, case, setting), setting, place, better="higher"))
    found += _temperatures(case, setting, place)
    return found


def _temperatures(case: _Case, setting: Setting, place: Place) -> list[Result]:
    """A measured case temperature is a result too."""
    if "case" not in case:
        return []
    value, u = case.inputs["case"]
    parts = {fresh(case.values.place("case"), "case"): u} if u else None
    return [derived("case_temperature", value, "degC", parts, setting, place, better="lower")]


KIND = Kind(
    word="heat",
    title="Heat",
    about=(
        "How hot a part gets inside: from its power and the thermal resistances to a measured case or to ambient; with "
        "the margin to its maximum, or the sink that it needs. In a planned entry it is a prediction."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show_heat,
    hazard=HAZARD,
)
