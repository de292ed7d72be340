"""What a user may set for a logbook, read in one way for the site and for the command line."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import isfinite
from typing import Any

from logbook.book import Settings
from logbook.problems import did_you_mean
from logbook.quantity import QuantityError, read_quantity

PROBLEM, REGRESSION, TARGET = "problem", "regression", "target"
FAIL_ON = (PROBLEM, REGRESSION, TARGET)


class OptionError(Exception):
    """An option that cannot be used, in words for the one who wrote it."""


@dataclass(frozen=True, slots=True)
class Options:
    """What a book is computed with, and what a run fails on."""

    settings: Settings = field(default_factory=Settings)
    fail_on: frozenset[str] = frozenset({PROBLEM})


def read_options(title: str | None, given: Mapping[str, Any]) -> Options:
    """The site's title and the plugin's options `fail_on`, `coverage` and `matters`; others are left to the plugin.

    Raises OptionError for a value that is none of those expected.
    """
    settings = Settings(
        title=title or Settings().title,
        coverage=read_coverage(given.get("coverage", 2.0)),
        matters=_matters(given.get("matters")),
    )
    return Options(settings, read_fail_on(given.get("fail_on", [PROBLEM])))


def read_coverage(written: Any) -> float:
    """The coverage factor k: a number above zero."""
    try:
        k = float("nan") if isinstance(written, bool) else float(written)
    except (TypeError, ValueError):
        k = float("nan")
    if not isfinite(k) or k <= 0:
        raise OptionError(f"'coverage' is the factor k, a number above zero such as 2; found '{written}'.")
    return k


def read_fail_on(written: Any) -> frozenset[str]:
    """What a run fails on: a list of words, or one text with commas between them."""
    words = [] if written is None else written.split(",") if isinstance(written, str) else written
    if not isinstance(words, list | tuple | set | frozenset):
        raise OptionError(f"'fail_on' is a list of {', '.join(FAIL_ON)}; found '{written}'.")
    stripped = [str(word).strip() for word in words]
    found = [word for word in stripped if word]
    for word in found:
        if word not in FAIL_ON:
            raise OptionError(f"'{word}' at 'fail_on' is not known. {did_you_mean(word, FAIL_ON)}")
    return frozenset(found)


def _matters(written: Any) -> dict[str, float]:
    if written is None:
        return {}
    if not isinstance(written, Mapping):
        raise OptionError("'matters' gives quantities their smallest change, such as 'matters: {noise_floor: 0.3 dB}'.")
    return {str(name): _smallest(str(name), value) for name, value in written.items()}


def _smallest(name: str, written: Any) -> float:
    """A smallest change: in dB for quantities in decibels, for others a part of the value (2 % or 0.02)."""
    value = float("nan")
    if isinstance(written, str):
        try:
            value = read_quantity(written, ("ratio", "number")).value
        except QuantityError as error:
            raise OptionError(f"'{written}' at 'matters', '{name}': {error.message} {error.hint}".strip()) from error
    elif isinstance(written, int | float) and not isinstance(written, bool):
        value = float(written)
    if not isfinite(value) or value < 0:
        raise OptionError(f"'{name}' at 'matters' is a change such as '0.3 dB' or '2 %'; found '{written}'.")
    return value
