"""How an instrument laid out a CSV: which sign separates, where the numbers begin, which line heads the columns."""

from __future__ import annotations

import csv
import re
from bisect import bisect_left
from collections import Counter
from dataclasses import dataclass
from itertools import compress
from typing import NamedTuple

from logbook.traces.headers import split_head, unit_symbol
from logbook.traces.text import is_number, word_column


class Lines(NamedTuple):
    """Some of a file's lines: their numbers, and their texts."""

    numbers: list[int]
    texts: list[str]

    def part(self, start: int, stop: int | None = None) -> Lines:
        """From one index to before another."""
        return Lines(self.numbers[start:stop], self.texts[start:stop])


# In the order in which they are believed where several would do. A space stands for any run of spaces.
_SEPARATORS = ("\t", ";", ",", " ")
_COMMENTS = ("#", "!", "%", "//", "'", ";")
# How most lines begin; a look at one letter spares the rest of the questions.
_DIGITS = frozenset("0123456789.")
_END = re.compile(r"\W*(?:END|EOF)\b", re.IGNORECASE)
_AXIS_UNIT = re.compile(r"([xy])[ _-]*(?:axis)?[ _-]*units?", re.IGNORECASE)
_SAMPLE = 200
_HEADS_LOOKED_AT = 4


@dataclass(frozen=True, slots=True)
class Layout:
    """What was found; `width` counts the fields of a line without those that are empty throughout at its end.

    `heads` are the texts above the columns, empty where there is no such line; `head_line` is its number, 0 for none.
    """

    separator: str
    width: int
    rows: Lines
    heads: tuple[str, ...]
    head_line: int
    head_width: int
    after: int
    """The first line with content behind the table's end mark; 0 for none."""


def split_fields(line: str, separator: str) -> list[str]:
    """The fields of one line, without spaces and quotes around them."""
    if separator == " ":
        return line.split()
    if '"' in line:
        try:
            return [field.strip() for field in next(csv.reader([line], delimiter=separator, skipinitialspace=True), [])]
        except csv.Error:
            pass
    return [field.strip() for field in line.split(separator)]


def field_column(line: str, separator: str, index: int) -> int:
    """The column, from 1, where a field begins; past the last field, the end of the line."""
    if separator == " ":
        return word_column(line, index)
    begins, quote, seen = 0, False, 0
    for position, letter in enumerate(line):
        if seen == index:
            break
        if letter == '"':
            quote = not quote
        elif letter == separator and not quote:
            seen, begins = seen + 1, position + 1
    if seen < index:
        return len(line.rstrip()) + 1
    rest = line[begins:].partition(separator)[0]
    return begins + len(rest) - len(rest.lstrip()) + 1


def reads_as_number(field: str) -> bool:
    """Whether a field is a number, with a decimal point or a comma; between commas only a quoted field has one."""
    if "," in field and re.fullmatch(r"[^,]*,[0-9][^,]*", field):
        field = field.replace(",", ".")
    return is_number(field)


def find_layout(lines: list[str]) -> Layout | None:
    """The layout of a file's lines; None where no line holds two numbers."""
    written = _kept(Lines(list(range(1, len(lines) + 1)), lines), [bool(x) and not x.isspace() for x in lines])
    content = _kept(written, [x[0] in _DIGITS or not x.lstrip().startswith(_COMMENTS) for x in written.texts])
    separator, pattern = _separator(_sample(content.texts))
    if not pattern:
        # Where most lines are at fault the first few may tell.
        separator, pattern = _separator(content.texts[: 2 * _SAMPLE])
    start = _start(content.texts, separator, pattern) if pattern else None
    if start is None:
        return None
    rows = content.part(start)
    ends = (i for i, x in enumerate(rows.texts) if i and x[0] not in _DIGITS and _END.match(x))
    stop = next(ends, len(rows.texts))
    after = rows.numbers[stop + 1] if stop + 1 < len(rows.texts) else 0
    rows = rows.part(0, stop)
    width = _width(rows.texts, separator, len(pattern))
    above = written.part(0, bisect_left(written.numbers, rows.numbers[0]))
    heads, head_line, head_width = _heads(above, separator, width)
    return Layout(separator, width, rows, heads, head_line, head_width, after)


def _kept(lines: Lines, keep: list[bool]) -> Lines:
    if all(keep):
        return lines
    return Lines(list(compress(lines.numbers, keep)), list(compress(lines.texts, keep)))


