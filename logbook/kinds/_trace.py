"""A trace named by a block: a CSV's two columns, or points written in the block."""

from __future__ import annotations

from logbook.fields import Field, Reader, either, mapping, text
from logbook.kind import Session
from logbook.model import Values
from logbook.problems import Place
from logbook.traces.csv_trace import Columns, read_table
from logbook.traces.picking import Wanted, pick
from logbook.traces.trace import Trace


def axis() -> Reader:
    """Which column of a file, and its unit where the file does not say: a head, or {column: ..., unit: ...}."""
    return either(text(), mapping(Field("column", text()), Field("unit", text())))


def wanted(values: Values, key: str, dimensions: tuple[str, ...]) -> Wanted:
    """What a block asks for on one axis."""
    found = values.get(key)
    if found is None:
        return Wanted(dimensions, values.place("file"))
    if isinstance(found, str):
        return Wanted(dimensions, values.place(key), _column(found))
    column = found.get("column")
    return Wanted(dimensions, found.place("column"), _column(column), found.get("unit"))


def _column(said: str | None) -> str | int | None:
    """A column by its head, or by its number from 1."""
    return int(said) if said is not None and said.isdecimal() else said


def read_columns(file: str, place: Place, session: Session) -> Columns | None:
    """The table in a CSV file of the logbook; None with faults."""
    data = session.read_file(file, place)
    return None if data is None else read_table(data, session.file_path(file), session.problems)


def trace_of(values: Values, x: tuple[str, ...], y: tuple[str, ...], session: Session) -> Trace | None:
    """The trace in the CSV file that a block names, by the dimensions of its axes; None with faults."""
    columns = read_columns(values["file"], values.place("file"), session)
    if columns is None:
        return None
    return pick(columns, wanted(values, "x", x), wanted(values, "y", y), session.problems)
