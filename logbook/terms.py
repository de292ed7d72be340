"""Equal terms: what an instrument showed, brought to the unit's connector and to power average, free of bench noise."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import log10

from logbook.bench import Bench, PathPart
from logbook.hardware import Parameter
from logbook.model import Conditions, Source
from logbook.physics.averaging import averaging_correction_db, carrier_from_log_average, subtract_power
from logbook.quantities import KnownQuantity
from logbook.quantity_display import show_value

# Below this excess over the bench's own floor only an upper bound is known (dB).
BOUND_DB = 1.0

# Noise at the unit's input that lies so far below the bench's own floor was not shown by this instrument (dB).
_NOT_SHOWN_DB = -3.0


@dataclass(frozen=True, slots=True)
class Shown:
    """A value as it was read: `u` is the doubt stated with it, `where` the entry and line that make it fresh."""

    value: float
    u: float | None
    where: str
    quantity: str
    conditions: Conditions


@dataclass(frozen=True, slots=True)
class EqualTerms:
    """The value on equal terms, how it got there, and its doubt by source."""

    value: float
    parts: dict[Source, float]
    corrections: tuple[tuple[str, float], ...] = ()
    bound: str = ""
    notes: tuple[str, ...] = ()


def on_equal_terms(shown: Shown, known: KnownQuantity | None, bench: Bench | None) -> EqualTerms:
    """Bring a reading to equal terms; each correction in dB is listed in the order in which it is added."""
    parts = _parts(shown, known, bench)
    state = EqualTerms(shown.value, parts)
    if known is None or known.side != "shown":
        return state
    if known.noise:
        state = _averaged(state, shown.conditions)
    path = _path(shown.conditions, bench)
    state = _free_of_bench(state, shown, known, bench, path)
    if shown.conditions.shown_at != "unit":
        for part in path:
            state = _add(state, f"loss of {part.name}", part.loss.value)
    if known.noise and known.dimension == "level" and bench is not None and bench.noise_ratio != 1.0:
        state = _add(state, f"noise bandwidth {bench.noise_ratio:.4g} of RBW", -10 * log10(bench.noise_ratio))
    return state


def _add(state: EqualTerms, label: str, amount: float) -> EqualTerms:
    corrections = (*state.corrections, (label, amount))
    return EqualTerms(state.value + amount, state.parts, corrections, state.bound, state.notes)


def _path(conditions: Conditions, bench: Bench | None) -> list[PathPart]:
    return [] if bench is None else [part for part in bench.path if part.name in conditions.through]


def _parts(shown: Shown, known: KnownQuantity | None, bench: Bench | None) -> dict[Source, float]:
    """The doubts that enter a value: what was stated with it, and what its bench brings for a quantity of this sort."""
    parts: dict[Source, float] = {}
    if shown.u:
        parts[Source("fresh", shown.where, shown.quantity, "reading")] = shown.u
    if bench is None or known is None:
        return parts
    side = known.side
    if side in ("shown", "gain"):
        _take(parts, bench.accuracy)
    if side in ("gain", "drive") or (known.name == "output_level" and shown.conditions.drive_dbm is not None):
        # An output level stands for its drive: an error of the source moves it as an error of the reading does.
        _take(parts, bench.drive_accuracy)
    if side in ("shown", "gain", "relative") and bench.linearity_u:
        parts[Source("fresh", shown.where, shown.quantity, "linearity")] = bench.linearity_u
    if side == "shown":
        for part in _path(shown.conditions, bench):
            _take(parts, part.loss)
    return parts


def _take(parts: dict[Source, float], parameter: Parameter | None) -> None:
    if parameter is not None and parameter.u:
        parts[parameter.source] = parameter.u


def _averaged(state: EqualTerms, conditions: Conditions) -> EqualTerms:
    correction = averaging_correction_db(conditions.averaging) if conditions.averaging in ("log", "voltage") else 0.0
    if correction:
        return _add(state, f"{conditions.averaging} average to power average", correction)
    return state


def _free_of_bench(
    state: EqualTerms, shown: Shown, known: KnownQuantity, bench: Bench | None, path: list[PathPart]
) -> EqualTerms:
    """Take the bench's own noise off a reading near it; within 1 dB of it only an upper bound is left."""
    floor = _bench_floor(shown, known, bench)
    if floor is None or shown.conditions.averaging == "peak":
        return state
    if shown.conditions.shown_at == "unit":
        floor += sum(part.loss.value for part in path)
    excess = state.value - floor
    if excess < _NOT_SHOWN_DB and known.name in ("noise_floor", "noise_density"):
        return state
    if excess < BOUND_DB:
        note = f"within {BOUND_DB:.0f} dB of the bench's own noise ({show_value(floor, 'dBm')}): an upper bound only"
        return replace(state, bound="upper", notes=(*state.notes, note))
    if known.noise or shown.conditions.averaging == "power":
        corrected = subtract_power(state.value, floor)
    elif shown.conditions.averaging == "log":
        corrected = carrier_from_log_average(state.value, floor)
    else:
        return _unaveraged(state, excess, shown.conditions.averaging)
    # The correction steepens the scale: an error of the reading moves the corrected value by more than itself.
    steeper = float(corrected.per_reading)
    parts = {source: part * (steeper if source.what != "loss" else 1) for source, part in state.parts.items()}
    label = f"bench's own noise ({show_value(floor, 'dBm')}) taken off"
    return replace(_add(state, label, float(corrected.value_dbm) - state.value), parts=parts)


def _unaveraged(state: EqualTerms, excess: float, averaging: str | None) -> EqualTerms:
    if excess >= 20:
        return state
    why = "its averaging is not stated" if averaging is None else f"no law is known for its {averaging} average"
    note = f"only {excess:.1f} dB above the bench's own noise and {why}: not corrected"
    return replace(state, notes=(*state.notes, note))


def _bench_floor(shown: Shown, known: KnownQuantity, bench: Bench | None) -> float | None:
    if bench is None or bench.floor_dbm_per_hz is None:
        return None
    if known.dimension == "density":
        return bench.floor_dbm_per_hz
    if shown.conditions.rbw_hz is None:
        return None
    return bench.floor_dbm_per_hz + 10 * log10(shown.conditions.rbw_hz * bench.noise_ratio)
