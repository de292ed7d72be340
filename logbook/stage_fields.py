"""The keys of a stage, and the stage that they make."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import log10
from typing import Any

from logbook.fields import Field, choice, either, mapping, pair, quantity, text
from logbook.hardware import Oscillator, Parameter, Response, Stage
from logbook.model import Source, Values
from logbook.problems import Place, Problems
from logbook.quantity import Quantity, level_dbm

LEVEL = ("level", "voltage_level", "power", "voltage")

_LOSS_SIGN = "A loss is a positive number of dB; for gain write 'gain:'."
_NF_SIGN = "A noise figure below 0 dB is not possible for a stage."

_LO = either(
    quantity("frequency", positive=True),
    mapping(
        Field("follows", choice("signal"), required=True, help="Write 'follows: signal'."),
        Field("offset", quantity("frequency"), required=True, help="Such as 'offset: 21.4 MHz'."),
    ),
)

PARAMETER_FIELDS: tuple[Field, ...] = (
    Field("gain", quantity("ratio", repeated=True), help="Such as 'gain: 18 ± 0.5 dB'."),
    Field("loss", quantity("ratio", repeated=True, not_negative=True, instead=_LOSS_SIGN)),
    Field("gain_range", pair(quantity("ratio"))),
    Field("response", text()),
    Field("nf", quantity("ratio", repeated=True, not_negative=True, instead=_NF_SIGN)),
    Field("nf_dsb", quantity("ratio", repeated=True, not_negative=True, instead=_NF_SIGN)),
    Field("noise_voltage", quantity("voltage_density", positive=True)),
    Field("noise_current", quantity("current_density", not_negative=True)),
    Field("termination", quantity("resistance", positive=True)),
    Field("temperature", quantity("noise_temperature", positive=True)),
    Field("iip3", quantity(LEVEL, repeated=True)),
    Field("oip3", quantity(LEVEL, repeated=True)),
    Field("iip2", quantity(LEVEL, repeated=True)),
    Field("oip2", quantity(LEVEL, repeated=True)),
    Field("ip1db", quantity(LEVEL, repeated=True)),
    Field("op1db", quantity(LEVEL, repeated=True)),
    Field("lo", _LO),
    Field("output", choice("difference", "sum")),
    Field("image_rejection", quantity("ratio", not_negative=True)),
    Field("bandwidth", quantity("frequency", positive=True)),
    Field("max_input", quantity(LEVEL)),
    Field("part", text()),
    Field("note", text()),
)

STAGE_FIELDS: tuple[Field, ...] = (
    Field("name", text(), required=True, help="Each stage has a name of its own."),
    *PARAMETER_FIELDS,
)

# Pairs that say the same thing in two ways: only one of them may stand in a stage.
_EXCLUSIVE = (
    ("gain", "loss"),
    ("gain", "response"),
    ("loss", "response"),
    ("nf", "nf_dsb"),
    ("nf", "noise_voltage"),
    ("nf_dsb", "noise_voltage"),
    ("iip3", "oip3"),
    ("iip2", "oip2"),
    ("ip1db", "op1db"),
)


@dataclass(frozen=True, slots=True)
class StageMaker:
    """Makes stages of one chain for one revision. `read_response` reads a stage's response file, or reports why not."""

    chain: str
    revision: str
    impedance_ohm: float
    problems: Problems
    read_response: Callable[[str, Place], Response | None]

    def parameter(self, stage: str, what: str, found: Quantity) -> Parameter:
        """A quantity as a parameter, levels in dBm, with its source."""
        source = Source("stage", self.chain, stage, what, self.revision)
        if set(LEVEL) & {found.dimension}:
            value, u = level_dbm(found, self.impedance_ohm)
            return Parameter(value, u, source)
        return Parameter(found.value, found.u, source)

    def stage(self, values: Values, name: str | None = None) -> Stage | None:
        """The stage that `values` describe; with `name`, a partial one as `set` takes. None with a fault."""
        before = len(self.problems)
        own = name if name is not None else values["name"]
        self._contradictions(values, own)
        parameters = self._parameters(values, own)
        response = self.read_response(values["response"], values.place("response")) if "response" in values else None
        if name is None:
            self._complete(values, own)
        stage = Stage(
            name=own,
            place=values.start,
            parameters=parameters,
            gain_range=self._range(values),
            response=response,
            oscillator=_oscillator(values.get("lo")),
            output=values.get("output", "difference" if name is None else ""),
            part=values.get("part", ""),
            note=values.get("note", ""),
        )
        if name is None:
            stage_possible(stage, values.place("nf"), self.problems)
        return stage if len(self.problems) == before else None

    def _parameters(self, values: Values, own: str) -> dict[str, Parameter]:
        found: dict[str, Parameter] = {}
        for key, value in values.items():
            if not isinstance(value, Quantity) or key == "lo":
                continue
            if key == "loss":
                turned = self.parameter(own, "gain", value)
                found["gain"] = Parameter(-turned.value, turned.u, turned.source)
            else:
                found[key] = self.parameter(own, key, value)
        return found

    def _contradictions(self, values: Values, own: str) -> None:
        for one, other in _EXCLUSIVE:
            if one in values and other in values:
                message = f"Stage '{own}' gives both '{one}' and '{other}', which say the same thing."
                self.problems.add(values.place(other), "given-twice", message, "Keep one of them.")

    def _complete(self, values: Values, own: str) -> None:
        for key in _MIXER_ONLY:
            if key in values and "lo" not in values:
                _not_a_mixer(own, key, values.place(key), self.problems)
        if not {"gain", "loss", "gain_range", "response"} & set(values):
            hint = "Give 'gain:', 'loss:', 'gain_range:' or 'response:'."
            self.problems.add(values.start, "missing-key", f"Stage '{own}' says nothing of its gain.", hint)
        if {"noise_current", "termination"} & set(values) and "noise_voltage" not in values:
            hint = "Add 'noise_voltage:', such as 1.5 nV/rtHz."
            self.problems.add(values.start, "missing-key", _NO_VOLTAGE.format(own), hint)

    def _range(self, values: Values) -> tuple[float, float] | None:
        found: Any = values.get("gain_range")
        if found is None:
            return None
        low, high = found[0].value, found[1].value
        if low > high:
            message = f"The gain range runs from {found[0].written} down to {found[1].written}; the lower comes first."
            self.problems.add(values.place("gain_range"), "pair", message)
        return low, high


