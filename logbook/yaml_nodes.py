"""YAML -> nodes with their places in the file. Nothing is constructed: a scalar stays the text that was written."""

from __future__ import annotations

import re
from typing import Any, NamedTuple

import yaml
from yaml.events import (
    AliasEvent,
    MappingEndEvent,
    MappingStartEvent,
    ScalarEvent,
    SequenceEndEvent,
    SequenceStartEvent,
    StreamEndEvent,
)

from logbook.problems import Place, Problems
from logbook.yaml_faults import Complaint, Spot, explain


# Tuples with names: a logbook has tens of thousands of nodes, and they are made in half the time.
class Scalar(NamedTuple):
    """A text as written, `on`, `010` and `12:30` included; empty where nothing stands behind a key."""

    text: str
    place: Place
    in_one_line: bool = True

    def at(self, offset: int) -> Place:
        """Where a character of the text stands in the file; its start where the text is folded or escaped."""
        if not self.in_one_line:
            return self.place
        return Place(self.place.file, self.place.line, self.place.column + offset)


class Mapping(NamedTuple):
    """Keys with their values, in order; each key once."""

    pairs: tuple[tuple[Scalar, Node], ...]
    place: Place

    def get(self, key: str) -> Node | None:
        """The value of a key, None when it is not there."""
        return next((value for name, value in self.pairs if name.text == key), None)

    def key_place(self, key: str) -> Place:
        """Where a key stands; the mapping's own place when it is not there."""
        return next((name.place for name, _ in self.pairs if name.text == key), self.place)


class Sequence(NamedTuple):
    """A list of nodes."""

    items: tuple[Node, ...]
    place: Place


Node = Scalar | Mapping | Sequence

# The parser in C reads the same language some ten times faster; it may be absent.
_LOADER: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)

_DEEPEST = 20
_CONTROL = re.compile(r"[^\t\n\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufefe\uff00-\ufffd\U00010000-\U0010ffff]")

# YAML 1.1 ends a line at these three, an editor does not: as spaces they leave the lines true.
_LINE_ENDS = str.maketrans("\x85\u2028\u2029", "   ")

# `limit: >= 6 dB` is what one writes, but a '>' at the start begins a folded text. A stand-in of the same width takes
# its place while YAML is read; no folded text begins with '>=', so nothing else changes.
_AT_LEAST = re.compile(r"(?<![^\s:\[{,-])>(?==)")
_STAND_IN = "\ue000"

_MISSING_SPACE = re.compile(r"([A-Za-z_][\w-]*):([^\s:/].*)")


class _BrokenError(Exception):
    """Reading cannot go on; the fault has been reported."""


def read_yaml(
    text: str, file: str, first_line: int, indent: int, problems: Problems, what: str = "block"
) -> Node | None:
    """The nodes of a YAML text that begins in `first_line` of a file and has lost `indent` columns.

    None when it is empty, or too broken to be used; the fault is then in `problems`. A key given twice, a tag and an
    anchor are reported too, but the nodes are returned (with the key's first value), so that other faults are found in
    the same run.
    """
    return _Reader(file, first_line, indent, problems, what).read(text)


