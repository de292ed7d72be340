"""Declarative fields: what a block may hold, and how each value is read. No fault stops the rest."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from datetime import date
from typing import Any

from logbook.model import Values
from logbook.problems import Place, Problems, did_you_mean
from logbook.quantity import Quantity, QuantityError, has_level, read_quantity, read_repeated
from logbook.yaml_nodes import Mapping, Node, Scalar
from logbook.yaml_nodes import Sequence as YamlSequence


@dataclass(frozen=True, slots=True)
class Asked:
    """What a reader is asked for: the key's name for messages, where it stands, and where faults are collected."""

    what: str
    problems: Problems
    key_place: Place | None = None

    def fault(self, place: Place, code: str, message: str, hint: str = "") -> None:
        """Report a fault; readers then return None."""
        self.problems.add(place, code, message, hint)


Reader = Callable[[Node, Asked], Any]


@dataclass(frozen=True, slots=True)
class Field:
    """One key of a block. `better` lets a kind without `calculate` compare the field's value as a result."""

    name: str
    read: Reader
    required: bool = False
    help: str = ""
    better: str = ""


def read_mapping(node: Node | None, fields: Sequence[Field], asked: Asked) -> Values | None:
    """Read a mapping by its fields; None when it is no mapping or a required key is missing or wrong."""
    if node is None:
        return None
    if not isinstance(node, Mapping):
        known = ", ".join(f.name for f in fields[:4])
        asked.fault(node.place, "not-mapping", f"{_shape(node)} stands here; {asked.what} needs keys such as {known}.")
        return None
    by_name = {f.name: f for f in fields}
    data: dict[str, Any] = {}
    places: dict[str, Place] = {}
    spoiled, meant = False, set[str]()
    for key, value in node.pairs:
        if key.text not in by_name:
            meant.add(_unknown_key(key, value, by_name, asked))
            continue
        field = by_name[key.text]
        places[key.text] = value.place
        if isinstance(value, YamlSequence):
            places.update((f"{key.text}.{number}", item.place) for number, item in enumerate(value.items))
        read = field.read(value, Asked(key.text, asked.problems))
        if read is not None:
            data[key.text] = read
        spoiled = spoiled or (read is None and field.required)
    for field in fields:
        if field.required and field.name not in places:
            spoiled = True
            # A slip of the pen in a key that has to be there is one fault, not two.
            if f"Did you mean '{field.name}'?" not in meant:
                message = f"{asked.what[:1].upper()}{asked.what[1:]} needs the key '{field.name}'."
                asked.fault(node.place, "missing-key", message, field.help)
    return None if spoiled else Values(data, places, node.place)


def _unknown_key(key: Scalar, value: Node, known: Iterable[str], asked: Asked) -> str:
    """Report a key that does not exist; the hint that was given for it."""
    if key.text[:1].isdigit() and isinstance(value, Scalar) and not value.text:
        message = f"'{key.text}' stands behind a comma: within braces a decimal comma parts a number in two."
        asked.fault(key.place, "decimal-comma", message, "Write a decimal point.")
        return ""
    hint = did_you_mean(key.text, known)
    asked.fault(key.place, "unknown-key", f"'{key.text}' is no key of {asked.what}.", hint)
    return hint


def _shape(node: Node) -> str:
    if isinstance(node, Scalar):
        return f"'{node.text}'" if node.text else "Nothing"
    return "A list" if isinstance(node, YamlSequence) else "A mapping"


def _scalar(node: Node, asked: Asked, expected: str) -> Scalar | None:
    if isinstance(node, Scalar) and node.text.strip():
        return node
    asked.fault(node.place, "not-text", f"{_shape(node)} stands at '{asked.what}'; expected {expected}.")
    return None


def text() -> Reader:
    """Any text."""

    def read(node: Node, asked: Asked) -> str | None:
        scalar = _scalar(node, asked, "text")
        return None if scalar is None else scalar.text.strip()

    return read


def choice(*words: str) -> Reader:
    """One of a few words."""

    def read(node: Node, asked: Asked) -> str | None:
        scalar = _scalar(node, asked, "one of " + ", ".join(words))
        if scalar is None:
            return None
        if scalar.text in words:
            return scalar.text
        hint = did_you_mean(scalar.text, words)
        message = f"'{scalar.text}' is not known for '{asked.what}'; expected one of {', '.join(words)}."
        asked.fault(scalar.place, "unknown-word", message, hint if hint.startswith("Did") else "")
        return None

    return read


def flag() -> Reader:
    """`true` or `false`."""
    word = choice("true", "false")

    def read(node: Node, asked: Asked) -> bool | None:
        said = word(node, asked)
        return None if said is None else said == "true"

    return read


def day() -> Reader:
    """A date, `2026-02-01`."""

    def read(node: Node, asked: Asked) -> date | None:
        scalar = _scalar(node, asked, "a date such as 2026-02-01")
        if scalar is None:
            return None
        try:
            return date.fromisoformat(scalar.text)
        except ValueError:
            asked.fault(scalar.place, "date", f"'{scalar.text}' is no date; expected one such as 2026-02-01.")
            return None

    return read


