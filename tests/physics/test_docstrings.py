"""Every public function of the physics says what it computes and names its source."""

from __future__ import annotations

import importlib
import inspect
import pkgutil

import pytest

import logbook.physics

MODULES = [name for _, name, _ in pkgutil.iter_modules(logbook.physics.__path__, "logbook.physics.")]


def public(name: str) -> dict[str, object]:
    module = importlib.import_module(name)
    return {
        f"{name}.{key}": thing
        for key, thing in vars(module).items()
        if not key.startswith("_") and callable(thing) and getattr(thing, "__module__", None) == name
    }


@pytest.mark.parametrize("name", MODULES)
def test_every_public_function_names_its_source(name: str) -> None:
    functions = {k: f for k, f in public(name).items() if not inspect.isclass(f)}
    silent = [k for k, f in functions.items() if "Source: " not in " ".join((inspect.getdoc(f) or "").split())]
    assert silent == []


def test_there_are_functions_to_look_at() -> None:
    assert sum(len(public(name)) for name in MODULES) > 80


@pytest.mark.parametrize("name", MODULES)
def test_physics_stands_on_the_ground_floor(name: str) -> None:
    module = importlib.import_module(name)
    used = {getattr(thing, "__module__", "") or "" for thing in vars(module).values()}
    assert not [m for m in used if m.startswith("logbook") and not m.startswith("logbook.physics")]