class _Reader:
    def __init__(self, file: str, first_line: int, indent: int, problems: Problems, what: str) -> None:
        self._file = file
        self._first_line = first_line
        self._column = indent + 1
        self._problems = problems
        self._what = what
        self._article = what if what == "front matter" else f"a {what}"
        self._unusable = False
        self._restore = False
        self._next: Any = None

    def read(self, text: str) -> Node | None:
        text = text.translate(_LINE_ENDS)
        control = _CONTROL.search(text)
        if control is not None:
            self._report_control(text, control.start())
            return None
        if ">=" in text and _STAND_IN not in text:
            text, count = _AT_LEAST.subn(_STAND_IN, text)
            self._restore = count > 0
        events = _LOADER(text)
        self._next = events.get_event
        try:
            node = self._document()
        except _BrokenError:
            return None
        except yaml.YAMLError as error:
            self._report_syntax(error, text)
            return None
        finally:
            events.dispose()
        return None if self._unusable else node

    # --- events --------------------------------------------------------------------------------

    def _document(self) -> Node | None:
        self._next()
        if type(self._next()) is StreamEndEvent:
            self._empty()
            return None
        node = self._node(self._next(), 0)
        self._next()
        event = self._next()
        if type(event) is not StreamEndEvent:
            message = f"A second document begins here; {self._article} holds one."
            self._fault(self._place(event.start_mark), "several-documents", message, "Take the line '---' out.")
        if type(node) is Scalar and not node.text:
            self._empty()
        return node

    def _node(self, event: Any, depth: int) -> Node:
        sort = type(event)
        if sort is ScalarEvent:
            return self._scalar(event)
        place = self._place(event.start_mark)
        if sort is AliasEvent:
            message = f"'*{event.anchor}' is an alias; {self._article} does without."
            self._fault(place, "yaml-alias", message, "Write the value out, or quote a text that begins with '*'.")
            return Scalar("", place)
        if depth >= _DEEPEST:
            message = f"More than {_DEEPEST} lists and mappings stand within one another."
            self._fault(place, "yaml-depth", message, "Close the brackets of an outer one first.")
            raise _BrokenError
        self._refuse_extras(event, place)
        if sort is MappingStartEvent:
            return self._mapping(place, depth + 1)
        items = []
        while type(event := self._next()) is not SequenceEndEvent:
            items.append(self._node(event, depth + 1))
        return Sequence(tuple(items), place)

    def _scalar(self, event: Any) -> Scalar:
        mark, end = event.start_mark, event.end_mark
        column = mark.column + self._column
        width = end.column - mark.column
        if event.style in ("'", '"') and end.line == mark.line:
            # The text's own place, so that a fault within it is shown where it stands.
            column += 1
            width -= 2
        place = Place(self._file, self._first_line + mark.line, column)
        if event.anchor is not None or event.tag is not None:
            self._refuse_extras(event, self._place(mark))
        text: str = event.value
        as_written = end.line == mark.line and width == len(text)
        return Scalar(text.replace(_STAND_IN, ">") if self._restore else text, place, as_written)

    def _mapping(self, place: Place, depth: int) -> Mapping:
        pairs: dict[str, tuple[Scalar, Node]] = {}
        while type(event := self._next()) is not MappingEndEvent:
            key = self._node(event, depth)
            if type(key) is not Scalar:
                message = "A key that is a list or a mapping itself stands here."
                self._fault(key.place, "complex-key", message, "A key is a single word; quote a text in brackets.")
                self._skip(self._next())
                continue
            if key.text == "<<" and self._is_merge_key(event):
                continue
            value = self._node(self._next(), depth)
            if ":" in key.text:
                self._look_for_colon(key, value)
            first = pairs.setdefault(key.text, (key, value))
            if first[0] is not key:
                message = f"The key '{key.text}' is given twice; first in line {first[0].place.line}."
                self._problems.add(key.place, "duplicate-key", message, "Keep one of the two.")
        return Mapping(tuple(pairs.values()), place)

    def _is_merge_key(self, event: Any) -> bool:
        if type(event) is not ScalarEvent or event.style:
            return False
        message = f"'<<' merges another mapping in; {self._article} does without."
        self._fault(self._place(event.start_mark), "merge-key", message, "Write the keys out.")
        self._skip(self._next())
        return True

    def _look_for_colon(self, key: Scalar, value: Node) -> None:
        """`{gain:12 dB}` is a key without a value to YAML."""
        found = _MISSING_SPACE.fullmatch(key.text)
        if found and type(value) is Scalar and not value.text:
            message = f"A space is missing behind the colon in '{key.text}'."
            self._fault(key.place, "yaml-syntax", message, f"Write '{found[1]}: {found[2]}'.")

    def _skip(self, event: Any) -> None:
        """Pass over a node without a look at it."""
        depth = 0
        while True:
            sort = type(event)
            depth += sort in (MappingStartEvent, SequenceStartEvent)
            depth -= sort in (MappingEndEvent, SequenceEndEvent)
            if depth <= 0:
                return
            event = self._next()

    # --- faults --------------------------------------------------------------------------------

    def _place(self, mark: Any) -> Place:
        return Place(self._file, self._first_line + mark.line, mark.column + self._column)

    def _fault(self, place: Place, code: str, message: str, hint: str) -> None:
        """Report what leaves nothing that could be used."""
        self._problems.add(place, code, message, hint)
        self._unusable = True

    def _empty(self) -> None:
        place = Place(self._file, max(self._first_line - 1, 1), self._column)
        message = f"The {self._what} is empty."
        self._fault(place, f"empty-{self._what.replace(' ', '-')}", message, "Write its keys, or take it out.")

    def _refuse_extras(self, event: Any, place: Place) -> None:
        if event.anchor is not None:
            message = f"'&{event.anchor}' is an anchor; {self._article} does without."
            self._problems.add(place, "yaml-anchor", message, "Take it out, or quote a text that begins with '&'.")
        if event.tag is not None:
            message = f"A tag, '!', stands here; {self._article} does without."
            self._problems.add(place, "yaml-tag", message, "Take it out, or quote a text that begins with '!'.")

    def _report_control(self, text: str, position: int) -> None:
        line = text.count("\n", 0, position)
        column = position - (text.rfind("\n", 0, position) + 1)
        place = Place(self._file, self._first_line + line, column + self._column)
        message = f"A character that cannot be shown, U+{ord(text[position]):04X}, stands here."
        self._fault(place, "control-character", message, "Take it out.")

    def _report_syntax(self, error: yaml.YAMLError, text: str) -> None:
        mark = getattr(error, "problem_mark", None)
        since = getattr(error, "context_mark", None)
        said = (getattr(error, "problem", None) or str(error)).replace("\n", " ")
        fault = explain(
            Complaint(
                said,
                Spot(mark.line, mark.column) if mark else Spot(0, 0),
                getattr(error, "context", None) or "",
                Spot(since.line, since.column) if since else None,
            ),
            text.replace(_STAND_IN, ">").split("\n") if self._restore else text.split("\n"),
        )
        place = Place(self._file, self._first_line + fault.spot.line, fault.spot.column + self._column)
        self._fault(place, fault.code, fault.message, fault.hint)
