"""What a YAML parser's error means to the one who wrote the text: the likely slip, its place, the remedy."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace


@dataclass(frozen=True, slots=True)
class Spot:
    """A position in a YAML text; line and column count from 0."""

    line: int
    column: int


@dataclass(frozen=True, slots=True)
class Fault:
    """A parser's error in plain words."""

    spot: Spot
    code: str
    message: str
    hint: str


@dataclass(frozen=True, slots=True)
class Complaint:
    """What the parser said: what it was doing and since where, what it met and where."""

    said: str
    spot: Spot
    doing: str = ""
    since: Spot | None = None


SYNTAX = "yaml-syntax"

_CLOSING = {"{": "}", "[": "]"}

_INDENT = re.compile(r"[ ]*([^\S ]+)")
_VALUE = re.compile(r"(?P<before>\s*(?:-\s+)*(?:[^\s:#'\"\[{][^:#'\"\[{]*:\s+)?)(?P<value>[@`%*&!|>].*?)\s*$")
_NO_SPACE = re.compile(r"\s*(?:-\s+)*(?P<text>(?P<key>[A-Za-z_][\w-]*):(?P<value>[^\s:].*))")
_SECOND_COLON = re.compile(r"(?P<before>\s*(?:-\s+)*(?P<key>[^:#]+):\s+)(?P<value>[^'\"{\[].*?:(?:\s.*|$))")
_BEHIND_QUOTE = re.compile(r"""[^'"]*:\s+(?P<quoted>'(?:[^']|'')*'|"(?:[^"\\]|\\.)*")(?P<rest>\s*[^\s#,}\]].*)""")


def _quoted(value: str) -> str:
    return "'" + value.replace("'", "''") + "'"


def explain(complaint: Complaint, lines: Sequence[str]) -> Fault:
    """The most likely slip behind a parser's complaint."""
    last = max((number for number, line in enumerate(lines) if line.strip()), default=0)
    if complaint.spot.line > last:
        # The end of the text is no place to look at; its last line is.
        complaint = replace(complaint, spot=Spot(last, len(_line(lines, last))))
    for guess in (_tab, _open_quote, _reserved, _space_after_colon, _second_colon, _dash, _behind_quote, _brackets):
        fault = guess(complaint, lines)
        if fault is not None:
            return fault
    return _by_what_was_said(complaint, lines)


def _line(lines: Sequence[str], number: int) -> str:
    return lines[number] if 0 <= number < len(lines) else ""


def _involved(complaint: Complaint) -> list[int]:
    """The lines to look at: where the parser stopped, and where it began what it could not finish."""
    since = [] if complaint.since is None else [complaint.since.line]
    return list(dict.fromkeys([complaint.spot.line, *since]))


