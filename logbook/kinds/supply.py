"""`supply`: noise of regulators and control lines, and what of it arrives in the signal path."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import partial
from math import hypot, isfinite, nan

from logbook.fields import Field, many, mapping, pair, quantity, text
from logbook.hardware import Chain
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, fresh, setting_of
from logbook.model import Block, Result, Source, Values
from logbook.physics.decibels import db_from_ratio, ratio_from_db
from logbook.physics.propagation import propagate
from logbook.physics.supply import (
    after_rejection,
    amplitude_noise,
    density_from_rms,
    noise_in_bandwidth,
    per_volt_of_output,
    phase_noise_from_pushing,
    rms_from_density,
    sum_of_densities,
)
from logbook.prediction import Terms
from logbook.problems import did_you_mean
from logbook.quantity import Quantity
from logbook.showing.supply import Arrival, LineNoise, Supply, show_supply

_BAND = pair(quantity("frequency", positive=True))

FIELDS = (
    Field("name", text()),
    Field("chain", text()),
    Field("stage", text()),
    Field(
        "lines",
        many(
            mapping(
                Field("name", text(), required=True, help="Each line has a name of its own."),
                Field(
                    "noise",
                    quantity(("voltage", "voltage_density", "voltage_ratio"), positive=True),
                    required=True,
                    help="As rms in a band (20 uV), a density (63 nV/rtHz), or per volt of output (5 uV/V).",
                ),
                Field("band", _BAND),
                Field("output", quantity("voltage")),
                Field("psrr", quantity("ratio", not_negative=True)),
                Field("control", quantity("gain_slope")),
                Field("pushing", quantity("pushing")),
                Field("offset", quantity("frequency", positive=True)),
                Field("note", text()),
            )
        ),
        required=True,
        help="A list of lines, such as '- {name: reg-5v, noise: 20 uV, band: [10 Hz, 100 kHz], psrr: 40 dB}'.",
    ),
    Field("note", text()),
)

EXAMPLE = """\
stage: detector
lines:
  - {name: reg-5v, noise: 20 uV, band: [10 Hz, 100 kHz], psrr: 60 dB}
  - {name: reg-12v, noise: 5 uV/V, output: 12 V, band: [10 Hz, 100 kHz], psrr: 66 dB}
  - {name: gain-line, noise: 63 nV/rtHz, control: 25 dB/V}
  - {name: oscillator-line, noise: 40 nV/rtHz, pushing: 20 kHz/V, offset: 1 kHz}
"""


def calculate(block: Block, session: Session) -> Outcome:
    """Every line's noise and what arrives of it; the sum at the stage."""
    found: list[Supply] = []
    for values in block.items:
        setting = setting_of(values, session)
        supply = _one(values, setting, session) if setting is not None else None
        if supply is not None:
            found.append(supply)
    return Outcome(tuple(result for each in found for result in each.results), tuple(found))


def _one(values: Values, setting: Setting, session: Session) -> Supply | None:
    chain = session.chains.get(setting.chain)
    stage = values.get("stage")
    if stage is not None and chain is not None and chain.stage(stage) is None:
        message = f"'{stage}' is no stage of chain '{chain.name}' on revision {session.label}."
        hint = did_you_mean(stage, chain.stage_names)
        session.fault(values.place("stage"), "unknown-stage", message, hint, stage)
        return None
    before = len(session.problems)
    lines = [_line(each, setting, session) for each in values["lines"]]
    _names(values, session)
    sound = [line for line in lines if line is not None]
    if not sound:
        return None
    results = [result for line in sound for result in line.results]
    arrival = _arrival(values, sound, chain, setting, session) if len(session.problems) == before else None
    if arrival is not None:
        results += arrival.results
    silent = _silent(values, sound, chain) if arrival is None else ""
    return Supply(values.get("name", ""), tuple(sound), arrival, tuple(results), silent)


