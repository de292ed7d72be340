"""`-96.4(3) dBm` -> Quantity, with its uncertainty as metrology writes it; the way back is in `quantity_display`."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from math import inf, isfinite, log, log10, nan, sqrt

from logbook.quantity_display import key_frequency, show_delta, show_frequency, show_value
from logbook.quantity_faults import (
    QuantityError,
    bad_uncertainty,
    no_unit,
    not_finite,
    unknown_unit,
    unreadable,
    wrong_dimension,
)
from logbook.units import ABSOLUTE_ZERO_C, DECIBEL_DIMENSIONS, Unit, find_unit

__all__ = [
    "Quantity",
    "QuantityError",
    "has_level",
    "key_frequency",
    "level_dbm",
    "read_quantity",
    "read_repeated",
    "show_delta",
    "show_frequency",
    "show_value",
]


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number in its base unit; `u` is its standard uncertainty, None when not stated.

    `repeats` holds the single readings, in the base unit, where the value is their mean.
    """

    value: float
    unit: str
    dimension: str
    u: float | None
    written: str
    repeats: tuple[float, ...] = ()


_DIGITS = r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)"
_EXPONENT = r"[eE][+-]?[0-9]+"
_LETTER = r"A-Za-z\u00b5\u03bc\u03a9\u2126\u00b0\u2103%\u221a\u20ac$\u00a3"
_UNIT = rf"[{_LETTER}](?:[{_LETTER}/0-9^]|\(Hz\))*(?:[ ]rms)?"
_FORM = re.compile(
    rf"""\s*(?P<open>\(\s*)?
    (?:(?P<number>[+-]?{_DIGITS})(?:\((?P<last>{_DIGITS})\))?(?P<exponent>{_EXPONENT})?\s*(?P<unit>{_UNIT})?\s*)?
    (?:(?:\u00b1|\+/-)\s*(?P<around>{_DIGITS}(?:{_EXPONENT})?)\s*(?P<close>\)\s*)?(?P<of>{_UNIT})?\s*)?
    (?:\(\s*k\s*=\s*(?P<k>{_DIGITS})\s*\)\s*)?""",
    re.VERBOSE,
)

# A minus sign or an en dash is what a word processor makes of a hyphen; both count as minus.
_SIGNS = str.maketrans({"\u2212": "-", "\u2013": "-"})

_RELATIVE = frozenset({"%", "ppm", "ppb"})
_LARGEST_EXPONENT = 999
_LOWEST = {"temperature": ABSOLUTE_ZERO_C, "noise_temperature": 0.0}


def read_quantity(text: str, dimension: str | tuple[str, ...], what: str = "") -> Quantity:
    """The quantity written in a text, of the dimension or of one of the dimensions.

    Standard uncertainty (JCGM 100:2008): digits in brackets as they stand (7.2.2); limits after the plus-minus sign
    of a rectangular distribution, divided by the root of 3 (4.3.7); with `(k=2)` expanded, divided by k (4.3.3).
    Limits alone, `\u00b1 1.5 dB`, are an accuracy: its value is 0. `what` is the noun for messages ("gain").
    Raises QuantityError, and nothing else, for any other text.
    """
    return _read(text, (dimension,) if isinstance(dimension, str) else tuple(dimension), what)


@lru_cache(maxsize=8192)
def _read(text: str, wanted: tuple[str, ...], what: str) -> Quantity:
    plain = text.translate(_SIGNS)
    form = _FORM.fullmatch(plain)
    if form is None or not _is_whole(form):
        raise unreadable(text, plain, wanted, what, _FORM)
    unit = _unit(text, form, wanted, what)
    number, exponent = form["number"], form["exponent"]
    value = 0.0 if number is None else _scaled(number, exponent, unit)
    u = _uncertainty(text, form, unit, value)
    if unit.offset:
        # The sum of two decimal numbers: ten decimals drop what binary arithmetic adds to 290 - 273.15.
        value = round(value + unit.offset, 10)
    if not isfinite(value):
        raise not_finite(text.strip(), max(form.start("number"), 0))
    if value < _LOWEST.get(unit.dimension, -inf):
        raise QuantityError("number", f"'{text.strip()}' is below absolute zero.", "", max(form.start("number"), 0))
    return Quantity(value, unit.base, unit.dimension, u, text.strip())


