"""`y-factor`: noise figure from a hot and a cold source, with its doubt, freed of what the instrument adds."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import isnan, sqrt

from logbook.fields import Field, many, mapping, quantity, text
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, fresh, not_on_a_plan, setting_of
from logbook.model import Block, Result, Source, Values
from logbook.physics.constants import T0
from logbook.physics.propagation import curved, propagate
from logbook.physics.y_factor import noise_figure, without_second_stage
from logbook.problems import CAUTION, did_you_mean
from logbook.quantity import Quantity, level_dbm
from logbook.showing.y_factor import SOURCES, YFactorShown, show_y_factor
from logbook.stage_fields import LEVEL

# Hot and cold may be levels, powers, or a dial in dB; only their ratio counts.
_READ = (*LEVEL, "ratio", "density")

FIELDS = (
    Field("name", text()),
    Field("chain", text()),
    Field("stage", text()),
    Field("bench", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("enr", quantity("ratio"), required=True, help="Such as 'enr: 15.2 ± 0.2 dB', from the source's label."),
    Field("noise_source", text()),
    Field("hot", quantity(_READ, repeated=True)),
    Field("cold", quantity(_READ, repeated=True)),
    Field("y", quantity("ratio", positive=True, repeated=True, instead="Hot is more than cold.")),
    Field("cold_temperature", quantity("noise_temperature", positive=True)),
    Field(
        "second",
        mapping(
            Field("nf", quantity("ratio", not_negative=True, repeated=True), required=True, help="Such as 'nf: 9 dB'."),
            Field("gain", quantity("ratio", repeated=True), required=True, help="The gain ahead of it, 'gain: 20 dB'."),
        ),
    ),
    Field("through", many(text(), least=0)),
    Field("note", text()),
)

EXAMPLE = """\
stage: lna
bench: shack
at: 50.1 MHz
enr: 15.2 ± 0.2 dB
hot: [-51.3 dBm, -51.2 dBm, -51.3 dBm]
cold: [-64.8 dBm, -64.9 dBm, -64.8 dBm]
cold_temperature: 23(1) degC
second: {nf: 9 ± 0.5 dB, gain: 18.1(2) dB}
"""


def calculate(block: Block, session: Session) -> Outcome:
    """The noise figure of every mapping, with its budget."""
    results: list[Result] = []
    shown: list[YFactorShown] = []
    if not not_on_a_plan("measured", block.place, session):
        return Outcome()
    for values in block.items:
        setting = setting_of(values, session)
        found = _one(values, setting, session) if setting is not None else None
        if found is not None:
            results.append(found.result)
            shown.append(found)
    return Outcome(tuple(results), tuple(shown))


@dataclass(frozen=True, slots=True)
class _Given:
    """The numbers of one measurement, and how the noise figure follows from them."""

    inputs: Mapping[str, tuple[float, float | None]]

    def y(self, given: Mapping[str, float]) -> float:
        """Hot over cold, dB."""
        return given["y"] if "y" in given else given["hot"] - given["cold"]

    def total(self, given: Mapping[str, float]) -> float:
        """Noise figure of unit and instrument together, dB."""
        # What the meter's scale gets wrong between hot and cold enters as an error of their ratio.
        y = self.y(given) + given.get("linearity", 0.0)
        return noise_figure(given["enr"], y, given["cold_temperature"]).nf_db

    def first(self, given: Mapping[str, float]) -> float:
        """Noise figure of the unit alone, dB."""
        total = self.total(given)
        if "second_nf" not in given:
            return total
        return without_second_stage(total, given["second_nf"], given["second_gain"]).nf_db


def _one(values: Values, setting: Setting, session: Session) -> YFactorShown | None:
    inputs = _inputs(values, setting, session)
    if inputs is None or not _stage_known(values, setting, session):
        return None
    given = _Given(inputs)
    value, parts = propagate(given.first, inputs)
    plain = {name: number for name, (number, _) in inputs.items()}
    words = _why_not(given, plain)
    if words:
        message = f"No noise figure comes of this: {words}."
        session.problems.add(values.start, "y-factor", message, "Look at the readings again.", CAUTION)
    at = values.get("at")
    result = derived(
        "nf",
        value,
        "dB",
        {_source(name, values): part for name, part in parts.items()},
        setting,
        values.place("enr"),
        at_hz=None if at is None else at.value,
        name=values.get("name", values.get("stage", "")),
        words=words,
        notes=() if words else _notes(given, inputs, value),
    )
    budget = tuple((name, *inputs[name], part) for name, part in sorted(parts.items(), key=lambda p: -abs(p[1])))
    return YFactorShown(result, plain, given.y(plain), given.total(plain), values.get("stage", ""), budget)


def _why_not(given: _Given, plain: Mapping[str, float]) -> str:
    if not given.y(plain) > 0:
        return "hot does not read more than cold"
    if isnan(given.total(plain)):
        return "hot stands so far above cold that no noise is left for the unit: the ENR or a reading is wrong"
    if isnan(given.first(plain)):
        return "the second stage alone makes more noise than was measured: its noise figure or the gain is wrong"
    return ""


def _notes(given: _Given, inputs: Mapping[str, tuple[float, float | None]], nf_db: float) -> tuple[str, ...]:
    """A word on a figure that nothing can have, and on doubt that the figure does not follow in a straight line."""
    notes = ["a noise figure below 0 dB, which nothing has: the ENR or a reading is off"] if nf_db < 0 else []
    wide = [SOURCES[name] for name in curved(given.first, inputs)]
    if wide:
        notes.append(f"its doubt is only rough, because that of the {' and of the '.join(wide)} is wide")
    return tuple(notes)


def _inputs(values: Values, setting: Setting, session: Session) -> dict[str, tuple[float, float | None]] | None:
    """Every number with its doubt; None with a fault when Y is not given, or is given twice."""
    found: dict[str, tuple[float, float | None]] = {}
    pair = [key for key in ("hot", "cold") if key in values]
    if ("y" in values) == bool(pair) or len(pair) == 1:
        message = "A Y factor is given either by 'hot' and 'cold' or by 'y'."
        hint = "Such as 'hot: -51.3 dBm' and 'cold: -64.8 dBm', or 'y: 13.5 dB'."
        session.fault(values.start, "y-factor", message, hint)
        return None
    if len(pair) == 2 and values["hot"].dimension != values["cold"].dimension:
        message = f"Hot is written in {values['hot'].unit} and cold in {values['cold'].unit}."
        session.fault(values.place("cold"), "dimension", message, "Give both in the same unit.")
        return None
    for key in (*pair, *(["y"] if "y" in values else []), "enr"):
        found[key] = _decibels(values[key])
    cold = values.get("cold_temperature")
    found["cold_temperature"] = (T0, None) if cold is None else (cold.value, cold.u)
    if setting.bench is not None and setting.bench.linearity_u:
        found["linearity"] = (0.0, setting.bench.linearity_u * sqrt(2))
    second = values.get("second")
    if second is not None:
        found["second_nf"], found["second_gain"] = _decibels(second["nf"]), _decibels(second["gain"])
    return found


def _decibels(value: Quantity) -> tuple[float, float | None]:
    """A reading in dB of some reference: powers and voltages become levels, and their doubt relative."""
    return level_dbm(value, 50.0) if value.dimension in LEVEL else (value.value, value.u)


def _stage_known(values: Values, setting: Setting, session: Session) -> bool:
    named, chain = values.get("stage"), session.chains.get(setting.chain)
    if named is None or chain is None or chain.stage(named) is not None:
        return True
    message = f"'{named}' is no stage of chain '{chain.name}' on revision {session.label}."
    session.fault(values.place("stage"), "unknown-stage", message, did_you_mean(named, chain.stage_names), named)
    return False


def _source(name: str, values: Values) -> Source:
    """The noise source's ENR is one error in all that was measured with it; the rest is fresh."""
    if name != "enr":
        return fresh(values.start, "nf", name)
    # With another ENR it is another source, or the same one calibrated again: either way another error.
    source = f"{values.get('noise_source', 'noise source')} ({values['enr'].written})"
    return Source("bench", values.get("bench", ""), source, "ENR")


KIND = Kind(
    word="y-factor",
    title="Noise figure by the Y factor",
    about=(
        "Hot and cold readings with a noise source of known ENR: the noise figure with its doubt, freed of the second "
        "stage. With `stage` it is that stage's own, ready to be set in the chain by the next change."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show_y_factor,
)
