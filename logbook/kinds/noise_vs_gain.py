"""`noise-vs-gain`: output noise at several settings of a gain control, split into what comes before and after it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from math import isnan, nan, sqrt

import numpy as np

from logbook.fields import Field, many, quantity, text
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, each_mapping, measured, not_on_a_plan, overdue_note, setting_of
from logbook.kinds._setting_fields import SETTING_FIELDS
from logbook.model import Block, Result, Source, Values
from logbook.physics.noise_split import (
    NoiseSplit,
    equal_setting,
    noise_after_dbm,
    noise_ahead_dbm,
    part_uncertainties_db,
    split_noise,
    told_apart,
)
from logbook.physics.propagation import propagate
from logbook.problems import did_you_mean
from logbook.quantity_display import show_value
from logbook.showing.noise_vs_gain import Split, show_noise_vs_gain
from logbook.stage_fields import LEVEL

FIELDS = (
    Field("name", text()),
    *SETTING_FIELDS,
    Field("control", text()),
    Field("through_detector", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("source_temperature", quantity("noise_temperature", positive=True)),
    Field(
        "settings",
        many(quantity("ratio"), least=2),
        required=True,
        help="The control's gain at each reading, such as 'settings: [0 dB, 10 dB, 20 dB]'.",
    ),
    Field(
        "noise",
        many(quantity((*LEVEL, "divisions")), least=2),
        required=True,
        help="The output noise at each setting, such as 'noise: [-98.1 dBm, -93.2 dBm, -84.5 dBm]'.",
    ),
    Field("note", text()),
)

# What is left of a cancelled part by rounding, dB.
_NOTHING_DB = 1e-9

EXAMPLE = """\
bench: shack
at: 50.1 MHz
rbw: 3 kHz
averaging: power
settings: [0 dB, 6 dB, 12 dB, 18 dB, 24 dB]
noise: [-97.8(2) dBm, -96.2(2) dBm, -92.9(2) dBm, -87.8(2) dBm, -82.1(2) dBm]
"""


def calculate(block: Block, session: Session) -> Outcome:
    """The split of every mapping."""
    if not not_on_a_plan("read", block.place, session):
        return Outcome()
    return each_mapping(block, session, _one)


def _one(values: Values, session: Session) -> Split | None:
    setting = setting_of(values, session)
    if setting is None or not _sound(values, setting, session):
        return None
    readings = _readings(values, setting)
    if readings is None:
        return None
    settings = np.array([each.value for each in values["settings"]])
    noise = np.array([each.value for each in readings])
    own = [_fresh_u(each) for each in readings]
    u = np.array([nan if each is None else each for each in own])
    stated = None if np.isnan(u).any() else u
    split = split_noise(settings, noise, stated)
    why = _why_not(split, readings, settings)
    apart = not why
    if why:
        results = _not_known(why, readings, values, setting)
    else:
        results = _results(split, _shared(settings, noise, stated, readings), readings, values, setting)
    return Split(tuple(map(float, settings)), tuple(readings), split, apart, values.get("control", ""), results)


def _why_not(split: NoiseSplit, readings: list[Result], settings: np.ndarray) -> str:
    """Why the readings cannot be split; nothing when they can."""
    bound = next((setting for setting, reading in zip(settings, readings, strict=True) if reading.bound), None)
    if bound is not None:
        return f"at {show_value(float(bound), 'dB')} the bench's own noise hides that of the unit"
    if told_apart(split, 2.0):
        return ""
    if isnan(split.u_ahead_w) or isnan(split.u_after_w):
        return "two readings without stated doubt tell nothing of the doubt of the split"
    return "the readings do not tell the two apart"


def _notes(readings: list[Result], setting: Setting) -> tuple[str, ...]:
    """What is to be said of the readings, and of doubt that only some of them state."""
    notes = [note for each in readings for note in each.notes if note not in overdue_note(setting)]
    stated = sum(_fresh_u(each) is not None for each in readings)
    if 0 < stated < len(readings):
        notes.append(
            "only some of the readings state their doubt, so all count alike and their scatter is taken for it"
        )
    return tuple(dict.fromkeys(notes))


def _sound(values: Values, setting: Setting, session: Session) -> bool:
    settings, noise = values["settings"], values["noise"]
    if len(settings) != len(noise):
        message = f"There are {len(settings)} settings and {len(noise)} noise readings; each setting needs its reading."
        session.fault(values.place("noise"), "lengths", message)
        return False
    if len({each.value for each in settings}) < 2:
        message = "All settings are the same; the split needs the noise at two settings at least."
        session.fault(values.place("settings"), "lengths", message, "Take settings some 10 dB apart.")
        return False
    chain, control = session.chains.get(setting.chain), values.get("control")
    if chain is not None and control is not None and chain.stage(control) is None:
        message = f"'{control}' is no stage of chain '{chain.name}' on revision {session.label}."
        session.fault(
            values.place("control"), "unknown-stage", message, did_you_mean(control, chain.stage_names), control
        )
        return False
    if values.get("averaging") == "peak":
        message = "Peak readings of noise say nothing of its power, so they cannot be split."
        session.fault(values.place("averaging"), "peak", message, "Read with power averaging.")
        return False
    return True


def _readings(values: Values, setting: Setting) -> list[Result] | None:
    at = values.get("at")
    place, found = values.place("noise"), []
    for each in values["noise"]:
        result = measured("output_noise", each, setting, place, None if at is None else at.value)
        if result is None:
            return None
        found.append(result)
    return found


def _fresh_u(result: Result) -> float | None:
    """The doubt that a reading does not share with the others; None when nothing of it is stated."""
    own = [part for source, part in (result.parts or {}).items() if source.sort == "fresh"]
    return sqrt(sum(part * part for part in own)) if own else None


def _shared(
    settings: np.ndarray, noise: np.ndarray, u: np.ndarray | None, readings: list[Result]
) -> list[dict[Source, float]]:
    """What the doubt that readings share does to each of the three results: all are split again, moved by it.

    What moves all readings alike leaves the equal setting; what a detector's slope is wrong does not.
    """
    moved: dict[Source, np.ndarray] = {}
    for number, result in enumerate(readings):
        for source, part in (result.parts or {}).items():
            if source.sort != "fresh":
                moved.setdefault(source, np.zeros(len(readings)))[number] = part

    def numbers(given: Mapping[Source, float]) -> tuple[float, float, float]:
        shift = sum((by * moved[source] for source, by in given.items()), np.zeros(len(readings)))
        split = split_noise(settings, noise + shift, u)
        return noise_ahead_dbm(split), noise_after_dbm(split), equal_setting(split)[0]

    inputs: dict[Source, tuple[float, float | None]] = dict.fromkeys(moved, (0.0, 1.0))
    found = []
    for which in range(3):
        _, parts = propagate(lambda given, i=which: numbers(given)[i], inputs)  # type: ignore[misc]
        found.append({source: part for source, part in parts.items() if abs(part) > _NOTHING_DB})
    return found


def _results(
    split: NoiseSplit, shared: list[dict[Source, float]], readings: list[Result], values: Values, setting: Setting
) -> tuple[Result, ...]:
    """Noise from ahead (as it is at 0 dB) and from after the control, and the setting at which they are equal."""
    place, at = values.place("noise"), readings[0].at_hz
    u_ahead, u_after = part_uncertainties_db(split)
    level, u_equal = equal_setting(split)
    notes = _notes(readings, setting)
    found = []
    for (quantity_, value, unit, u), common in zip(
        (
            ("noise_ahead", noise_ahead_dbm(split), "dBm", u_ahead),
            ("noise_after", noise_after_dbm(split), "dBm", u_after),
            ("equal_setting", level, "dB", u_equal),
        ),
        shared,
        strict=True,
    ):
        parts = {**common, _own(values, quantity_): u}
        found.append(derived(quantity_, value, unit, parts, setting, place, at_hz=at, notes=notes))
    if readings[0].conditions.averaging is None:
        return tuple(found)
    # What was read is a power average already.
    return tuple(replace(each, conditions=replace(each.conditions, averaging="power")) for each in found)


def _own(values: Values, what: str) -> Source:
    place = values.place("noise")
    return Source("fresh", f"{place.file}:{place.line}", what, "least squares")


def _not_known(words: str, readings: list[Result], values: Values, setting: Setting) -> tuple[Result, ...]:
    found = []
    for quantity_, unit in (("noise_ahead", "dBm"), ("noise_after", "dBm"), ("equal_setting", "dB")):
        place, at = values.place("noise"), readings[0].at_hz
        found.append(derived(quantity_, nan, unit, None, setting, place, at_hz=at, words=words))
    return tuple(found)


KIND = Kind(
    word="noise-vs-gain",
    title="Noise against gain",
    about=(
        "Output noise at several settings of a gain control: least squares splits it into what comes from ahead of the "
        "control and what comes from after it, and says which of the two a change should attack."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show_noise_vs_gain,
)
