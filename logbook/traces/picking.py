"""Which two columns of a table make the trace, in which units."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from logbook.problems import Place, Problems, did_you_mean
from logbook.traces.csv_trace import Columns, column_numbers, find_column
from logbook.traces.headers import split_head
from logbook.traces.text import Faults
from logbook.traces.trace import Trace, frozen
from logbook.units import DIMENSIONS, Unit, find_unit, likely_unit

Floats = npt.NDArray[np.float64]

FEWEST_POINTS = 3


@dataclass(frozen=True, slots=True)
class Wanted:
    """One axis as a block asks for it: `column` is a head or a number from 1, None for the one that fits.

    `place` is where the block says so; faults of the choice stand there, faults of the numbers in the file.
    """

    dimensions: tuple[str, ...]
    place: Place
    column: str | int | None = None
    unit: str | None = None


def pick(columns: Columns, x: Wanted, y: Wanted, problems: Problems) -> Trace | None:
    """The trace of two columns in base units, over rising x; None with faults, all of them reported.

    Without a column asked for, x is the first column with a unit of its dimensions, else column 1, and y the only other
    one that fits. A falling sweep is turned round.
    """
    before = len(problems)
    x_index = _column(columns, x, "x", None, problems)
    y_index = _column(columns, y, "y", x_index, problems)
    x_unit = None if x_index is None else _unit(columns, x_index, x, problems)
    y_unit = None if y_index is None else _unit(columns, y_index, y, problems)
    with Faults(columns.file, problems) as faults:
        if x_index is None or y_index is None:
            return None
        x_values = column_numbers(columns, x_index, faults)
        y_values = column_numbers(columns, y_index, faults)
        _check_commas(columns, x_index, y_index, faults)
        if x_values is not None:
            x_values, turned = _rising(columns, x_index, x_values, faults)
            if turned and y_values is not None:
                y_values = y_values[::-1]
        if columns.sound:
            _check_points(columns, faults)
    if x_values is None or y_values is None or x_unit is None or y_unit is None:
        return None
    if len(problems) > before or not columns.sound:
        return None
    name = split_head(columns.heads[y_index])[0] if columns.heads else ""
    x_base, y_base = _in_base(x_values, x_unit), _in_base(y_values, y_unit)
    return Trace(name, columns.file, x_base, x_unit.base, y_base, y_unit.base)


def _column(columns: Columns, wanted: Wanted, axis: str, other: int | None, problems: Problems) -> int | None:
    if wanted.column is None:
        return _first_fitting(columns, wanted) if axis == "x" else _only_fitting(columns, wanted, other, problems)
    found = find_column(columns, wanted.column)
    if len(found) == 1 and found[0] != other:
        return found[0]
    said = f"'{columns.file}'"
    if not found:
        hint = did_you_mean(str(wanted.column), _names(columns)) or _numbered(columns)
        message = f"{said} has no column '{wanted.column}'."
    elif len(found) > 1:
        numbers = " and ".join(str(index + 1) for index in found)
        hint = f"Give one by its number: {numbers}."
        message = f"{said} has {len(found)} columns '{wanted.column}'."
    else:
        hint = "Name another one for y."
        message = f"Column {columns.label(found[0])} of {said} is x already."
    problems.add(wanted.place, "column", message, hint)
    return None


def _names(columns: Columns) -> list[str]:
    """The heads with and without their units: either is a way to name a column."""
    names = [split_head(head)[0] for head in columns.heads if head]
    return list(dict.fromkeys(names))


def _numbered(columns: Columns) -> str:
    if columns.heads and any(columns.heads):
        return "Columns there: " + ", ".join(columns.label(index) for index in range(len(columns.cells))[:12]) + "."
    return f"No line heads the columns: give a number from 1 to {len(columns.cells)}."


def _head_unit(columns: Columns, index: int, wanted: Wanted) -> Unit | None:
    symbol = split_head(columns.heads[index])[1] if columns.heads else ""
    return find_unit(symbol, wanted.dimensions) if symbol else None


def _fits(columns: Columns, index: int, wanted: Wanted) -> bool:
    unit = _head_unit(columns, index, wanted)
    return unit is not None and unit.dimension in wanted.dimensions


def _first_fitting(columns: Columns, wanted: Wanted) -> int:
    return next((index for index in range(len(columns.cells)) if _fits(columns, index, wanted)), 0)


def _only_fitting(columns: Columns, wanted: Wanted, x_index: int | None, problems: Problems) -> int | None:
    others = [index for index in range(len(columns.cells)) if index != x_index]
    fitting = [index for index in others if _fits(columns, index, wanted)] or others
    if len(fitting) == 1:
        return fitting[0]
    if x_index is not None:
        message = f"'{columns.file}' has {len(fitting)} columns that y could be."
        named = ", ".join(columns.label(index) for index in fitting[:12])
        problems.add(wanted.place, "column", message, f"Say which one: {named}.")
    return None


def _unit(columns: Columns, index: int, wanted: Wanted, problems: Problems) -> Unit | None:
    """The unit that the block gives, or that the head of the column gives; a fault where they are at odds."""
    head = _head_unit(columns, index, wanted)
    if wanted.unit is None:
        return _unit_of_head(columns, index, head, wanted, problems)
    given = find_unit(wanted.unit, wanted.dimensions)
    if given is None:
        likely = likely_unit(wanted.unit, wanted.dimensions)
        hint = f"Did you mean '{likely}'?" if likely else _usual(wanted)
        problems.add(wanted.place, "unit", f"'{wanted.unit}' is not a known unit.", hint)
        return None
    if given.dimension not in wanted.dimensions:
        message = f"'{wanted.unit}' is the unit of {DIMENSIONS[given.dimension].noun}, which does not fit here."
        problems.add(wanted.place, "dimension", message, _usual(wanted))
        return None
    if head is not None and (head.dimension, head.factor, head.offset) != (given.dimension, given.factor, given.offset):
        message = f"'{wanted.unit}' is given for column {columns.label(index)} of '{columns.file}'."
        problems.add(wanted.place, "unit", message, "Leave the unit out, or name the one that the file has.")
        return None
    return given


def _unit_of_head(columns: Columns, index: int, head: Unit | None, wanted: Wanted, problems: Problems) -> Unit | None:
    if head is not None and head.dimension in wanted.dimensions:
        return head
    label = f"column {columns.label(index)} of '{columns.file}'"
    if head is not None:
        message = f"The {label} holds {DIMENSIONS[head.dimension].noun}, which does not fit here."
        place = Place(columns.file, columns.head_line or 1, 1)
        problems.add(place, "dimension", message, _usual(wanted))
        return None
    if "number" in wanted.dimensions:
        return find_unit("", ("number",))
    problems.add(wanted.place, "unit", f"The unit of {label} is not known.", _usual(wanted))
    return None


def _usual(wanted: Wanted) -> str:
    units = [unit for name in wanted.dimensions for unit in DIMENSIONS[name].usual]
    return "Give one of " + ", ".join(units[:8]) + "." if len(units) > 1 else f"Give {units[0]}."


def _in_base(values: Floats, unit: Unit) -> Floats:
    power = unit.power
    # Dividing by a whole power of ten rounds once, as reading "50.1e6" would; multiplying by 1e-3 would round twice.
    scaled = values / 10.0**-power if power is not None and power < 0 else values * unit.factor
    return frozen(scaled + unit.offset)


def _rising(columns: Columns, index: int, values: Floats, faults: Faults) -> tuple[Floats, bool]:
    """x in rising order, and whether it was turned round; a fault where it stands still or turns on the way."""
    steps = np.diff(values)
    turned = bool(len(steps)) and int(np.sum(steps < 0)) > int(np.sum(steps > 0))
    wrong = np.flatnonzero(steps >= 0 if turned else steps <= 0)
    for row in map(int, wrong):
        cell = columns.cells[index][row + 1].strip()
        above = columns.rows.numbers[row]
        if steps[row] == 0:
            message, hint = f"'{cell}' stands on line {above} already.", "Each x may stand once."
        else:
            way = "fall" if turned else "rise"
            message, hint = f"'{cell}' does not {way} from line {above}.", "One sweep of rising or falling x is read."
        faults.add(*columns.place(row + 1, index), "order", message, hint)
    return (values[::-1] if turned else values), turned


def _check_commas(columns: Columns, x_index: int, y_index: int, faults: Faults) -> None:
    """One column with points and the other with commas: the commas may stand between thousands."""
    texts = {index: "".join(columns.cells[index]) for index in (x_index, y_index)}
    commas = [index for index, text in texts.items() if "," in text and "." not in text]
    if len(commas) != 1 or not any("." in text for text in texts.values()):
        return
    row, cell = next((row, cell) for row, cell in enumerate(columns.cells[commas[0]]) if "," in cell)
    message = f"'{cell.strip()}' has a comma, the numbers of the other column have a point."
    faults.add(*columns.place(row, commas[0]), "number", message, "Write all of them in one way.")


def _check_points(columns: Columns, faults: Faults) -> None:
    points = len(columns.rows.numbers)
    if points < FEWEST_POINTS:
        line = columns.rows.numbers[-1] if points else 1
        message = f"The trace has {points} point{'s' if points != 1 else ''}."
        faults.add(line, 1, "points", message, f"A trace needs {FEWEST_POINTS} at least.")
