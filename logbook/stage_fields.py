"""The keys of a stage, and the stage that they make."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
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
            output=values.get("output", "difference"),
            part=values.get("part", ""),
            note=values.get("note", ""),
        )
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
        mixer_only = [key for key in ("nf_dsb", "image_rejection", "output") if key in values and "lo" not in values]
        for key in mixer_only:
            message = f"Stage '{own}' gives '{key}', which only a mixer has."
            self.problems.add(values.place(key), "not-a-mixer", message, "A mixer is a stage with 'lo:'.")

    def _complete(self, values: Values, own: str) -> None:
        if not {"gain", "loss", "gain_range", "response"} & set(values):
            hint = "Give 'gain:', 'loss:', 'gain_range:' or 'response:'."
            self.problems.add(values.start, "missing-key", f"Stage '{own}' says nothing of its gain.", hint)
        if {"noise_current", "termination"} & set(values) and "noise_voltage" not in values:
            hint = "Add 'noise_voltage:', such as 1.5 nV/rtHz."
            message = f"Stage '{own}' gives a noise current or termination without a noise voltage."
            self.problems.add(values.start, "missing-key", message, hint)

    def _range(self, values: Values) -> tuple[float, float] | None:
        found: Any = values.get("gain_range")
        if found is None:
            return None
        low, high = found[0].value, found[1].value
        if low > high:
            message = f"The gain range runs from {found[0].written} down to {found[1].written}; the lower comes first."
            self.problems.add(values.place("gain_range"), "pair", message)
        return low, high


def _oscillator(found: Any) -> Oscillator | None:
    if found is None:
        return None
    if isinstance(found, Quantity):
        return Oscillator(found.value)
    return Oscillator(None, found["offset"].value)