def _tab(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    fault = next((fault for fault in (_odd_indent(number, lines) for number in _involved(complaint)) if fault), None)
    if fault is None and _line(lines, complaint.spot.line)[complaint.spot.column :].startswith("\t"):
        return Fault(complaint.spot, SYNTAX, "A tab stands here.", "Write a space instead.")
    return fault


def _odd_indent(number: int, lines: Sequence[str]) -> Fault | None:
    found = _INDENT.match(_line(lines, number))
    if not found or not _line(lines, number).strip():
        return None
    what = "A tab" if "\t" in found[1] else "A space of an unusual sort"
    message = f"{what} stands in the indentation of this line."
    return Fault(Spot(number, found.start(1)), SYNTAX, message, "Indent with plain spaces only.")


def _open_quote(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    if "quoted scalar" not in complaint.doing or complaint.since is None:
        return None
    since = complaint.since
    quote = _line(lines, since.line)[since.column : since.column + 1] or '"'
    if "escape" in complaint.said or "hex" in complaint.said:
        hint = (
            "Within double quotes a backslash begins a sequence such as \\n; use single quotes for a plain backslash."
        )
        # The two parsers stop at the backslash, or behind it.
        here = complaint.spot.column
        behind = _line(lines, complaint.spot.line)[here : here + 1] != "\\"
        spot = Spot(complaint.spot.line, max(here - behind, 0))
        return Fault(spot, SYNTAX, "The backslash here begins no sequence that YAML knows.", hint)
    message = f"The quote ({quote}) that opens here is not closed."
    return Fault(since, SYNTAX, message, "Close it at the end of the text.")


def _reserved(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    """`note: @home`, `limit: > 6 dB`, `note: *important*`: a character that YAML keeps for itself begins a text."""
    signs = ("cannot start any token", "alphabetic", "line break", "chomping", "tag", "URI", "directive")
    if not any(sign in complaint.said for sign in signs):
        return None
    for number in _involved(complaint):
        found = _VALUE.match(_line(lines, number))
        if found:
            value = found["value"]
            code = "yaml-tag" if value.startswith("!") else SYNTAX
            message = f"'{value}' begins with '{value[0]}', which has a meaning of its own in YAML."
            return Fault(Spot(number, found.start("value")), code, message, f"Write it in quotes: {_quoted(value)}.")
    return None


def _space_after_colon(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    if "could not find expected ':'" not in complaint.said or complaint.since is None:
        return None
    since = complaint.since
    fault = _no_space(since.line, lines) or _no_space(complaint.spot.line, lines)
    if fault:
        return fault
    said = _line(lines, since.line).strip()
    return Fault(
        since, SYNTAX, f"'{said}' is no key with a value.", "Write 'key: value', with a space behind the colon."
    )


def _no_space(number: int, lines: Sequence[str]) -> Fault | None:
    found = _NO_SPACE.fullmatch(_line(lines, number))
    if not found:
        return None
    message = f"A space is missing behind the colon in '{found['text'].strip()}'."
    hint = f"Write '{found['key']}: {found['value'].strip()}'."
    return Fault(Spot(number, found.start("value")), SYNTAX, message, hint)


def _second_colon(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    if "mapping values are not allowed" not in complaint.said:
        return None
    number = complaint.spot.line
    found = _SECOND_COLON.fullmatch(_line(lines, number))
    if found:
        value = found["value"].strip()
        message = f"A second colon stands in the value of '{found['key'].strip()}'."
        return Fault(Spot(number, found.start("value")), SYNTAX, message, f"Write it in quotes: {_quoted(value)}.")
    above = next((n for n in range(number - 1, -1, -1) if _line(lines, n).strip()), number)
    fault = _odd_indent(above, lines) or _no_space(above, lines)
    if fault:
        return fault
    text = _line(lines, number)
    spot = Spot(number, len(text) - len(text.lstrip()))
    hint = "Indent the keys of one mapping alike, and give the key above them either a value or keys of its own."
    return Fault(spot, SYNTAX, "This key does not fit the line above it.", hint)


def _dash(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    if "sequence entries are not allowed" not in complaint.said:
        return None
    message = "The '- ' here begins a list within a line."
    hint = "A minus sign has no space behind it; the items of a list stand in lines of their own, or in [ ]."
    return Fault(complaint.spot, SYNTAX, message, hint)


def _behind_quote(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    found = _BEHIND_QUOTE.fullmatch(_line(lines, complaint.spot.line))
    if not found or found.start("rest") > complaint.spot.column:
        return None
    rest = found["rest"].strip()
    spot = Spot(complaint.spot.line, found.end("rest") - len(found["rest"].lstrip()))
    return Fault(spot, SYNTAX, f"'{rest}' stands behind the closing quote.", "Put the whole text within the quotes.")


def _brackets(complaint: Complaint, lines: Sequence[str]) -> Fault | None:
    """A flow mapping or sequence that is not closed, or lacks a comma."""
    if "flow" not in complaint.doing or complaint.since is None:
        return None
    since = complaint.since
    bracket = _line(lines, since.line)[since.column : since.column + 1]
    rest = _line(lines, complaint.spot.line)[complaint.spot.column :].strip()
    if bracket not in _CLOSING and not rest:
        # The parser ran into the end; it does not say which bracket it had open.
        since = _last_open(lines) or since
        bracket = _line(lines, since.line)[since.column : since.column + 1]
    if bracket not in _CLOSING:
        return None
    closing = _CLOSING[bracket]
    if complaint.spot.line > since.line or not rest:
        message = f"The '{bracket}' that opens here is not closed."
        return Fault(since, SYNTAX, message, f"Close it with '{closing}'.")
    message = f"A comma or '{closing}' is missing before '{rest}'."
    return Fault(complaint.spot, SYNTAX, message, "Part the items by commas, and quote a text that holds brackets.")


def _last_open(lines: Sequence[str]) -> Spot | None:
    """The last bracket without its partner; quotes are not looked at."""
    opened: list[Spot] = []
    for number, line in enumerate(lines):
        for column, letter in enumerate(line):
            if letter in _CLOSING:
                opened.append(Spot(number, column))
            elif letter in "]}" and opened:
                opened.pop()
    return opened[-1] if opened else None


def _by_what_was_said(complaint: Complaint, lines: Sequence[str]) -> Fault:
    number, column = complaint.spot.line, complaint.spot.column
    text = _line(lines, number)
    said = text.strip()
    start = Spot(number, len(text) - len(text.lstrip()))
    if "node content" in complaint.said and text[column : column + 1] in ("}", "]", ","):
        message = f"The '{text[column]}' here does not belong to any opening bracket."
        return Fault(complaint.spot, SYNTAX, message, "Take it out, or put the text in quotes.")
    if any(sign in complaint.said for sign in ("expected key", "<block end>", "'-' indicator")):
        return _misfit(said, start, complaint.doing)
    if "<document start>" in complaint.said:
        message = f"'{said}' stands behind the end of the YAML."
        return Fault(start, "several-documents", message, "Take the line '...' out.")
    where = f" near '{said}'" if said else ""
    message = f"This is no YAML{where}: {complaint.said}."
    return Fault(complaint.spot, SYNTAX, message, "Put the text in quotes if it is one.")


def _misfit(said: str, start: Spot, doing: str) -> Fault:
    if said.startswith(":"):
        return Fault(start, SYNTAX, "A key is missing before the colon.", "Write 'key: value'.")
    if "sequence" not in doing and "collection" not in doing and said.startswith("- "):
        message = "An item of a list stands among keys."
        return Fault(start, SYNTAX, message, "Indent it as the list's other items, below the key it belongs to.")
    message = f"'{said}' does not fit the lines above it."
    return Fault(start, SYNTAX, message, "Indent the keys of one mapping, and the dashes of one list, alike.")
