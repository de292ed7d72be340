"""What to change next: what each stage alone would have to become for a missed target to be met, and whether it can."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from math import isfinite, isnan

import numpy as np

from logbook.compare.verdicts import MEETS
from logbook.findings import TargetVerdict
from logbook.hardware import Chain, Stage
from logbook.physics.cascade import Stages, cascade
from logbook.physics.constants import T0, Array
from logbook.physics.improvement import each_ideal, needed_intercept, needed_nf, needed_own_temperature
from logbook.physics.noise import temperature_from_density
from logbook.prediction import Prediction, Terms

Predict = Callable[[Chain, Terms], Prediction]

# One-sided 95 % of a normal distribution: how far a value must clear its limit for the target to be met.
_CLEAR = 1.6449

_NOISE = ("nf", "noise_temperature", "noise_floor", "noise_density", "output_noise", "sensitivity", "sfdr")
_POWER = {"iip3": 1.0, "oip3": 1.0, "iip2": 0.5, "oip2": 0.5, "ip1db": 1.0, "op1db": 1.0, "sfdr": 1.0}


@dataclass(frozen=True, slots=True)
class StageNeeds:
    """One stage's way to a target: `needed` is nan when it cannot do it alone; `if_ideal` the total with it ideal."""

    stage: str
    parameter: str
    now: float
    needed: float
    if_ideal: float
    share: float


@dataclass(frozen=True, slots=True)
class NextChange:
    """What to change for one target: `wanted` is the predicted total that meets it, `offset` what measuring adds."""

    verdict: TargetVerdict
    predicted: float
    wanted: float
    offset: float
    rows: tuple[StageNeeds, ...]
    external_share: float

    @property
    def alone(self) -> list[StageNeeds]:
        """The stages that can do it alone."""
        return [row for row in self.rows if isfinite(row.needed)]


def next_change(verdict: TargetVerdict, chain: Chain | None, predict: Predict) -> NextChange | None:
    """For a target that is missed or undecided; None when it is met, or no cascade yields the quantity."""
    target = verdict.target
    if verdict.verdict == MEETS or chain is None or target.name or isnan(verdict.value):
        return None
    terms = target.terms
    prediction = predict(chain, terms)
    total = prediction.totals.get(target.quantity)
    if total is None or isnan(total.value) or prediction.nominal is None:
        return None
    wanted_value = _limit(verdict)
    if wanted_value is None:
        return None
    offset = verdict.value - total.value if verdict.basis != "predicted" else 0.0
    wanted = wanted_value - offset
    rows = []
    if target.quantity in _NOISE:
        rows += _noise_rows(target.quantity, wanted, prediction)
    if target.quantity in _POWER:
        rows += _intercept_rows(target.quantity, wanted, prediction)
    if not rows:
        return None
    ordered = tuple(sorted(rows, key=lambda row: -row.share))
    return NextChange(verdict, total.value, wanted, offset, ordered, prediction.source_share)


def _limit(verdict: TargetVerdict) -> float | None:
    """The value that would meet the target with 95 % probability, on the side that is missed."""
    target, clear = verdict.target, _CLEAR * (verdict.u or 0.0)
    if target.high is not None and (target.low is None or verdict.value > (target.low + target.high) / 2):
        return target.high - clear
    return None if target.low is None else target.low + clear


def _noise_rows(quantity: str, wanted: float, prediction: Prediction) -> list[StageNeeds]:
    stages = prediction.nominal
    assert stages is not None
    source, target_k = _wanted_temperature(quantity, wanted, prediction)
    needed_own = needed_own_temperature(stages, target_k, source)
    figures = needed_nf(needed_own, stages.image)
    now = 1 + stages.own_temperature_k / T0 + stages.image
    # Ideal in what the row speaks of: its noise alone, where intercepts count as well.
    quiet = replace(each_ideal(stages), iip3_dbm=np.broadcast_to(stages.iip3_dbm, (len(now), len(now))))
    ideal = _noise_total(quantity, quiet, source, prediction)
    lineup = prediction.chain.lineup
    rows = []
    for i, stage in enumerate(prediction.chain.stages):
        share = prediction.nodes[i].noise_share
        if stage.passive and lineup is not None and lineup.adjust == stage.name:
            # Its loss is what the lineup makes it.
            continue
        if stage.passive:
            rows.append(_loss_row(quantity, wanted, i, stage, source, prediction, share))
        else:
            figure = float(10 * np.log10(now[i]))
            rows.append(StageNeeds(stage.name, "noise figure", figure, float(figures[i]), float(ideal[i]), share))
    return rows


def _wanted_temperature(quantity: str, wanted: float, prediction: Prediction) -> tuple[float, float]:
    """The source's temperature, and output noise over gain as a temperature, that a wanted total stands for. K."""
    if quantity == "nf":
        return T0, T0 * 10 ** (wanted / 10)
    if quantity == "noise_temperature":
        return T0, T0 + wanted
    return prediction.source_temperature_k, float(
        temperature_from_density(_wanted_density(quantity, wanted, prediction))
    )