def whole(low: int, high: int) -> Reader:
    """A whole number within limits."""

    def read(node: Node, asked: Asked) -> int | None:
        scalar = _scalar(node, asked, f"a whole number from {low} to {high}")
        if scalar is None:
            return None
        if scalar.text.isdecimal() and low <= int(scalar.text) <= high:
            return int(scalar.text)
        asked.fault(scalar.place, "number", f"'{scalar.text}' at '{asked.what}'; expected one from {low} to {high}.")
        return None

    return read


def quantity(
    dimension: str | tuple[str, ...],
    *,
    repeated: bool = False,
    positive: bool = False,
    not_negative: bool = False,
    instead: str = "",
) -> Reader:
    """A number with its unit; `repeated` also takes a list of readings. `instead` is the hint for a wrong sign."""

    def read(node: Node, asked: Asked) -> Quantity | None:
        if repeated and isinstance(node, YamlSequence):
            return _repeated(node, dimension, asked)
        scalar = _scalar(node, asked, "a number with its unit")
        if scalar is None:
            return None
        try:
            found = read_quantity(scalar.text, dimension, asked.what.replace("_", " "))
        except QuantityError as error:
            asked.fault(scalar.at(error.offset), error.code, error.message, error.hint)
            return None
        if (positive and found.value <= 0) or (not_negative and found.value < 0):
            least = "above zero" if positive else "zero or more"
            asked.fault(scalar.place, "sign", f"'{scalar.text}' at '{asked.what}': expected {least}.", instead)
            return None
        if not has_level(found, dimension):
            _no_level(scalar, asked)
            return None
        return found

    return read


def _no_level(scalar: Scalar, asked: Asked) -> None:
    said = f"'{scalar.text}' at '{asked.what}'"
    asked.fault(scalar.place, "sign", f"{said}: a level needs a power or voltage above zero.")


def _repeated(node: YamlSequence, dimension: str | tuple[str, ...], asked: Asked) -> Quantity | None:
    texts, before = list[str](), len(asked.problems)
    for item in node.items:
        scalar = _scalar(item, asked, "a number with its unit")
        if scalar is None:
            continue
        try:
            if not has_level(read_quantity(scalar.text, dimension, asked.what.replace("_", " ")), dimension):
                _no_level(scalar, asked)
        except QuantityError as error:
            asked.fault(scalar.at(error.offset), error.code, error.message, error.hint)
        texts.append(scalar.text)
    if len(asked.problems) > before:
        return None
    if not texts:
        asked.fault(node.place, "empty", f"An empty list stands at '{asked.what}'; expected readings.")
        return None
    try:
        return read_repeated(texts, dimension, asked.what.replace("_", " "))
    except QuantityError as error:
        asked.fault(node.place, error.code, error.message, error.hint)
        return None


def many(reader: Reader, *, least: int = 1) -> Reader:
    """A list whose items are all read by one reader; a single item may stand without the list."""

    def read(node: Node, asked: Asked) -> tuple[Any, ...] | None:
        nodes = node.items if isinstance(node, YamlSequence) else (node,)
        found = [reader(item, asked) for item in nodes]
        if not found and least:
            asked.fault(node.place, "empty", f"An empty list stands at '{asked.what}'; expected one item at least.")
            return None
        if len(found) < least:
            said = f"The list at '{asked.what}' is {len(found)} long"
            asked.fault(node.place, "too-few", f"{said}; it needs {least} items at least.")
            return None
        return None if any(item is None for item in found) else tuple(found)

    return read


def pair(reader: Reader) -> Reader:
    """A list of exactly two."""

    def read(node: Node, asked: Asked) -> tuple[Any, Any] | None:
        if not isinstance(node, YamlSequence) or len(node.items) != 2:
            message = f"{_shape(node)} stands at '{asked.what}'; expected two values, [low, high]."
            asked.fault(node.place, "pair", message)
            return None
        low, high = (reader(item, asked) for item in node.items)
        return None if low is None or high is None else (low, high)

    return read


def mapping(*fields: Field) -> Reader:
    """A mapping with known keys."""

    def read(node: Node, asked: Asked) -> Values | None:
        return read_mapping(node, fields, Asked(f"'{asked.what}'", asked.problems))

    return read


def named(reader: Reader) -> Reader:
    """A mapping with keys of the user's own, each value read by one reader; sound ones are kept."""

    def read(node: Node, asked: Asked) -> Values | None:
        if not isinstance(node, Mapping) or not node.pairs:
            message = f"{_shape(node)} stands at '{asked.what}'; expected names with values."
            asked.fault(node.place, "not-mapping", message)
            return None
        data: dict[str, Any] = {}
        places: dict[str, Place] = {}
        for key, value in node.pairs:
            read = reader(value, Asked(key.text, asked.problems, key.place))
            if read is not None:
                data[key.text] = read
                places[key.text] = value.place
        return Values(data, places, node.place) if data else None

    return read


def either(of_scalar: Reader, of_mapping: Reader) -> Reader:
    """A scalar read one way, anything else the other."""

    def read(node: Node, asked: Asked) -> Any:
        return of_scalar(node, asked) if isinstance(node, Scalar) else of_mapping(node, asked)

    return read
