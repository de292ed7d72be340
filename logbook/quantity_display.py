"""Numbers as they are shown: prefixes of engineering, and digits as many as the uncertainty bears."""

from __future__ import annotations

from decimal import Decimal
from functools import lru_cache
from math import floor, isfinite, log10

NOT_KNOWN = "not known"

_PREFIXES = (
    (12, "T"),
    (9, "G"),
    (6, "M"),
    (3, "k"),
    (0, ""),
    (-3, "m"),
    (-6, "\u00b5"),
    (-9, "n"),
    (-12, "p"),
    (-15, "f"),
)
_PREFIXED = frozenset({"Hz", "V", "A", "W", "ohm", "V/rtHz", "A/rtHz", "s", "F", "H", "V/dB"})
_SHOWN = {
    "ohm": "\u03a9",
    "V/rtHz": "V/\u221aHz",
    "A/rtHz": "A/\u221aHz",
    "degC": "\u00b0C",
    "dBuV": "dB\u00b5V",
    "1": "",
}
_DECIBELS = frozenset({"dB", "dBm", "dBc", "dBm/Hz", "dBc/Hz", "dBuV"})
_MOST_DECIMALS = 12


def show_value(value: float | None, unit: str, u: float | None = None) -> str:
    """A number in its base unit as text, such as `-118.40 \u00b1 0.30 dBm`; the digits follow u (JCGM 100:2008 7.2.6).

    Two significant digits of the standard uncertainty u where it is known; else two decimals for decibels and money,
    and four significant digits (six of a frequency) for the rest. nan and None are `not known`.
    """
    return _show(value, unit, u, "")


def show_delta(value: float | None, unit: str, u: float | None = None) -> str:
    """A difference as text: as `show_value`, with its sign written out."""
    return _show(value, unit, u, "+")


def _show(value: float | None, unit: str, u: float | None, sign: str) -> str:
    if value is None or not isfinite(value):
        return NOT_KNOWN
    if u is not None and not isfinite(u):
        u = None
    largest = max(abs(value), u or 0.0)
    power, prefix = _prefix(largest) if unit in _PREFIXED else (0, "")
    number = _number(value, u, unit, power, sign)
    if number.lstrip("+-").startswith("1000") and not u and unit in _PREFIXED and power < 12:
        # 999.99996 kHz has been rounded up to 1000 kHz
        power, prefix = _prefix(largest * 1.001)
        number = _number(value, u, unit, power, sign)
    return f"{number} {prefix}{_SHOWN.get(unit, unit)}".rstrip()


def _prefix(size: float) -> tuple[int, str]:
    if size == 0:
        return 0, ""
    for power, prefix in _PREFIXES:
        if size >= float(f"1e{power}"):
            return power, prefix
    return _PREFIXES[-1]


def _number(value: float, u: float | None, unit: str, power: int, sign: str) -> str:
    scaled = _shift(value, -power)
    if u:
        step = _shift(u, -power)
        decimals = _decimals(step)
        if decimals > _MOST_DECIMALS:
            return f"{_signed(f'{scaled:{sign}.{_MOST_DECIMALS + 2}g}')} \u00b1 {step:.2g}"
        return f"{_fixed(scaled, decimals, sign)} \u00b1 {_fixed(step, decimals, '')}"
    if unit in _DECIBELS or _is_currency(unit):
        shown = _fixed(scaled, 2, sign)
    else:
        digits = 7 if unit == "Hz" else 4
        # Without a prefix large numbers would be written as powers of ten.
        plain = unit != "Hz" and 10**digits <= abs(scaled) < 1e9
        shown = _signed(f"{scaled:{sign}.0f}" if plain else f"{scaled:{sign}.{digits}g}")
    return shown if u is None else f"{shown} \u00b1 0"


def _decimals(u: float) -> int:
    """The decimals that leave two significant digits of u; below zero: tens, hundreds."""
    decimals = 1 - floor(log10(u))
    return decimals - 1 if round(u, decimals) >= 10.0 ** (2 - decimals) else decimals


def _fixed(value: float, decimals: int, sign: str) -> str:
    return _signed(f"{round(value, decimals):{sign}.{max(decimals, 0)}f}")


def _signed(number: str) -> str:
    """Zero has no sign."""
    return number if number.strip("+-0.") else number.lstrip("+-")


def _shift(value: float, power: int) -> float:
    """value * 10**power, rounded once."""
    mantissa, _, exponent = repr(float(value)).partition("e")
    return float(f"{mantissa}e{int(exponent or 0) + power}")


def _is_currency(unit: str) -> bool:
    return len(unit) == 3 and unit.isalpha() and unit.isupper()


@lru_cache(maxsize=4096)
def _shortest(hz: float) -> tuple[str, str]:
    if not isfinite(hz):
        return NOT_KNOWN, ""
    power, prefix = _prefix(abs(hz)) if abs(hz) >= 1 else (0, "")
    # Twelve digits: what sums of frequencies leave behind them must not part 28.3 MHz from 28.3 MHz.
    digits = Decimal(f"{hz:.12g}").scaleb(-power).normalize()
    return f"{digits if digits else Decimal(0):f}", prefix + "Hz"


def show_frequency(hz: float) -> str:
    """The shortest text of a frequency, exact to twelve digits: `50.1 MHz`."""
    number, unit = _shortest(hz)
    return f"{number} {unit}".rstrip()


def key_frequency(hz: float) -> str:
    """A frequency as it stands in the key of a result: `50.1MHz`."""
    return "".join(_shortest(hz))
