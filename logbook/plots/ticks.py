"""Round numbers along an axis, and how they are written."""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, floor, isfinite, log10

_PREFIXES = {12: "T", 9: "G", 6: "M", 3: "k", 0: "", -3: "m", -6: "µ", -9: "n", -12: "p", -15: "f"}
_PREFIXED = frozenset({"Hz", "V", "A", "W", "s", "F", "H", "ohm", "Ω", "V/rtHz", "A/rtHz", "V/√Hz", "A/√Hz"})
_SHOWN = (("rtHz", "√Hz"), ("ohm", "Ω"), ("degC", "°C"))
# Longer than this and the ticks say how far they are from a round number instead.
_LONGEST = 7


@dataclass(frozen=True, slots=True)
class Ticks:
    """Where ticks stand, what is written at them, and the axis' label with the unit they are in."""

    values: tuple[float, ...]
    texts: tuple[str, ...]
    label: str


def linear_ticks(low: float, high: float, label: str, most: int) -> Ticks:
    """At most about so many ticks at 1, 2 or 5 times a power of ten, from low to high."""
    step = round_step((high - low) / most)
    values = [step * i for i in range(ceil(low / step - 1e-9), floor(high / step + 1e-9) + 1)]
    name, unit = split_label(label)
    power = _power(max(abs(low), abs(high))) if unit in _PREFIXED else 0
    texts = _texts(values, step, power)
    if max(map(len, texts), default=0) > _LONGEST and unit in _PREFIXED:
        return _from_a_round_number(values, step, name, unit)
    return Ticks(tuple(values), texts, joined_label(name, _PREFIXES[power] + unit))


def log_ticks(low: float, high: float, label: str, most: int) -> Ticks:
    """Ticks at powers of ten, at 2 and 5 times them where there is room, each with its own prefix."""
    name, unit = split_label(label)
    decades = log10(high / low)
    mantissas = (1, 2, 5) if decades < most / 3 else (1,)
    every = max(1, ceil(decades / most))
    powers = range(floor(log10(low)), ceil(log10(high)) + 1)
    values = [m * 10.0**p for p in powers if p % every == 0 for m in mantissas]
    values = [v for v in values if low * 0.999999 <= v <= high * 1.000001]
    if len(values) < 2:
        return linear_ticks(low, high, label, most)
    power = _power(values[len(values) // 2]) if unit in _PREFIXED else 0
    texts = tuple(f"{v / 10.0**power:.6g}" for v in values)
    if unit in _PREFIXED and max(map(len, texts)) > 4:
        return Ticks(tuple(values), tuple(_with_prefix(v, unit) for v in values), name)
    return Ticks(tuple(values), texts, joined_label(name, _PREFIXES[power] + unit))


def round_step(rough: float) -> float:
    """The next 1, 2 or 5 times a power of ten that is no smaller."""
    power = 10.0 ** floor(log10(rough))
    return next(m * power for m in (1.0, 2.0, 5.0, 10.0, 20.0) if m * power >= rough * 0.999999)


def split_label(label: str) -> tuple[str, str]:
    """`level, dBm` as `level` and `dBm`; a label without a comma has no unit."""
    name, comma, unit = label.rpartition(", ")
    return (name, unit) if comma and " " not in unit else (label, "")


def joined_label(name: str, unit: str) -> str:
    """A label from its parts."""
    for written, shown in _SHOWN:
        unit = unit.replace(written, shown)
    return f"{name}, {unit}" if unit and name else name or unit


def _power(largest: float) -> int:
    if not isfinite(largest) or largest <= 0:
        return 0
    return min(12, max(-15, 3 * floor(log10(largest) / 3 + 1e-9)))


def _texts(values: list[float], step: float, power: int) -> tuple[str, ...]:
    scaled = step / 10.0**power
    decimals = max(0, -floor(log10(scaled) + 1e-9))
    return tuple(_plain(v / 10.0**power, decimals) for v in values)


def _plain(value: float, decimals: int) -> str:
    if decimals > 9 or abs(value) >= 1e7:
        return f"{value:.4g}"
    written = f"{value:.{decimals}f}"
    return written.removeprefix("-") if float(written) == 0 else written


def _with_prefix(value: float, unit: str) -> str:
    power = _power(value)
    return f"{value / 10.0**power:g} {joined_label('', _PREFIXES[power] + unit)}"


def _from_a_round_number(values: list[float], step: float, name: str, unit: str) -> Ticks:
    middle = values[len(values) // 2]
    power = _power(max(step, abs(values[-1] - middle)))
    texts = tuple(
        "+" + t if v > middle else t
        for t, v in zip(_texts([v - middle for v in values], step, power), values, strict=True)
    )
    centre = _power(abs(middle))
    where = f"{middle / 10.0**centre:.12g} {_PREFIXES[centre]}{unit}"
    return Ticks(tuple(values), texts, joined_label(f"{name} from {where}", _PREFIXES[power] + unit))
