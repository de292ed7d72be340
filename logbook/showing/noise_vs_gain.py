"""The split of noise by a gain control as pieces: the two parts over the setting, and which of them to attack."""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite, isnan, log10

import numpy as np

from logbook.kind import Outcome, View
from logbook.model import Block, Result
from logbook.physics.noise_split import NoiseSplit, noise_after_dbm, noise_ahead_dbm
from logbook.pieces import Axis, Chart, Line, Muted, Note, Picture, Piece, Series, Strong, Table, Text
from logbook.prediction import Terms
from logbook.quantity_display import show_value
from logbook.showing.readings import show_results
from logbook.showing.words import percent


@dataclass(frozen=True, slots=True)
class Split:
    """One split: settings (dB), the readings on equal terms, the two parts, and whether they can be told apart."""

    settings_db: tuple[float, ...]
    readings: tuple[Result, ...]
    split: NoiseSplit
    apart: bool
    control: str
    results: tuple[Result, ...]


def show_noise_vs_gain(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """Every split of the block: figure, advice, results."""
    pieces: list[Piece] = []
    splits = [each for each in outcome.data or () if isinstance(each, Split)]
    for split in splits:
        pieces += [_picture(split)] if split.apart else [_table(split), _refusal(split)]
        pieces += _fit(split)
        if split.apart:
            pieces += [*_advice(split), *_by_the_chain(split, view)]
    pieces += show_results(block, outcome, view)
    if any(split.apart for split in splits):
        pieces.append(Text(Muted("Noise ahead is stated as it would be at a setting of 0 dB.")))
    return pieces


def _parts(split: Split) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """From ahead, from after, and both together at each setting, dBm."""
    settings = np.array(split.settings_db)
    ahead = noise_ahead_dbm(split.split) + settings
    after = np.full_like(settings, noise_after_dbm(split.split))
    return ahead, after, 10 * np.log10(10 ** (ahead / 10) + 10 ** (after / 10))


def _picture(split: Split) -> Picture:
    ahead, after, both = _parts(split)
    order = np.argsort(split.settings_db)
    x = [split.settings_db[i] for i in order]
    errors = tuple(split.readings[i].u or 0.0 for i in order)

    def course(values: np.ndarray) -> list[float]:
        return [float(values[i]) for i in order]

    series = (
        Series("read", x, [split.readings[i].value for i in order], "now", line=False, marker=True, error=errors),
        Series("both together", x, course(both), "fit"),
        Series("from ahead of the control", x, course(ahead), "signal"),
        Series("from after it", x, course(after), "noise"),
    )
    name = split.control or "the control"
    level = noise_after_dbm(split.split) - noise_ahead_dbm(split.split)
    alt = (
        f"Output noise over the setting of {name}: what comes from ahead of it rises with the setting, what comes "
        f"from after it stays at {show_value(noise_after_dbm(split.split), 'dBm')}; "
        f"both are equal at {show_value(level, 'dB')}."
    )
    return Picture(
        title=f"Output noise over the setting of {name}",
        drawing=Chart(Axis("setting, dB"), Axis("output noise, dBm"), series),
        alt=alt,
        numbers=_table(split),
    )


def _table(split: Split) -> Table:
    if not split.apart:
        rows: list[tuple[Line, ...]] = [
            (show_value(s, "dB"), show_value(r.value, "dBm", r.u))
            for s, r in zip(split.settings_db, split.readings, strict=True)
        ]
        return Table(("setting", "read, on equal terms"), tuple(rows), "Output noise", frozenset({0, 1}))
    columns = _parts(split)
    rows = [
        (
            show_value(setting, "dB"),
            show_value(reading.value, "dBm", reading.u),
            *(show_value(float(column[i]), "dBm") for column in columns),
            f"{reading.value - float(columns[2][i]):+.2f} dB",
        )
        for i, (setting, reading) in enumerate(zip(split.settings_db, split.readings, strict=True))
    ]
    head = ("setting", "read, on equal terms", "from ahead", "from after", "both", "read less both")
    return Table(head, tuple(rows), "", frozenset(range(6)))


def _refusal(split: Split) -> Piece:
    words = (
        f"Not split: {split.results[0].words}. A part counts only when it is more than twice its own doubt. Read at "
        "settings further apart, as far down as the control goes and as far up, and with longer averaging."
    )
    return Note(words, "caution")


def _fit(split: Split) -> list[Piece]:
    """A word when the readings scatter more about the two parts than their stated doubt allows."""
    chi, freedom = split.split.chi_square, split.split.freedom
    if freedom > 0 and isfinite(chi) and chi > freedom + 3 * (2 * freedom) ** 0.5:
        words = (
            "The readings scatter about the sum of the two parts by more than their stated doubt: something else "
            "changes with the setting too, such as the control's own noise figure, or compression."
        )
        return [Note(words, "caution")]
    return []


def _advice(split: Split) -> list[Piece]:
    """Which of the two a change should attack, at the highest setting read."""
    name = split.control or "the control"
    top = max(split.settings_db)
    excess = noise_ahead_dbm(split.split) + top - noise_after_dbm(split.split)
    share = 1 / (1 + 10 ** (-excess / 10))
    where = f"At a setting of {show_value(top, 'dB')} {percent(share)} of the output noise comes from ahead of {name}"
    if excess >= 0:
        gone = -10 * log10(share)
        text = (
            f"{where}. A change should attack what stands ahead: less loss and a lower noise figure there. Were all "
            f"that comes after it silent, the noise would fall by {gone:.2f} dB."
        )
    else:
        gone = -10 * log10(1 - share)
        text = (
            f"{where}. A change should attack what comes after: more gain ahead of it, or less noise behind. Were all "
            f"that comes from ahead silent, the noise would fall by {gone:.2f} dB."
        )
    return [Text((Strong("What to attack: "), text))]


def _by_the_chain(split: Split, view: View) -> list[Piece]:
    """What the chain's own data say of the same split, at the setting that its lineup finds."""
    chains = view.revision.chains if view.revision is not None else {}
    chain = chains.get(split.results[0].chain) if split.results else None
    if chain is None or not split.control or chain.stage(split.control) is None:
        return []
    prediction = view.predict(
        chain, Terms(split.results[0].at_hz, None, split.results[0].conditions.source_temperature_k)
    )
    index = chain.stage_names.index(split.control)
    ahead = prediction.source_share + sum(node.noise_share for node in prediction.nodes[: index + 1])
    if isnan(ahead):
        return []
    gain = show_value(prediction.nodes[index].stage_gain_db, "dB")
    words = (
        f"By the chain's own data it would be {percent(ahead)} with {split.control} at {gain}, its own noise counted "
    )
    return [Text(words + "as coming from ahead.")]
