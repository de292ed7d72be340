"""Whether two results stand on equal terms; where they do not, which condition differs and what to read again."""

from __future__ import annotations

from math import isnan, log10

from logbook.model import Conditions, Result
from logbook.quantities import known_quantity
from logbook.quantity_display import show_frequency, show_value

# Quantities that depend on the level at the input: a drive that differs by more than this is another condition (dB).
# A level follows its drive, a product twice or three times; an intercept hardly minds, well below compression.
_DRIVEN = {"output_level": 0.1, "harmonic": 0.1, "spur_level": 0.1, "oip3": 0.5, "oip2": 0.5}


def why_not_comparable(before: Result, after: Result) -> str:
    """The condition that keeps two results of one key apart, in words with what to do; nothing when there is none."""
    if before.unit != after.unit:
        return f"{before.revision} is in {before.unit} and {after.revision} in {after.unit}"
    known = known_quantity(before.quantity)
    if known is not None and known.noise:
        return _noise(before, after)
    if known is not None and known.name in _DRIVEN:
        return _drive(before, after, _DRIVEN[known.name])
    return ""


def _noise(before: Result, after: Result) -> str:
    old, new = before.conditions, after.conditions
    if "peak" in (old.averaging, new.averaging):
        return _peak(before, after)
    for what in ("averaging", "rbw_hz"):
        if what == "rbw_hz" and known_dimension(before) != "level":
            continue
        one, other = getattr(old, what), getattr(new, what)
        if (one is None) != (other is None):
            silent, word = (before, after) if one is None else (after, before)
            name = what.removesuffix("_hz")
            return f"{silent.revision} does not state its {name} and {word.revision} does; add it, or read it again"
    one, other = old.source_temperature_k, new.source_temperature_k
    if one is not None and other is not None and abs(one - other) > 0.01 * max(one, other):
        return (
            f"{before.revision} was read with a source at {show_value(one, 'K')} and {after.revision} at "
            f"{show_value(other, 'K')}; read {after.revision} again with the source of {before.revision}"
        )
    return ""


def known_dimension(result: Result) -> str:
    """The dimension of a result's quantity; nothing for a name of the user's own."""
    known = known_quantity(result.quantity)
    return known.dimension if known is not None else ""


def _peak(before: Result, after: Result) -> str:
    old, new = before.conditions, after.conditions
    if old.averaging != new.averaging:
        return (
            f"{before.revision} was read with {old.averaging or 'unstated'} averaging and {after.revision} with "
            f"{new.averaging or 'unstated'}; read {_again(before, after)}"
        )
    for what in ("rbw_hz", "vbw_hz"):
        if getattr(old, what) != getattr(new, what) or (what == "rbw_hz" and old.rbw_hz is None):
            name = what.removesuffix("_hz")
            return (
                f"peak readings compare only at one {name}: {before.revision} {_hz(getattr(old, what))}, "
                f"{after.revision} {_hz(getattr(new, what))}; read {_again(before, after)}"
            )
    return ""


def _again(before: Result, after: Result) -> str:
    return f"{before.revision}'s conditions again on {after.revision} ({conditions_words(before.conditions)})"


def _hz(value: float | None) -> str:
    return "not stated" if value is None else show_frequency(value)


def _drive(before: Result, after: Result, bearable_db: float) -> str:
    old, new = before.conditions.drive_dbm, after.conditions.drive_dbm
    if old is None or new is None or abs(old - new) <= bearable_db:
        return ""
    return (
        f"{before.revision} was driven with {show_value(old, 'dBm')} and {after.revision} with "
        f"{show_value(new, 'dBm')}; read {after.revision} again at {show_value(old, 'dBm')}"
    )


def conditions_words(conditions: Conditions) -> str:
    """The conditions of a reading in a few words."""
    words = []
    if conditions.bench:
        words.append(f"bench {conditions.bench}")
    if conditions.through:
        words.append("through " + ", ".join(conditions.through))
    if conditions.rbw_hz is not None:
        words.append(f"RBW {show_frequency(conditions.rbw_hz)}")
    if conditions.vbw_hz is not None:
        words.append(f"VBW {show_frequency(conditions.vbw_hz)}")
    if conditions.averaging:
        words.append(f"{conditions.averaging} averaging")
    if conditions.drive_dbm is not None:
        words.append(f"driven with {show_value(conditions.drive_dbm, 'dBm')}")
    if conditions.source_temperature_k is not None:
        words.append(f"source at {show_value(conditions.source_temperature_k, 'K')}")
    if conditions.temperature_c is not None:
        words.append(show_value(conditions.temperature_c, "degC"))
    return ", ".join(words)


def in_rbw(result: Result, rbw_hz: float | None) -> float:
    """A noise level in another noise bandwidth; any other result, or one without a bandwidth, as it is."""
    known = known_quantity(result.quantity)
    own = result.conditions.rbw_hz
    if known is None or not known.noise or known.dimension != "level" or own is None or rbw_hz is None:
        return result.value
    return result.value if isnan(result.value) else result.value + 10 * log10(rbw_hz / own)
