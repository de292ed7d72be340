"""A CSV file of any instrument: its columns as text, and the two of them that make a trace as numbers."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from logbook.problems import CAUTION, Place, Problems
from logbook.traces.headers import split_head
from logbook.traces.layout import Layout, Lines, field_column, find_layout, split_fields
from logbook.traces.text import Faults, is_number, quoted, read_lines

Floats = npt.NDArray[np.float64]

# What SCPI instruments write for "not a number" is 9.91E37, for infinity 9.9E37. Source: SCPI-99, volume 1, 7.2.1.4.
_NOT_A_NUMBER = 9.9e37
_ALLOWED = {"", "-", "--", "---", "nan", "inf", "+inf", "-inf", "infinity", "-infinity", "n/a"}


@dataclass(frozen=True, slots=True, eq=False)
class Columns:
    """The table in a file: `heads` are the texts above the columns (empty without), `cells` the fields as written.

    `rows` are the lines that the cells come from. `sound` is False when a line was left out because of a fault.
    """

    file: str
    heads: tuple[str, ...]
    head_line: int
    separator: str
    cells: tuple[Sequence[str], ...]
    rows: Lines = field(repr=False)
    sound: bool = True

    def label(self, index: int) -> str:
        """A column by its head, or by its number from 1."""
        head = self.heads[index] if self.heads else ""
        return f"'{head}'" if head else f"{index + 1}"

    def place(self, row: int, index: int) -> tuple[int, int]:
        """Line and column in the file of a cell."""
        return self.rows.numbers[row], field_column(self.rows.texts[row], self.separator, index)


def read_table(data: bytes, file: str, problems: Problems) -> Columns | None:
    """The table in a file's bytes; None where there is none. Nothing is raised, whatever the bytes are.

    A line with another number of fields is a fault and is left out, so that the faults of the rest are found as well.
    """
    with Faults(file, problems) as faults:
        lines = read_lines(data, faults)
        if lines is None:
            return None
        layout = find_layout(lines)
        if layout is None:
            hint = "Columns are separated by commas, semicolons or tabs."
            faults.add(1, 1, "empty", "No line of this file holds two numbers.", hint)
            return None
        if layout.after:
            message = "What follows the end of the table is not read."
            hint = "Save one table in a file."
            problems.add(Place(file, layout.after, 1), "second_table", message, hint, CAUTION)
        if _decimal_commas_between_commas(layout, faults):
            return None
        rows, cells = _cells(layout, faults)
        heads = layout.heads
        return Columns(file, heads, layout.head_line, layout.separator, cells, rows, not len(faults))


def _decimal_commas_between_commas(layout: Layout, faults: Faults) -> bool:
    """`50,1,-30,2` beneath `Frequency,Level`: the one thing that no reader can take apart."""
    if layout.separator != "," or layout.heads or 2 * layout.head_width != layout.width:
        return False
    message = f"This line has {layout.width} fields, the one that heads the columns {layout.head_width}."
    hint = "Decimal commas between commas cannot be told apart: save the file with semicolons."
    faults.add(layout.rows.numbers[0], 1, "fields", message, hint)
    return True


def _cells(layout: Layout, faults: Faults) -> tuple[Lines, tuple[Sequence[str], ...]]:
    rows, separator, width = layout.rows, layout.separator, layout.width
    texts = rows.texts
    raw = texts[0].count(separator) + 1
    joined = separator.join(texts)
    if separator != " " and '"' not in joined and raw >= width and all(t.count(separator) == raw - 1 for t in texts):
        fields = joined.split(separator)
        if not any(any(map(str.strip, fields[k::raw])) for k in range(width, raw)):
            return rows, tuple(fields[k::raw] for k in range(width))
    kept = Lines([], [])
    split: list[list[str]] = []
    for number, line in zip(*rows, strict=True):
        found = split_fields(line, separator)
        if len(found) < width or any(found[width:]):
            extra = min(len(found), width)
            message = f"This line has {len(found)} field{'s' if len(found) != 1 else ''}, the table {width}."
            faults.add(number, field_column(line, separator, extra), "fields", message)
        else:
            kept.numbers.append(number)
            kept.texts.append(line)
            split.append(found[:width])
    return kept, tuple([row[k] for row in split] for k in range(width))


def column_numbers(columns: Columns, index: int, faults: Faults) -> Floats | None:
    """A column as numbers, (N,); None with a fault for each field that is not a finite number."""
    text = "\n".join(columns.cells[index])
    mixed = "," in text and "." in text
    cells = (text if mixed else text.replace(",", ".")).split("\n")
    try:
        values = np.array([float(cell) for cell in cells])
    except ValueError:
        values = np.array([np.nan])
    if np.all(np.abs(values) < _NOT_A_NUMBER) and text.isascii() and "_" not in text:
        return values
    for row, cell in enumerate(cells):
        if not is_number(cell.strip()) or not abs(float(cell)) < _NOT_A_NUMBER:
            _bad_number(columns, row, index, mixed, faults)
    return None


def _bad_number(columns: Columns, row: int, index: int, mixed: bool, faults: Faults) -> None:
    written = columns.cells[index][row].strip()
    if not written:
        message = f"The field of column {columns.label(index)} is empty."
    elif is_number(written) or written.lower() in _ALLOWED:
        message = f"{quoted(written)} stands for a value that the instrument did not have."
    else:
        message = f"{quoted(written)} is not a number."
    hint = ""
    if "," in written:
        hint = "Leave out signs between thousands."
        if mixed and written.count(",") == 1 and "." not in written:
            hint = "Other numbers of this column have a decimal point: write all of them in one way."
    faults.add(*columns.place(row, index), "number", message, hint)


def find_column(columns: Columns, wanted: str | int) -> list[int]:
    """The columns, by index from 0, that a head, a head without its unit, or a number from 1 means; none or several."""
    said = str(wanted).strip()
    lowered = said.casefold()
    for form in (lambda head: head.casefold(), lambda head: split_head(head)[0].casefold()):
        found = [index for index, head in enumerate(columns.heads) if head and form(head) == lowered]
        if found:
            return found
    if said.isascii() and said.isdigit() and len(said) < 6 and 1 <= int(said) <= len(columns.cells):
        return [int(said) - 1]
    return []