def _is_whole(form: re.Match[str]) -> bool:
    """Brackets in pairs, one uncertainty at most, and a number or limits at least."""
    around = form["around"] is not None
    if bool(form["open"]) != bool(form["close"]) or (form["close"] and form["unit"]):
        return False
    if form["number"] is None and (form["open"] or not around):
        return False
    if around:
        return form["last"] is None
    return form["k"] is None


def _unit(text: str, form: re.Match[str], wanted: tuple[str, ...], what: str) -> Unit:
    """The unit of the value; in `18 \u00b1 0.5 dB` it stands behind the limits."""
    group = "unit" if form["unit"] or not form["of"] else "of"
    written = form[group] or ""
    offset = max(form.start(group), 0) if written else form.end("exponent" if form["exponent"] else "number")
    if not written and "number" not in wanted:
        raise no_unit(text.strip(), wanted, what, max(offset, 0))
    unit = find_unit(written.replace(" rms", "rms"), wanted)
    if unit is None:
        raise unknown_unit(text.strip(), written, wanted, what, offset)
    if unit.dimension not in wanted:
        raise wrong_dimension(text.strip(), unit, wanted, what, offset)
    return unit


def _scaled(number: str, exponent: str | None, unit: Unit) -> float:
    """A number in its base unit but for the offset, rounded once where the factor is a power of ten."""
    written = int(exponent[1:]) if exponent and len(exponent) < 9 else 0
    if exponent and (len(exponent) >= 9 or abs(written) > _LARGEST_EXPONENT):
        return inf
    if unit.power is None:
        return float(f"{number}e{written}") * unit.factor
    return float(f"{number}e{written + unit.power}")


def _uncertainty(text: str, form: re.Match[str], unit: Unit, value: float) -> float | None:
    if form["last"] is not None:
        u = _scaled(_last_digits(form["number"], form["last"]), form["exponent"], unit)
        return _usable(u, text, form.start("last"))
    if form["around"] is None:
        return None
    limits = _limits(text, form, unit, value)
    divisor = sqrt(3.0) if form["k"] is None else float(form["k"])
    if not divisor:
        raise bad_uncertainty(text.strip(), "has a coverage factor of zero", "Write it as '(k=2)'.", form.start("k"))
    return _usable(limits / divisor, text, form.start("around"))


def _last_digits(number: str, last: str) -> str:
    """(35) behind 100.02147 is 0.00035; with a point of its own, (0.00035), it is the uncertainty itself."""
    decimals = len(number.partition(".")[2])
    if "." in last or not decimals:
        return last
    digits = last.rjust(decimals + 1, "0")
    return f"{digits[:-decimals]}.{digits[-decimals:]}"


def _limits(text: str, form: re.Match[str], unit: Unit, value: float) -> float:
    number, _, exponent = form["around"].lower().partition("e")
    power = "e" + exponent if exponent else None
    own = form["of"]
    offset = form.start("of")
    if own in _RELATIVE and form["number"] and not form["unit"] and not form["close"]:
        hint = f"Write '({form['number']} \u00b1 {form['around']}) {own}', or the limits as a number without '{own}'."
        raise bad_uncertainty(text.strip(), "can be meant in two ways", hint, offset)
    if not own or not form["unit"]:
        return abs(_scaled(number, power, unit))
    if own in _RELATIVE and unit.dimension != "number":
        if unit.dimension in DECIBEL_DIMENSIONS or unit.offset or form["number"] is None:
            why = f"is a part of the value, which means nothing in {unit.symbol}"
            raise bad_uncertainty(text.strip(), why, "Write the limits in the unit of the value.", offset)
        part = find_unit(own, ("number",))
        return abs(value) * _scaled(number, power, part) if part else nan
    return _limits_with_unit(text, number, power, own, unit, offset)


def _limits_with_unit(text: str, number: str, power: str | None, own: str, unit: Unit, offset: int) -> float:
    """`10 MHz \u00b1 50 kHz`, `-30 dBm \u00b1 0.5 dB`, `25 degC \u00b1 2 K`."""
    accepted: tuple[str, ...] = (unit.dimension,)
    if unit.dimension in DECIBEL_DIMENSIONS:
        accepted = (unit.dimension, "ratio")
    elif unit.dimension in ("temperature", "noise_temperature"):
        accepted = (unit.dimension, "temperature_difference")
    other = find_unit(own.replace(" rms", "rms"), accepted)
    if other is None or other.dimension not in accepted or other.base not in (unit.base, "dB", "K"):
        hint = "Write the limits in the unit of the value."
        raise bad_uncertainty(text.strip(), f"has the unit '{own}', which does not fit the value's", hint, offset)
    return abs(_scaled(number, power, other))


