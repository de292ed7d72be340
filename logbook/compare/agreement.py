"""Measurement against prediction, for the reading's own conditions; and where a difference could come from."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from math import isfinite, isnan

from logbook.compare.verdicts import AGREES, DISAGREES, NOT_STATED, Rules
from logbook.findings import Agreement, Share
from logbook.hardware import Chain, Parameter
from logbook.model import Result, Source
from logbook.physics.uncertainty import en_number, explain
from logbook.prediction import TOTAL_UNITS, Estimate, Prediction, Terms
from logbook.quantities import known_quantity

Predict = Callable[[Chain, Terms], Prediction]


def terms_of(result: Result) -> Terms:
    """What a prediction must be made for to stand beside a result."""
    known = known_quantity(result.quantity)
    noise = known is not None and known.noise
    return Terms(
        at_hz=result.at_hz,
        bandwidth_hz=result.conditions.rbw_hz if noise else None,
        source_temperature_k=result.conditions.source_temperature_k,
    )


def predicted_for(result: Result, chain: Chain, predict: Predict) -> Estimate | None:
    """What the chain is predicted to do under the result's own conditions; None for what no cascade yields."""
    if result.quantity == "output_level":
        return _output_level(result, predict(chain, terms_of(result)))
    if result.quantity not in TOTAL_UNITS:
        return None
    return predict(chain, terms_of(result)).totals.get(result.quantity)


def _output_level(result: Result, prediction: Prediction) -> Estimate | None:
    gain = prediction.totals["gain"]
    level = prediction.chain.level
    drive = result.conditions.drive_dbm
    if drive is not None:
        return Estimate(gain.value + drive, "dBm", gain.parts, gain.words)
    if level is None:
        return None
    own = {level.source: level.u} if level.u else {}
    return Estimate(gain.value + level.value, "dBm", {**(gain.parts or {}), **own} or None, gain.words)


def agreement(result: Result, chain: Chain, predict: Predict, rules: Rules) -> Agreement | None:
    """A measured result against the prediction; None where there is no prediction, or only a bound is known."""
    if result.name or result.bound or isnan(result.value) or _peak_of_noise(result):
        return None
    estimate = predicted_for(result, chain, predict)
    if estimate is None or isnan(estimate.value):
        return None
    difference = result.value - estimate.value
    u_measured, u_predicted = result.u, estimate.u
    if u_measured is None and u_predicted is None:
        smallest = rules.smallest(result.quantity, result.unit, estimate.value)
        en, why = float("nan"), NOT_STATED
        verdict = AGREES if abs(difference) <= smallest else DISAGREES
    else:
        k = rules.coverage
        en = en_number(difference, k * (u_measured or 0.0), k * (u_predicted or 0.0))
        verdict = AGREES if en <= 1 else DISAGREES
        silent = "the prediction" if u_predicted is None else "the reading" if u_measured is None else ""
        why = f"{NOT_STATED} for {silent}" if silent else ""
    return Agreement(
        key=result.key,
        revision=result.revision,
        result=result,
        measured=result.value,
        predicted=estimate.value,
        u_measured=u_measured,
        u_predicted=u_predicted,
        unit=result.unit,
        en=en,
        verdict=verdict,
        why=why,
        explain=partial(_shares, difference, estimate, chain, u_measured or 0.0),
    )


def _peak_of_noise(result: Result) -> bool:
    """A peak reading of noise says nothing of its power, which is what is predicted."""
    known = known_quantity(result.quantity)
    return known is not None and known.noise and result.conditions.averaging == "peak"


def _shares(difference: float, estimate: Estimate, chain: Chain, u_measured: float) -> tuple[Share, ...]:
    """Each tolerance's share of the prediction's variance, and the shift that would most likely explain it."""
    inputs: dict[Source, tuple[float, float]] = {}
    for source, part in (estimate.parts or {}).items():
        parameter = parameter_of(chain, source)
        if parameter is not None and parameter.u:
            inputs[source] = (part / parameter.u, parameter.u)
    found = explain(difference, inputs, u_measured)
    rows = [Share(s, e.share, e.shift, _unit(s)) for s, e in found.items() if isfinite(e.share)]
    return tuple(sorted(rows, key=lambda row: -row.share))


def parameter_of(chain: Chain, source: Source) -> Parameter | None:
    """The chain's parameter that a source of doubt stands for."""
    stage = chain.stage(source.name) if source.sort == "stage" else None
    if stage is not None:
        return next((p for p in stage.parameters.values() if p.source == source), None)
    whole = [chain.level, chain.bandwidth_hz, chain.source_temperature_k, chain.snr_db]
    if chain.lineup is not None:
        whole += [chain.lineup.input_dbm, chain.lineup.level_dbm]
    return next((p for p in whole if p is not None and p.source == source), None)


_UNITS = {
    "noise_voltage": "V/rtHz",
    "noise_current": "A/rtHz",
    "termination": "ohm",
    "temperature": "K",
    "bandwidth": "Hz",
    "source_temperature": "K",
    "external_noise": "K",
}


def _unit(source: Source) -> str:
    return _UNITS.get(source.what, "dB")
