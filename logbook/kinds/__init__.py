"""One file for each kind of block; the registry is what this folder holds."""

from __future__ import annotations

import pkgutil
from functools import cache
from importlib import import_module

from logbook.kind import Kind


@cache
def registry() -> dict[str, Kind]:
    """Every kind by its word, in alphabetical order. A kind that cannot be imported stops the run with its name."""
    found: dict[str, Kind] = {}
    for module in sorted(pkgutil.iter_modules(__path__), key=lambda m: m.name):
        if module.name.startswith("_"):
            continue
        try:
            kind = import_module(f"{__name__}.{module.name}").KIND
        except Exception as error:
            raise ImportError(f"The kind of block in kinds/{module.name}.py cannot be loaded: {error}") from error
        found[kind.word] = kind
    return found