def _silent(values: Values, lines: list[LineNoise], chain: Chain | None) -> str:
    """Why nothing is said of what arrives at the stage that is named."""
    stage = values.get("stage")
    if stage is None:
        return ""
    if chain is None:
        return f"what arrives at {stage} is not known: no chain is described"
    if not any(line.psrr is not None for line in lines):
        return f"what arrives at {stage} is not known: no line gives the load's 'psrr'"
    return f"what arrives at {stage} is not known: the chain gives no 'bandwidth'" if chain.bandwidth_hz is None else ""


def _names(values: Values, session: Session) -> None:
    seen: set[str] = set()
    for each in values["lines"]:
        if each["name"] in seen:
            message = f"Two lines are named '{each['name']}'."
            session.fault(each.place("name"), "duplicate-line", message, "Give each line a name of its own.")
        seen.add(each["name"])


def _line(values: Values, setting: Setting, session: Session) -> LineNoise | None:
    """One line: its noise as density and as rms in its band, and what it does to amplitude or frequency."""
    noise: Quantity = values["noise"]
    band = values.get("band")
    low, high = (nan, nan) if band is None else (band[0].value, band[1].value)
    if band is not None and not high > low:
        message = f"The band runs from {band[0].written} to {band[1].written}; the lower comes first."
        session.fault(values.place("band"), "pair", message)
        return None
    if noise.dimension != "voltage_density" and band is None:
        message = f"'{noise.written}' is a noise over a band, and no band is given."
        session.fault(values.place("noise"), "missing-key", message, "Add 'band: [10 Hz, 100 kHz]'.")
        return None
    if noise.dimension == "voltage_ratio" and "output" not in values:
        message = f"'{noise.written}' is per volt of output, and no output voltage is given."
        session.fault(values.place("noise"), "missing-key", message, "Add 'output: 12 V'.")
        return None
    if "pushing" in values and "offset" not in values:
        message = "Phase noise by pushing depends on the offset from the carrier, and none is given."
        session.fault(values.place("pushing"), "missing-key", message, "Add 'offset: 1 kHz'.")
        return None
    for key in ("output", "control", "pushing"):
        if key in values and values[key].value == 0:
            message = f"'{values[key].written}' at '{key}': nothing comes of a zero."
            session.fault(values.place(key), "sign", message, "Take it out, or give what it is.")
            return None
    output = values["output"].value if "output" in values else 1.0

    def density(given: float) -> float:
        if noise.dimension == "voltage_density":
            return given
        volts = per_volt_of_output(given, output) if noise.dimension == "voltage_ratio" else given
        return float(density_from_rms(volts, low, high))

    value = density(noise.value)
    relative = _relative_u(noise, values["output"] if noise.dimension == "voltage_ratio" else None)
    rms = float(rms_from_density(value, low, high)) if band is not None else nan
    line = LineNoise(values["name"], noise.written, value, rms, (low, high), relative, _psrr(values), values, ())
    return line.with_results(_line_results(line, values, setting))


def _relative_u(*factors: Quantity | None) -> float | None:
    """Relative u of a product; None where no factor states one."""
    stated = [each.u / each.value for each in factors if each is not None and each.u is not None]
    return hypot(*stated) if stated else None


def _psrr(values: Values) -> tuple[float, float | None] | None:
    found = values.get("psrr")
    return None if found is None else (found.value, found.u)


def _line_results(line: LineNoise, values: Values, setting: Setting) -> tuple[Result, ...]:
    place, results = values.place("noise"), []
    own = fresh(place, "supply_noise")
    if isfinite(line.rms_v):
        parts = None if line.relative_u is None else {own: line.rms_v * line.relative_u}
        results.append(derived("supply_noise", line.rms_v, "V", parts, setting, place, name=line.name))
    ways: tuple[tuple[str, str, Callable[[float, float], float]], ...] = (
        ("control", "amplitude_noise", amplitude_noise),
        ("pushing", "phase_noise", lambda density, slope: _phase_noise(density, slope, values)),
    )
    for key, quantity_, value in ways:
        if key in values:
            slope = values[key]
            given = {
                own: (line.density, line.u_density),
                _belongs(line.name, key, slope, setting): (slope.value, slope.u),
            }
            level, parts = propagate(partial(_modulated, value), given)
            at = values["offset"].value if key == "pushing" else None
            results.append(
                derived(quantity_, level, "dBc/Hz", parts, setting, place, at_hz=at, name=line.name, better="lower")
            )
    return tuple(results)


