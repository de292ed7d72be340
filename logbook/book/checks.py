"""Checks of what the chains say: stages that get more than they bear."""

from __future__ import annotations

from collections.abc import Callable, Iterable

from logbook.hardware import Chain
from logbook.prediction import Prediction, Terms
from logbook.problems import CAUTION, Place, Problems
from logbook.quantity_display import show_value
from logbook.revision import Revision


def check_chains(
    revisions: Iterable[Revision], predict: Callable[[Chain, Terms], Prediction], problems: Problems
) -> None:
    """Look at every chain of every revision; a stage that is inherited is reported once, where it was written."""
    seen: set[tuple[Place, str]] = set()
    for revision in revisions:
        made = (revision, *([revision.planned] if revision.planned is not None else []))
        for each in made:
            for chain in each.chains.values():
                _check(chain, each.label, predict(chain, Terms()), problems, seen)


def _check(chain: Chain, label: str, prediction: Prediction, problems: Problems, seen: set[tuple[Place, str]]) -> None:
    for index in range(len(chain.stages)):
        _overloaded(chain, label, prediction, index, problems, seen)


def _overloaded(
    chain: Chain, label: str, prediction: Prediction, index: int, problems: Problems, seen: set[tuple[Place, str]]
) -> None:
    stage, node = chain.stages[index], prediction.nodes[index]
    most = stage.value("max_input")
    levels = [(word, each.value) for word, each in (("level", chain.level), ("strongest", chain.strongest)) if each]
    if most is None or not levels:
        return
    word, level = max(levels, key=lambda each: each[1])
    here = level + node.gain_db - node.stage_gain_db
    if here > most and _first(stage.place, "overload", seen):
        gets, bears = show_value(here, "dBm"), show_value(most, "dBm")
        message = (
            f"Stage '{stage.name}' gets {gets} on revision {label} at the chain's '{word}'; it bears {bears} at most."
        )
        problems.add(stage.place, "overload", message, "Put less ahead of it, or protect it.", CAUTION)


def _first(place: Place, code: str, seen: set[tuple[Place, str]]) -> bool:
    if (place, code) in seen:
        return False
    seen.add((place, code))
    return True
