"""Stages and chains, and the steps that make a revision's chain out of its parent's."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Literal

from logbook.model import Source
from logbook.problems import Place, Problems, did_you_mean


@dataclass(frozen=True, slots=True)
class Parameter:
    """One number of a stage or chain, in dB, dBm or SI units; `u` is its standard uncertainty, None when not stated."""

    value: float
    u: float | None
    source: Source


@dataclass(frozen=True, slots=True)
class Oscillator:
    """A local oscillator: at a fixed frequency, or following the signal at an offset. Hz."""

    frequency_hz: float | None
    offset_hz: float | None = None

    def at(self, signal_hz: float) -> float:
        """Its frequency when the chain is tuned to this signal."""
        if self.offset_hz is not None:
            return signal_hz + self.offset_hz
        return self.frequency_hz if self.frequency_hz is not None else float("nan")


@dataclass(frozen=True, slots=True)
class Response:
    """A stage's gain over frequency, from a file: Hz and dB, rising frequency."""

    file: str
    frequency_hz: tuple[float, ...]
    gain_db: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class Stage:
    """One element of a chain, as far as it is known."""

    name: str
    place: Place
    parameters: Mapping[str, Parameter]
    gain_range: tuple[float, float] | None = None
    response: Response | None = None
    oscillator: Oscillator | None = None
    output: Literal["difference", "sum", ""] = "difference"
    part: str = ""
    note: str = ""

    def value(self, parameter: str) -> float | None:
        """A parameter's value, None when not given."""
        found = self.parameters.get(parameter)
        return None if found is None else found.value

    @property
    def knows_noise(self) -> bool:
        """Whether a noise figure, or a noise voltage, was given."""
        return any(name in self.parameters for name in ("nf", "nf_dsb", "noise_voltage"))

    @property
    def passive(self) -> bool:
        """A stage without noise data that cannot amplify: its noise follows from its loss."""
        if self.knows_noise:
            return False
        if self.gain_range is not None:
            return self.gain_range[1] <= 0
        if self.response is not None:
            return max(self.response.gain_db) <= 0
        gain = self.value("gain")
        return gain is not None and gain <= 0

    @property
    def symbol(self) -> str:
        """The trade's symbol in a block diagram."""
        if self.oscillator is not None:
            return "mixer"
        for word in ("detector", "filter", "attenuator"):
            if word in self.name or (word == "filter" and ("preselector" in self.name or "diplexer" in self.name)):
                return word
        if self.gain_range is not None:
            return "amplifier" if self.gain_range[1] > 0 else "attenuator"
        gain = self.value("gain")
        if gain is not None and gain > 0:
            return "amplifier"
        if "bandwidth" in self.parameters or self.response is not None:
            return "filter"
        return "pad" if self.passive else "stage"


@dataclass(frozen=True, slots=True)
class Lineup:
    """With `input_dbm` at the chain's input, `level_dbm` is wanted at the input of `at`; `adjust` is set for it."""

    input_dbm: Parameter
    at: str
    level_dbm: Parameter
    adjust: str
    place: Place


@dataclass(frozen=True, slots=True)
class Chain:
    """A signal path made of stages in order. None: not stated."""

    name: str
    signal_hz: float
    stages: tuple[Stage, ...]
    place: Place
    level: Parameter | None = None
    strongest: Parameter | None = None
    weakest: Parameter | None = None
    bandwidth_hz: Parameter | None = None
    impedance_ohm: float = 50.0
    source_temperature_k: Parameter | None = None
    galactic: bool = False
    snr_db: Parameter | None = None
    in_phase: bool = True
    lineup: Lineup | None = None

    def stage(self, name: str) -> Stage | None:
        """The stage of this name."""
        return next((stage for stage in self.stages if stage.name == name), None)

    @property
    def minds_frequency(self) -> bool:
        """Whether what it does depends on the signal's frequency: by a response, or by the noise of the sky."""
        return self.galactic or any(stage.response is not None for stage in self.stages)

    @property
    def stage_names(self) -> list[str]:
        """The stages' names, in order."""
        return [stage.name for stage in self.stages]


# Setting one of these takes the place of the others, which say the same thing in another way.
_RIVALS = (
    {"iip3", "oip3"},
    {"iip2", "oip2"},
    {"ip1db", "op1db"},
    {"nf", "nf_dsb", "noise_voltage"},
    {"nf", "nf_dsb", "noise_current"},
    {"nf", "nf_dsb", "termination"},
)