def _sample(texts: list[str]) -> list[str]:
    """All lines of a short file, some of the lower half of a long one: there the preamble has ended."""
    return texts if len(texts) <= 2 * _SAMPLE else texts[len(texts) // 2 :: len(texts) // _SAMPLE]


def _separator(sample: list[str]) -> tuple[str, tuple[bool, ...]]:
    """The sign that makes most lines lines of numbers, and which fields are numbers in most of these lines."""
    best: tuple[tuple[int, int], str, tuple[bool, ...]] = ((0, 0), "", ())
    for separator in _SEPARATORS:
        patterns: Counter[tuple[bool, ...]] = Counter()
        whole = 0
        for line in sample:
            fields = split_fields(line, separator)
            pattern = tuple(reads_as_number(field) for field in fields)
            if sum(pattern) >= 2:
                patterns[pattern] += 1
                whole += sum(pattern) == sum(map(bool, fields))
        if patterns and (whole, patterns.total()) > best[0]:
            best = (whole, patterns.total()), separator, patterns.most_common(1)[0][0]
    return best[1], best[2]


def _start(content: list[str], separator: str, pattern: tuple[bool, ...]) -> int | None:
    """The first row of the table: the first of the usual pattern, and those above that begin with a number too."""
    first = pattern.index(True)

    def patterned(index: int) -> tuple[bool, ...]:
        return tuple(reads_as_number(field) for field in split_fields(content[index], separator))

    start = next((index for index in range(len(content)) if patterned(index) == pattern), None)
    while start:
        above = patterned(start - 1)
        if len(above) != len(pattern) or not above[first]:
            break
        start -= 1
    return start


def _width(rows: list[str], separator: str, raw: int) -> int:
    """The fields of a row, but for those at the end that a trailing separator leaves empty in every row."""
    if separator == " ":
        return raw
    width = raw
    while width > 2 and all(_is_empty_at(line, separator, width - 1) for line in rows):
        width -= 1
    return width


def _is_empty_at(line: str, separator: str, index: int) -> bool:
    signs = line.count(separator)
    if signs <= index and line.rstrip(" ").endswith(separator):
        return True
    return signs < index or not any(split_fields(line, separator)[index:])


def _heads(above: Lines, separator: str, width: int) -> tuple[tuple[str, ...], int, int]:
    """The texts above the columns, their line, and how many fields the line right above the numbers has."""
    written = list(zip(*above, strict=True))
    plain = [entry for entry in written if not entry[1].lstrip().startswith(_COMMENTS)]
    near = plain[-1:] + [entry for entry in written[-_HEADS_LOOKED_AT:][::-1] if entry not in plain]
    found = [(number, heads) for number, line in near if (heads := _as_heads(line, separator, width))]
    last = split_fields(plain[-1][1], separator) if plain else []
    head_width = 0 if any(map(reads_as_number, last)) else len(last)
    if not found:
        return _units_of_axes([line for _, line in plain], separator, width), 0, head_width
    number, heads = next((one for one in found if any(split_head(head)[1] for head in one[1])), found[0])
    if len(plain) > 1 and number == plain[-1][0] and all(unit_symbol(head) for head in heads if head):
        names = _as_heads(plain[-2][1], separator, width)
        if names:
            heads = tuple(f"{n} ({unit_symbol(u)})" if u else n for n, u in zip(names, heads, strict=True))
    return heads, number, head_width


def _as_heads(line: str, separator: str, width: int) -> tuple[str, ...]:
    """The fields of a line that could head the columns: as many as there are, and no number among them."""
    text = line.strip().lstrip("#!%/'; \t") if line.lstrip().startswith(_COMMENTS) else line.strip()
    for fields in (split_fields(text, separator), re.split(r"\s{2,}", text)):
        while len(fields) > width and not fields[-1]:
            fields.pop()
        if len(fields) == width and any(fields) and not any(reads_as_number(f) for f in fields):
            return tuple(fields)
    return ()


def _units_of_axes(plain: list[str], separator: str, width: int) -> tuple[str, ...]:
    """Heads made of lines such as `x-Unit;Hz`, which some instruments write ahead of numbers without a head."""
    units = {}
    for line in plain:
        fields = split_fields(line, separator)
        match = _AXIS_UNIT.fullmatch(fields[0].rstrip(":")) if len(fields) > 1 else None
        if match:
            units[match[1].lower()] = unit_symbol(fields[1])
    if not units:
        return ()
    return tuple(f"({unit})" if (unit := units.get("y" if index else "x")) else "" for index in range(width))