def _belongs(line: str, what: str, value: Quantity, setting: Setting) -> Source:
    """What belongs to the circuit is the same error whenever it is used as written."""
    return Source("stage", setting.chain, line, what, value.written)


def _modulated(value: Callable[[float, float], float], given: Mapping[Source, float]) -> float:
    density, slope = given.values()
    return float(value(density, slope))


def _phase_noise(density: float, pushing: float, values: Values) -> float:
    return float(phase_noise_from_pushing(density, pushing, values["offset"].value))


@dataclass(frozen=True, slots=True)
class _Through:
    """The lines that reach the stage by its supply rejection, and how their sum in the bandwidth follows."""

    lines: tuple[LineNoise, ...]
    bandwidth_hz: float
    impedance_ohm: float

    def level(self, given: dict[tuple[str, str], float]) -> float:
        """dBm at the stage's output."""
        densities = [
            float(after_rejection(given[(line.name, "noise")], given[(line.name, "psrr")])) for line in self.lines
        ]
        return float(noise_in_bandwidth(sum_of_densities(densities), self.bandwidth_hz, self.impedance_ohm))


def _arrival(
    values: Values, lines: list[LineNoise], chain: Chain | None, setting: Setting, session: Session
) -> Arrival | None:
    """What arrives at the stage's output, in the chain's bandwidth, against the noise that is there anyway."""
    stage = values.get("stage")
    reaching = tuple(line for line in lines if line.psrr is not None)
    if stage is None or not reaching or chain is None or chain.bandwidth_hz is None:
        return None
    prediction = session.predict(chain, Terms())
    node = prediction.nodes[chain.stage_names.index(stage)]
    through = _Through(reaching, chain.bandwidth_hz.value, chain.impedance_ohm)
    inputs: dict[tuple[str, str], tuple[float, float | None]] = {}
    for line in reaching:
        assert line.psrr is not None
        inputs[(line.name, "noise")] = (line.density, line.u_density)
        inputs[(line.name, "psrr")] = line.psrr
    level, parts = propagate(lambda given: through.level(dict(given)), inputs)
    place = values.place("stage")
    psrr = {line.name: line.values["psrr"] for line in reaching}
    sources = {
        _belongs(name, what, psrr[name], setting) if what == "psrr" else fresh(place, f"{name} {what}"): part
        for (name, what), part in parts.items()
    }
    rise = float(db_from_ratio(1 + ratio_from_db(level - node.noise_dbm)))
    share = 1 - 1 / ratio_from_db(rise) if isfinite(rise) else nan
    results = (
        derived("supply_arriving", level, "dBm", sources, setting, place, name=stage, better="lower"),
        derived(
            "supply_rise",
            rise,
            "dB",
            {source: part * share for source, part in sources.items()},
            setting,
            place,
            name=stage,
            better="lower",
            words="" if isfinite(rise) else "the chain's noise there is not known",
        ),
    )
    return Arrival(stage, node.frequency_hz, through.bandwidth_hz, level, node.noise_dbm, rise, results)


KIND = Kind(
    word="supply",
    title="Supply noise",
    about=(
        "Noise of regulators and control lines, as rms in a band, per volt of output, or a density. With `psrr` and "
        "`stage`: what arrives there, against the noise that is there anyway. With `control` a gain-control line makes "
        "amplitude noise of it, with `pushing` an oscillator's line makes phase noise. In a planned entry it is a "
        "prediction."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show_supply,
)