_MIXER_ONLY = ("nf_dsb", "image_rejection", "output")
_NO_VOLTAGE = "Stage '{}' gives a noise current or termination without a noise voltage."


def _not_a_mixer(own: str, key: str, place: Place, problems: Problems) -> None:
    message = f"Stage '{own}' gives '{key}', which only a mixer has."
    problems.add(place, "not-a-mixer", message, "A mixer is a stage with 'lo:'.")


def stage_sound(stage: Stage, place: Place, problems: Problems) -> bool:
    """Whether a stage still makes sense after steps at `place` have set some of its parameters; a fault if not."""
    before = len(problems)
    if stage.oscillator is None:
        for key in _MIXER_ONLY:
            if key in stage.parameters or (key == "output" and stage.output == "sum"):
                _not_a_mixer(stage.name, key, place, problems)
    if {"noise_current", "termination"} & set(stage.parameters) and "noise_voltage" not in stage.parameters:
        problems.add(place, "missing-key", _NO_VOLTAGE.format(stage.name), "Set 'noise_voltage:' as well.")
    return stage_possible(stage, place, problems) and len(problems) == before


def stage_possible(stage: Stage, place: Place, problems: Problems) -> bool:
    """Whether a mixer's figure leaves it noise of its own beside what its image port lets in; a fault if not."""
    figure, rejection = stage.value("nf"), stage.value("image_rejection")
    if figure is None or rejection is None or stage.oscillator is None:
        return True
    least = 10 * log10(1 + 10 ** (-rejection / 10))
    # Two figures that say the same may differ by rounding.
    if figure >= least - 1e-9:
        return True
    message = (
        f"Stage '{stage.name}' has nf {figure:g} dB and image_rejection {rejection:g} dB; "
        f"the image alone makes {least:.2f} dB of it."
    )
    hint = "A single-sideband figure holds the image's noise; write 'nf_dsb:' for a double-sideband one."
    problems.add(place, "nf-below-image", message, hint)
    return False


def _oscillator(found: Any) -> Oscillator | None:
    if found is None:
        return None
    if isinstance(found, Quantity):
        return Oscillator(found.value)
    return Oscillator(None, found["offset"].value)
