"""What the head of a column says: "Frequency (MHz)", "Level [dBm]", "freq_Hz", "Freq/MHz" -> name and unit."""

from __future__ import annotations

import re
from collections.abc import Iterator

from logbook.units import DIMENSIONS, find_unit, likely_unit

# Prices have no place in a trace, and their codes look like words (ALL, TOP, TRY).
_MEASURED = tuple(name for name in DIMENSIONS if name not in ("price", "number"))
# An angle is no temperature, and "min" heads the column of the lowest values.
_NO_UNITS = frozenset({"", "deg", "degrees", "min"})
_BRACKETS = re.compile(r"[(\[{<]\s*([^()\[\]{}<>]+?)\s*[)\]}>]")
# A longer text is prose, and its signs would be tried one by one.
_LONGEST = 200
# Single letters that stand for units behind an underscore; others are names of ports and traces.
_LETTERS = frozenset("VWs")


def split_head(text: str) -> tuple[str, str]:
    """The name and the unit in a column's head; the unit is empty where none is found, the name then the text."""
    for name, written, sure in _candidates(text.strip()) if len(text) <= _LONGEST else ():
        unit = unit_symbol(written)
        if unit and (sure or len(written) > 1):
            return name.strip(" \t-_:/,=") or text.strip(), unit
    return text.strip(), ""


def unit_symbol(text: str) -> str:
    """The unit that a text means, in the writing of the table of units; small and capital letters are forgiven."""
    plain = text.strip().strip("()[]{}<>").strip() if find_unit(text.strip()) is None else text.strip()
    if plain.lower() in _NO_UNITS:
        return ""
    unit = find_unit(plain, _MEASURED)
    if unit is not None and unit.dimension in _MEASURED:
        return plain
    return likely_unit(plain, _MEASURED)


def _candidates(text: str) -> Iterator[tuple[str, str, bool]]:
    """What could be name and unit, best first, and whether a single letter counts as a unit there."""
    yield from _in_brackets(text)
    yield "", text, False
    name, found, unit = text.rpartition(" in ")
    if found:
        yield name, unit, True
    for name, unit in _split_at_each(text, "/"):
        yield name, unit, True
    for name, unit in _split_at_each(text, "_"):
        yield name, unit.replace("_per_", "/"), unit in _LETTERS
    for separator in (",", " "):
        name, found, unit = text.rpartition(separator)
        if found:
            yield name, unit.strip(), False


def _in_brackets(text: str) -> Iterator[tuple[str, str, bool]]:
    """From each opening bracket to the end, so that `(V/sqrt(Hz))` stays whole; then brackets in the midst."""
    if text.endswith((")", "]", "}", ">")):
        for index, letter in enumerate(text):
            if letter in "([{<":
                yield text[:index], text[index + 1 : -1], True
    for match in _BRACKETS.finditer(text):
        yield text[: match.start()], match[1], True


def _split_at_each(text: str, sign: str) -> Iterator[tuple[str, str]]:
    """What stands before and behind each such sign, from the left."""
    for index, letter in enumerate(text):
        if letter == sign:
            yield text[:index], text[index + 1 :]
