"""A chain as pieces: block diagram, level plan, cascade table, shares; and what a change does to it."""

from __future__ import annotations

from math import isfinite

from logbook.compare.deltas import chain_deltas
from logbook.hardware import Chain, Stage, changed_stages
from logbook.kind import Outcome, View
from logbook.model import PLANNED, Block
from logbook.physics.noise import density_from_temperature, noise_power_dbm
from logbook.pieces import (
    Axis,
    Bars,
    Box,
    Chart,
    Diagram,
    Folded,
    Items,
    Line,
    Note,
    Picture,
    Piece,
    Series,
    Table,
    Text,
)
from logbook.prediction import Prediction, Terms
from logbook.quantity_display import show_frequency, show_value
from logbook.showing.cascade import bandwidth_hz, cascade_table, first_order, further_table, totals_table
from logbook.showing.cautions import power_caution
from logbook.showing.deltas import deltas_table
from logbook.showing.level_check import level_check
from logbook.showing.plans import plan_pieces
from logbook.showing.words import decibels, percent


def show_chain(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The chain written in this block, as predicted."""
    chains = [each for each in outcome.data or () if isinstance(each, Chain)]
    pieces: list[Piece] = []
    for chain in chains:
        now = view.revision.chains.get(chain.name, chain) if view.revision is not None else chain
        pieces += chain_pieces(view.predict(now, Terms()), None)
    return pieces


def show_change(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """What was done, and what it is predicted to do."""
    revision = view.revision
    pieces: list[Piece] = []
    for change in outcome.data or ():
        name = change.chain
        made = revision.made.get(name) if revision is not None else None
        steps = made.steps if made is not None else change.steps
        if change.why:
            pieces.append(Text(f"Why: {change.why}."))
        if steps:
            pieces.append(Items(tuple(step.words for step in steps)))
        if revision is None or name not in revision.chains:
            continue
        parent = view.revisions.get(revision.comes_from or "")
        before = parent.chains.get(name) if parent is not None else None
        prediction = view.predict(revision.chains[name], Terms())
        pieces.append(diagram(prediction, before))
        # A plan's own entry shows what the plan promises, also when the label has been built since.
        deltas = [d for d in chain_deltas(revision, parent, view.predict, view.rules) if d.chain == name]
        if deltas:
            caption = f"Predicted for chain {name}: {revision.comes_from} to {revision.label}"
            pieces.append(deltas_table(deltas, caption))
    if revision is not None and revision.state == PLANNED:
        parent = view.revisions.get(revision.comes_from or "")
        pieces += plan_pieces(revision, parent, view.findings, view.predict)
    return pieces


def chain_pieces(prediction: Prediction, before: Chain | None) -> list[Piece]:
    """All that is predicted of a chain."""
    pieces: list[Piece] = [diagram(prediction, before), *warnings(prediction)]
    if prediction.chain.level is not None:
        pieces.append(level_plan(prediction))
    pieces += [totals_table(prediction), *first_order(prediction), cascade_table(prediction)]
    pieces += [Folded("More, stage by stage", (further_table(prediction),)), *level_check(prediction)]
    shares = shares_picture(prediction)
    if shares is not None:
        pieces.append(shares)
    return [*pieces, *assumptions(prediction)]


def diagram(prediction: Prediction, before: Chain | None) -> Diagram:
    """The chain's block diagram; stages that a change made or touched are marked."""
    chain = prediction.chain
    said = changed_stages(before, chain)
    boxes = tuple(
        Box(stage.name, stage.symbol, _stage_lines(stage, prediction, index), said.get(stage.name, ""))
        for index, stage in enumerate(chain.stages)
    )
    enters = show_frequency(prediction.frequencies_hz[0])
    if chain.level is not None:
        enters += f", {show_value(chain.level.value, 'dBm')}"
    leaves = show_frequency(prediction.frequencies_hz[-1])
    return Diagram(f"Chain {chain.name}", enters, boxes, leaves)


def _stage_lines(stage: Stage, prediction: Prediction, index: int) -> tuple[str, ...]:
    node = prediction.nodes[index]
    lines = [f"{decibels(node.stage_gain_db)} dB"] if isfinite(node.stage_gain_db) else []
    if isfinite(node.stage_nf_db) and not stage.passive:
        lines.append(f"NF {decibels(node.stage_nf_db)} dB")
    if stage.oscillator is not None:
        lines.append(f"LO {show_frequency(stage.oscillator.at(prediction.frequencies_hz[0]))}")
    return tuple(lines)


def level_plan(prediction: Prediction) -> Picture:
    """Signal, noise and compression ceiling along the stages."""
    chain = prediction.chain
    assert chain.level is not None
    level = chain.level.value
    names = ("input", *chain.stage_names)
    x = [float(i) for i in range(len(names))]
    signal = [level, *(node.level_dbm for node in prediction.nodes)]
    noise = [_input_noise(prediction), *(node.noise_dbm for node in prediction.nodes)]
    ceiling = [float("nan"), *(node.level_dbm + node.headroom_db for node in prediction.nodes)]
    series = [
        Series("signal", x, signal, "signal", marker=True),
        Series("noise", x, noise, "noise", marker=True),
        Series("compression ceiling", x, ceiling, "ceiling", marker=True),
    ]
    drawn = tuple(s for s in series if any(isfinite(v) for v in s.y))
    rows: list[tuple[Line, ...]] = [
        (name, decibels(s), decibels(n), decibels(c))
        for name, s, n, c in zip(names, signal, noise, ceiling, strict=True)
    ]
    head = ("behind", "signal, dBm", "noise, dBm", "compression ceiling, dBm")
    worst = min(prediction.nodes, key=lambda node: node.headroom_db if isfinite(node.headroom_db) else float("inf"))
    alt = f"Levels along chain {chain.name}: {show_value(level, 'dBm')} enters, {show_value(signal[-1], 'dBm')} leaves."
    if isfinite(worst.headroom_db):
        alt += f" The least headroom is {decibels(worst.headroom_db)} dB, at {worst.stage}."
    return Picture(
        title="Level plan",
        drawing=Chart(Axis("", "category", names), Axis("level, dBm"), drawn),
        alt=alt,
        numbers=Table(head, tuple(rows), "", frozenset({1, 2, 3})),
    )


def _input_noise(prediction: Prediction) -> float:
    density = density_from_temperature(prediction.source_temperature_k)
    return float(noise_power_dbm(density, bandwidth_hz(prediction)))


def shares_picture(prediction: Prediction) -> Picture | None:
    """What each stage contributes to the noise and to the third-order distortion; None where neither is known."""
    noise = (prediction.source_share, *(node.noise_share for node in prediction.nodes))
    third = (0.0, *(node.iip3_share for node in prediction.nodes))
    groups = [(n, v) for n, v in (("noise", noise), ("third-order distortion", third)) if isfinite(v[-1])]
    if not groups:
        return None
    labels = ("source", *prediction.chain.stage_names)
    rows: list[tuple[Line, ...]] = [
        (label, *(percent(values[i]) for _, values in groups)) for i, label in enumerate(labels)
    ]
    most = " ".join(f"Most of the {n} comes from {labels[max(range(len(v)), key=v.__getitem__)]}." for n, v in groups)
    return Picture(
        title="Shares of noise and distortion",
        drawing=Bars(labels, tuple(n for n, _ in groups), tuple(v for _, v in groups)),
        alt=most,
        numbers=Table(("stage", *(f"of the {n}" for n, _ in groups)), tuple(rows), "", frozenset({1, 2})),
    )


def warnings(prediction: Prediction) -> list[Piece]:
    """What the reader must know before the numbers: unknown noise, a lineup that falls short, external noise."""
    pieces = power_caution(node.level_dbm for node in prediction.nodes)
    if prediction.noise_unknown_from:
        stage = prediction.noise_unknown_from
        words = f"The noise is not known from {stage} on: it has gain and no noise figure is given."
        pieces.append(Note(words, "caution"))
    lineup = prediction.chain.lineup
    if lineup is not None and prediction.held_at:
        short = prediction.totals["range_left"].value if prediction.held_at == "top" else float("nan")
        words = f"The lineup cannot be met: {lineup.adjust} is held at the {prediction.held_at} of its range."
        if isfinite(short):
            words += f" The range falls short by {show_value(-short, 'dB')}."
        pieces.append(Note(words, "caution"))
    if prediction.source_share > 0.5 and prediction.source_temperature_k > 2 * 290.0:
        share = percent(prediction.source_share)
        words = f"External noise sets {share} of the noise floor: lowering the chain's own noise gains little here."
        pieces.append(Note(words))
    return pieces


def assumptions(prediction: Prediction) -> list[Piece]:
    """Which stages were taken as ideal because nothing was given."""
    words = {"iip3": "third-order intercept", "iip2": "second-order intercept", "ip1db": "compression point"}
    count = len(prediction.chain.stages)
    lines: list[Line] = []
    for name, stages in prediction.ideal.items():
        if 0 < len(stages) < count:
            lines.append(f"no {words[name]} given, taken as ideal: {', '.join(stages)}")
        elif len(stages) == count:
            lines.append(f"no stage gives a {words[name]}: its total is not known")
    mixers = [s.name for s in prediction.chain.stages if s.oscillator and "image_rejection" not in s.parameters]
    if mixers:
        lines.append(f"no image rejection given, noise at the image taken as fully rejected: {', '.join(mixers)}")
    return [Items(tuple(lines))] if lines else []
