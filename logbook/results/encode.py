"""Results as JSON text, and the schema it keeps to."""

from __future__ import annotations

import json
from importlib.resources import files
from typing import Any

from logbook.book import Book
from logbook.results.data import results_data

_encoder = json.JSONEncoder(ensure_ascii=False, allow_nan=False, separators=(", ", ": "))


def results_json(book: Book) -> bytes:
    """The whole book as JSON in UTF-8: one line for each item of a list, the same bytes in every run.

    A lone surrogate (from an escape in YAML, or a file name that is not UTF-8) stays the escape that JSON has for it.
    """
    lines = [f"{_encoder.encode(key)}: {_value(value)}" for key, value in results_data(book).items()]
    text = "{\n" + ",\n".join(lines) + "\n}\n"
    return text.encode("utf-8", "backslashreplace")


def _value(value: Any) -> str:
    # The encoder's own indentation would put every number on a line, and runs in Python instead of C.
    if isinstance(value, list) and value:
        return "[\n" + ",\n".join(map(_encoder.encode, value)) + "\n]"
    return _encoder.encode(value)


def schema_text() -> str:
    """The JSON Schema of `results.json`, as shipped with the package."""
    return (files("logbook") / "results.schema.json").read_text(encoding="utf-8")