def _usable(u: float, text: str, offset: int) -> float:
    if isfinite(u) and u > 0:
        return u
    why = "is zero" if u == 0 else "is no finite number"
    raise bad_uncertainty(text.strip(), why, "Leave it out where it is not known.", offset)


def read_repeated(texts: Sequence[str], dimension: str | tuple[str, ...], what: str = "") -> Quantity:
    """Repeated readings: their mean, and the standard uncertainty of the mean s/sqrt(n) (JCGM 100:2008 4.2.3).

    Readings that are all the same are known no better than their last digit: u is then that step over the root of
    12 (F.2.2.1). A single text is read as by `read_quantity`.
    """
    if len(texts) == 1:
        return read_quantity(texts[0], dimension, what)
    written = f"[{', '.join(text.strip() for text in texts)}]"
    readings = [read_quantity(text, dimension, what) for text in texts]
    if not readings:
        raise QuantityError("number", "An empty list holds no reading.", "Write one reading at least.")
    first = readings[0]
    if any(reading.u is not None for reading in readings):
        hint = "Write the readings alone; their scatter gives the uncertainty of the mean."
        raise bad_uncertainty(written, "stands at a single reading of several", hint, 0)
    if any((reading.dimension, reading.unit) != (first.dimension, first.unit) for reading in readings):
        message = f"The readings {written} are not all of one sort."
        raise QuantityError("dimension", message, "Write all of them in the same unit.")
    values = tuple(reading.value for reading in readings)
    mean, u = _mean(values, texts)
    if not isfinite(mean) or not isfinite(u):
        raise not_finite(written, 0)
    return Quantity(mean, first.unit, first.dimension, u, written, values)


def _mean(values: tuple[float, ...], texts: Sequence[str]) -> tuple[float, float]:
    n = len(values)
    if all(value == values[0] for value in values):
        return values[0], max(_last_step(text) for text in texts) / sqrt(12.0)
    mean = sum(value / n for value in values)
    try:
        variance = sum((value - mean) ** 2 for value in values) / (n - 1)
    except OverflowError:
        variance = inf
    return mean, sqrt(variance / n)


def _last_step(text: str) -> float:
    """What one step of the last written digit is worth, in the base unit."""
    form = _FORM.fullmatch(text.translate(_SIGNS))
    if form is None:
        return nan
    unit = find_unit((form["unit"] or "").replace(" rms", "rms"))
    return nan if unit is None else _scaled(_last_digits(form["number"], "1"), form["exponent"], unit)


def level_dbm(quantity: Quantity, impedance_ohm: float) -> tuple[float, float | None]:
    """A level, voltage level, power or rms voltage at an impedance, in dBm, with its standard uncertainty in dB.

    P = V^2 / R; u is carried over to first order. nan where power or voltage is not positive, or the impedance is not.
    """
    if quantity.dimension == "level":
        return quantity.value, quantity.u
    if quantity.dimension == "power":
        return _dbm(quantity, 10.0, 0.0)
    if not impedance_ohm > 0:
        return nan, None
    if quantity.dimension == "voltage_level":
        return quantity.value - 90.0 - 10.0 * log10(impedance_ohm), quantity.u
    if quantity.dimension == "voltage":
        return _dbm(quantity, 20.0, 10.0 * log10(impedance_ohm))
    raise ValueError(f"a {quantity.dimension} has no level")


_OF_LEVELS = {"level", "voltage_level", "power", "voltage", "divisions"}


def has_level(found: Quantity, wanted: str | tuple[str, ...]) -> bool:
    """Whether a quantity is a level where nothing but a level is wanted: zero and negative powers have no dB."""
    asked_for = {wanted} if isinstance(wanted, str) else set(wanted)
    only_levels = "level" in asked_for and asked_for <= _OF_LEVELS
    return found.value > 0 or not only_levels or found.dimension not in ("power", "voltage")


def _dbm(quantity: Quantity, decibels: float, below_db: float) -> tuple[float, float | None]:
    if not quantity.value > 0:
        return nan, None
    u = None if quantity.u is None else decibels / log(10.0) * quantity.u / quantity.value
    return decibels * log10(quantity.value) + 30.0 - below_db, u