def _wanted_density(quantity: str, wanted: float, prediction: Prediction) -> float:
    totals = prediction.totals
    floor, density = totals["noise_floor"].value, totals["noise_density"].value
    width = floor - density
    if quantity == "sfdr":
        return totals["iip3"].value - 1.5 * wanted - width
    if quantity == "sensitivity":
        return wanted - (totals["sensitivity"].value - floor) - width
    if quantity == "output_noise":
        return wanted - totals["gain"].value - width
    return wanted if quantity == "noise_density" else wanted - width


def _noise_total(quantity: str, stages: Stages, source: float, prediction: Prediction) -> Array:
    """The total of each copy of the stages, in the quantity's own unit."""
    done = cascade(stages, source, prediction.chain.in_phase)
    totals = prediction.totals
    nf: Array = done.nf_db[..., -1]
    if quantity == "nf":
        return nf
    if quantity == "noise_temperature":
        return np.asarray(T0 * (10 ** (nf / 10) - 1))
    gain = done.gain_db[..., -1]
    floor = done.noise_dbm_per_hz[..., -1] - gain + totals["noise_floor"].value - totals["noise_density"].value
    if quantity == "sfdr":
        return np.asarray(2 / 3 * (done.iip3_dbm[..., -1] - floor))
    if quantity == "sensitivity":
        return np.asarray(floor + totals["sensitivity"].value - totals["noise_floor"].value)
    if quantity == "output_noise":
        return np.asarray(floor + gain)
    if quantity == "noise_density":
        return np.asarray(done.noise_dbm_per_hz[..., -1] - gain)
    return np.asarray(floor)


def _loss_row(
    quantity: str, wanted: float, index: int, stage: Stage, source: float, prediction: Prediction, share: float
) -> StageNeeds:
    """A passive stage: its loss brought down to nothing, in small steps; the first that meets the target is needed."""
    stages = prediction.nominal
    assert stages is not None
    loss = -float(stages.gain_db[index])
    temperature = stage.value("temperature") or T0
    losses = np.linspace(loss, 0.0, 201)
    gain = np.repeat(stages.gain_db[None, :], len(losses), axis=0)
    own = np.repeat(stages.own_temperature_k[None, :], len(losses), axis=0)
    gain[:, index] = -losses
    own[:, index] = (10 ** (losses / 10) - 1) * temperature
    _line_up(prediction, index, loss - losses, gain, own)
    totals = _noise_total(quantity, replace(stages, gain_db=gain, own_temperature_k=own), source, prediction)
    met = totals >= wanted if quantity == "sfdr" else totals <= wanted
    needed = float(losses[int(np.argmax(met))]) if bool(met.any()) else float("nan")
    return StageNeeds(stage.name, "loss", loss, needed, float(totals[-1]), share)


def _line_up(prediction: Prediction, index: int, gained: Array, gain: Array, own: Array) -> None:
    """What is gained ahead of a lineup's level is taken back by the stage that it adjusts, within its range."""
    chain = prediction.chain
    if chain.lineup is None or index >= chain.stage_names.index(chain.lineup.at):
        return
    adjusted = chain.stage_names.index(chain.lineup.adjust)
    stage = chain.stages[adjusted]
    low, top = stage.gain_range or (-np.inf, np.inf)
    gain[:, adjusted] = np.clip(prediction.totals["setting"].value - gained, low, top)
    if stage.passive:
        own[:, adjusted] = (10 ** (-gain[:, adjusted] / 10) - 1) * (stage.value("temperature") or T0)


def _intercept_rows(quantity: str, wanted: float, prediction: Prediction) -> list[StageNeeds]:
    stages, totals = prediction.nominal, prediction.totals
    assert stages is not None
    kind = "iip3" if quantity == "sfdr" else "i" + quantity[1:]
    own: Array = {"iip3": stages.iip3_dbm, "iip2": stages.iip2_dbm, "ip1db": stages.ip1db_dbm}[kind]
    shift = _input_shift(quantity, prediction)
    target = 1.5 * wanted + totals["noise_floor"].value if quantity == "sfdr" else wanted - shift
    in_phase = 1.0 if prediction.chain.in_phase or kind == "ip1db" else 2.0
    power = _POWER[quantity] * in_phase
    needed = needed_intercept(stages.gain_db, own, target, power)
    done = cascade(each_ideal(stages), prediction.source_temperature_k, prediction.chain.in_phase)
    ideal = {"iip3": done.iip3_dbm, "iip2": done.iip2_dbm, "ip1db": done.ip1db_dbm}[kind][..., -1]
    shown = 2 / 3 * (ideal - totals["noise_floor"].value) if quantity == "sfdr" else ideal + shift
    words = {"iip3": "IIP3", "iip2": "IIP2", "ip1db": "input compression"}[kind]
    share = _shares(stages, own, power)
    return [
        StageNeeds(stage.name, words, float(own[i]), float(needed[i]), float(shown[i]), float(share[i]))
        for i, stage in enumerate(prediction.chain.stages)
        if isfinite(own[i])
    ]


def _input_shift(quantity: str, prediction: Prediction) -> float:
    """What leads from the input's figure to the one asked for: the gain for figures at the output."""
    gain = prediction.totals["gain"].value
    return {"oip3": gain, "oip2": gain, "op1db": gain - 1}.get(quantity, 0.0)


def _shares(stages: Stages, own: Array, power: float) -> Array:
    terms = 10 ** (power * (np.cumsum(stages.gain_db) - stages.gain_db - own) / 10)
    return np.asarray(terms / terms.sum())