@dataclass(frozen=True, slots=True)
class Step:
    """One step of a change. `stage` is the new stage, or for `set` a stage that holds only what is set."""

    action: Literal["insert", "replace", "set", "remove"]
    name: str
    place: Place
    stage: Stage | None = None
    neighbour: str = ""
    neighbour_place: Place | None = None
    before: bool = False

    @property
    def words(self) -> str:
        """The step in words."""
        if self.action == "insert":
            return f"{self.name} inserted {'before' if self.before else 'after'} {self.neighbour}"
        if self.action == "replace":
            assert self.stage is not None
            new = self.stage.name
            return f"{self.name} replaced" + (f" by {new}" if new != self.name else "")
        if self.action == "set":
            assert self.stage is not None
            return f"{self.name}: {', '.join(sorted(_set_names(self.stage)))} set"
        return f"{self.name} removed"


def _set_names(stage: Stage) -> list[str]:
    names = [name.replace("_", " ") for name in stage.parameters]
    names += ["gain range"] if stage.gain_range else []
    names += ["response"] if stage.response else []
    names += ["lo"] if stage.oscillator else []
    return names + (["output"] if stage.output else [])


def merge_stage(old: Stage, new: Stage) -> Stage:
    """The stage with what is set in `new` put in the place of what said the same before."""
    dropped: set[str] = set()
    for name in new.parameters:
        for rivals in _RIVALS:
            if name in rivals:
                dropped |= rivals
    if new.response is not None:
        dropped.add("gain")
    kept = {name: found for name, found in old.parameters.items() if name not in dropped}
    if {"noise_voltage", "noise_current", "termination"} & set(new.parameters):
        own = {n: p for n, p in old.parameters.items() if n in ("noise_voltage", "noise_current", "termination")}
        kept |= own
    return replace(
        old,
        parameters={**kept, **new.parameters},
        gain_range=new.gain_range or old.gain_range,
        response=new.response or (None if "gain" in new.parameters else old.response),
        oscillator=new.oscillator or old.oscillator,
        output=new.output or old.output,
        part=new.part or old.part,
        note=new.note or old.note,
    )


def apply_steps(chain: Chain, steps: Iterable[Step], problems: Problems) -> Chain | None:
    """The chain after the steps, in their order; None when one of them cannot be done (all faults are reported)."""
    stages = list(chain.stages)
    sound = True
    for step in steps:
        sound = _apply(stages, step, problems) and sound
    if not stages:
        first = next(iter(steps), None)
        problems.add(first.place if first else chain.place, "no-stages", f"No stage is left in chain '{chain.name}'.")
        return None
    return replace(chain, stages=tuple(stages)) if sound else None


def _apply(stages: list[Stage], step: Step, problems: Problems) -> bool:
    names = [stage.name for stage in stages]
    looked_for, place = (
        (step.neighbour, step.neighbour_place or step.place)
        if step.action == "insert"
        else (
            step.name,
            step.place,
        )
    )
    if looked_for not in names:
        message = f"'{looked_for}' is no stage of the chain here."
        problems.add(place, "unknown-stage", message, did_you_mean(looked_for, names))
        return False
    index = names.index(looked_for)
    if step.action == "remove":
        del stages[index]
        return True
    assert step.stage is not None
    if step.action == "set":
        stages[index] = merge_stage(stages[index], step.stage)
        return True
    if step.stage.name in names and not (step.action == "replace" and step.stage.name == step.name):
        message = f"A stage named '{step.stage.name}' is in the chain already; names are given once."
        problems.add(step.stage.place, "duplicate-stage", message)
        return False
    if step.action == "replace":
        stages[index] = step.stage
    else:
        stages.insert(index if step.before else index + 1, step.stage)
    return True


def same_hardware(before: Chain, after: Chain) -> Chain:
    """A chain written out again, in which what is as it was keeps its source: one tolerance, one unknown error."""
    old = {stage.name: stage.parameters for stage in before.stages}
    stages = tuple(
        replace(stage, parameters={n: _same(old.get(stage.name, {}).get(n), p) for n, p in stage.parameters.items()})
        for stage in after.stages
    )
    return replace(after, stages=stages)


def _same(old: Parameter | None, new: Parameter) -> Parameter:
    return old if old is not None and (old.value, old.u) == (new.value, new.u) else new


def changed_stages(before: Chain | None, after: Chain) -> dict[str, str]:
    """What happened to each stage of `after` since `before`: name -> new or changed."""
    if before is None:
        return {}
    old = {stage.name: stage for stage in before.stages}
    said: dict[str, str] = {}
    for stage in after.stages:
        if stage.name not in old:
            said[stage.name] = "new"
        elif replace(stage, place=old[stage.name].place) != old[stage.name]:
            said[stage.name] = "changed"
    return said
