"""One file for each kind of block; the registry is what this folder holds."""

from __future__ import annotations

import pkgutil
from collections.abc import Iterator, Mapping
from functools import cache
from importlib import import_module

from logbook.kind import Kind


class Kinds(Mapping[str, Kind]):
    """Every kind by its word, in alphabetical order; each is imported when it is first asked for.

    `noise-vs-gain` stands in `noise_vs_gain.py`. One that cannot be imported stops the run with its name.
    """

    def __init__(self, modules: Iterator[str]) -> None:
        self._modules = {name.replace("_", "-"): name for name in sorted(modules) if not name.startswith("_")}
        self._found: dict[str, Kind] = {}

    def __getitem__(self, word: str) -> Kind:
        if word not in self._found:
            self._found[word] = self._load(word, self._modules[word])
        return self._found[word]

    def __contains__(self, word: object) -> bool:
        return word in self._modules

    def __iter__(self) -> Iterator[str]:
        return iter(self._modules)

    def __len__(self) -> int:
        return len(self._modules)

    def _load(self, word: str, module: str) -> Kind:
        try:
            kind: Kind = import_module(f"{__name__}.{module}").KIND
            if kind.word != word:
                raise ValueError(f"its word is '{kind.word}'")
        except Exception as error:
            raise ImportError(f"The kind of block in kinds/{module}.py cannot be loaded: {error}") from error
        return kind


@cache
def registry() -> Kinds:
    """The kinds that this folder holds."""
    return Kinds(module.name for module in pkgutil.iter_modules(__path__))
