"""The strongest and the weakest signal that are expected, stage by stage: what compresses, what bears too little."""

from __future__ import annotations

from math import inf, isfinite, nan

import numpy as np

from logbook.pieces import Line, Note, Piece, Strong, Table, Text
from logbook.prediction import Prediction
from logbook.quantity_display import show_value
from logbook.showing.words import decibels


def level_check(prediction: Prediction) -> list[Piece]:
    """Headroom of every stage at the strongest signal, signal to noise at the weakest; nothing without either."""
    chain = prediction.chain
    if chain.strongest is None and chain.weakest is None:
        return []
    pieces: list[Piece] = [_table(prediction)]
    if chain.strongest is not None:
        pieces += _compressing(prediction, chain.strongest.value)
    return pieces


def _ahead_db(prediction: Prediction) -> list[float]:
    """Gain from the chain's input to each stage's input, dB."""
    return [node.gain_db - node.stage_gain_db for node in prediction.nodes]


def headrooms(prediction: Prediction, level_dbm: float) -> list[float]:
    """Compression point less level at each stage's input, dB; inf where a stage gives none."""
    stages = prediction.nominal
    points = [inf] * len(prediction.nodes) if stages is None else [float(p) for p in np.asarray(stages.ip1db_dbm)]
    return [point - level_dbm - ahead for point, ahead in zip(points, _ahead_db(prediction), strict=True)]


def _table(prediction: Prediction) -> Table:
    chain = prediction.chain
    head = ["stage"]
    columns: list[list[str]] = []
    ahead = _ahead_db(prediction)
    if chain.strongest is not None:
        level = chain.strongest.value
        room = headrooms(prediction, level)
        head += ["strongest, at its input, dBm", "headroom, dB"]
        columns += [
            [decibels(level + gain) for gain in ahead],
            [decibels(each) if isfinite(each) else "no point given" for each in room],
        ]
        if any("max_input" in stage.parameters for stage in chain.stages):
            head.append("left to what it bears, dB")
            columns.append([_left(prediction, i, level + gain) for i, gain in enumerate(ahead)])
    if chain.weakest is not None:
        level = chain.weakest.value
        head += ["weakest, behind it, dBm", "over the noise, dB"]
        after = [level + node.gain_db for node in prediction.nodes]
        columns += [
            [decibels(each) for each in after],
            [decibels(each - node.noise_dbm) for each, node in zip(after, prediction.nodes, strict=True)],
        ]
    rows: list[tuple[Line, ...]] = [
        (node.stage, *(column[i] for column in columns)) for i, node in enumerate(prediction.nodes)
    ]
    said = [
        f"{word} {show_value(level.value, 'dBm')}"
        for word, level in (("strongest", chain.strongest), ("weakest", chain.weakest))
        if level is not None
    ]
    caption = f"Expected at the input: {', '.join(said)}; gains as they stand"
    return Table(tuple(head), tuple(rows), caption, frozenset(range(1, len(head))))


def _left(prediction: Prediction, index: int, level_dbm: float) -> str:
    most = prediction.chain.stages[index].value("max_input")
    return decibels((nan if most is None else most) - level_dbm)


def _compressing(prediction: Prediction, level_dbm: float) -> list[Piece]:
    """The stages that would compress at the strongest signal, and the one that is next."""
    room = headrooms(prediction, level_dbm)
    names = prediction.chain.stage_names
    over = [name for name, left in zip(names, room, strict=True) if left < 0]
    if over:
        who = f"{over[0]} would compress" if len(over) == 1 else f"{', '.join(over)} would compress"
        worst = min(zip(room, names, strict=True))
        words = f"At the strongest signal {who}: {worst[1]} gets {-worst[0]:.1f} dB more than its 1 dB point."
        return [Note(words, "caution")]
    known = [(left, name) for left, name in zip(room, names, strict=True) if isfinite(left)]
    if not known:
        return [Text("No stage gives a compression point, so nothing can be said of the strongest signal.")]
    left, name = min(known)
    return [
        Text(("At the strongest signal no stage compresses; ", Strong(name), f" is the nearest, {left:.1f} dB away."))
    ]
