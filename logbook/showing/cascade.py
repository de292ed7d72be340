"""The numbers of a chain as tables: its totals, their doubt, and its state behind each stage."""

from __future__ import annotations

from math import isnan, log10

from logbook.physics.linearity import output_compression, output_intercept
from logbook.physics.noise import temperature_from_nf
from logbook.pieces import Line, Note, Piece, Table
from logbook.prediction import FIRST_ORDER_UP_TO_DB, Prediction, by_monte_carlo, wide_inputs
from logbook.quantity_display import show_frequency, show_value
from logbook.showing.words import decibels, difference_unit, percent, plain, quantity_words


def first_order(prediction: Prediction) -> list[Piece]:
    """Where an input's doubt is too wide for first order: the totals' doubt both ways, and which one is used."""
    wide = wide_inputs(prediction.chain)
    if not wide:
        return []
    drawn = by_monte_carlo(prediction.chain, prediction.terms)
    rows: list[tuple[Line, ...]] = []
    for name, total in prediction.totals.items():
        other = drawn[name]
        if total.u and other.u:
            unit = difference_unit(total.unit)
            rows.append((quantity_words(name), show_value(total.u, unit), show_value(other.u, unit)))
    words = (
        f"The doubt of {', '.join(wide)} is above {FIRST_ORDER_UP_TO_DB:g} dB, where propagation to first order is an "
        "approximation. Verdicts use first order; beside it stands the same by 20,000 random draws."
    )
    head = ("total", "u, first order", "u, by Monte Carlo")
    return [Note(words), Table(head, tuple(rows), "Doubt of the totals, both ways", frozenset({1, 2}))]


def totals_table(prediction: Prediction) -> Table:
    """The totals with their doubt, or with the reason why they are not known."""
    rows: list[tuple[Line, ...]] = []
    for name, total in prediction.totals.items():
        known = show_value(total.value, total.unit, total.u)
        rows.append((quantity_words(name), f"not known: {total.words}" if isnan(total.value) else known))
    where = f" at {show_frequency(prediction.frequencies_hz[0])}"
    return Table(("total", "predicted"), tuple(rows), f"Chain {prediction.chain.name}{where}", frozenset({1}))


def cascade_table(prediction: Prediction) -> Table:
    """The state of the chain behind each stage."""
    rows: list[tuple[Line, ...]] = []
    for node in prediction.nodes:
        rows.append(
            (
                node.stage,
                show_frequency(node.frequency_hz),
                decibels(node.stage_gain_db, 2),
                decibels(node.stage_nf_db, 2),
                decibels(node.gain_db, 2),
                decibels(node.nf_db, 2),
                decibels(node.noise_dbm),
                decibels(node.level_dbm),
                decibels(node.iip3_dbm),
                decibels(node.ip1db_dbm),
                decibels(node.headroom_db),
                percent(node.noise_share),
                percent(node.iip3_share),
            )
        )
    head = (
        "stage",
        "frequency",
        "gain, dB",
        "NF, dB",
        "gain so far, dB",
        "NF so far, dB",
        "noise, dBm",
        "level, dBm",
        "IIP3 so far, dBm",
        "IP1dB so far, dBm",
        "headroom, dB",
        "of the noise",
        "of the distortion",
    )
    return Table(head, tuple(rows), "Stage by stage", frozenset(range(1, 13)))


def further_table(prediction: Prediction) -> Table:
    """What the cascade table leaves out: noise temperature and density, second order, and what stands at the output."""
    rows: list[tuple[Line, ...]] = []
    for node in prediction.nodes:
        density = node.noise_dbm - 10 * log10(bandwidth_hz(prediction))
        rows.append(
            (
                node.stage,
                plain(float(temperature_from_nf(node.nf_db)), "K"),
                decibels(density),
                decibels(node.iip2_dbm),
                decibels(output_intercept(node.iip3_dbm, node.gain_db)),
                decibels(output_intercept(node.iip2_dbm, node.gain_db)),
                decibels(output_compression(node.ip1db_dbm, node.gain_db)),
            )
        )
    head = (
        "up to",
        "noise temperature",
        "noise density, dBm/Hz",
        "IIP2, dBm",
        "OIP3, dBm",
        "OIP2, dBm",
        "OP1dB, dBm",
    )
    return Table(head, tuple(rows), "From the input up to each stage", frozenset(range(1, 7)))


def bandwidth_hz(prediction: Prediction) -> float:
    """The bandwidth in which noise counts, Hz; nan when none is given."""
    chain, terms = prediction.chain, prediction.terms
    return terms.bandwidth_hz or (chain.bandwidth_hz.value if chain.bandwidth_hz is not None else float("nan"))
