"""Revisions and their chains as plain data."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from logbook.hardware import Chain, Parameter, Stage
from logbook.prediction import TOTAL_UNITS, Node, Prediction, Terms
from logbook.results.numbers import number, word
from logbook.revision import Alternative, Made, Revision

Predict = Callable[[Chain, Terms], Prediction]

# Units of a stage's parameters; all others are ratios in dB.
_UNITS = {
    **dict.fromkeys(("iip3", "oip3", "iip2", "oip2", "ip1db", "op1db", "max_input"), "dBm"),
    "noise_voltage": "V/rtHz",
    "noise_current": "A/rtHz",
    "termination": "ohm",
    "temperature": "K",
    "bandwidth": "Hz",
}


def revision_data(revision: Revision, predict: Predict) -> dict[str, Any]:
    """A revision; with the plan of the same label where it was planned first."""
    plan = revision.planned
    return {
        "label": revision.label,
        **_state(revision, predict),
        "entries": list(revision.entries),
        "planned": None if plan is None else _state(plan, predict),
    }


def _state(revision: Revision, predict: Predict) -> dict[str, Any]:
    return {
        "from": revision.comes_from,
        "state": revision.state,
        "date": revision.date,
        "entry": revision.entry,
        "complete": not revision.broken,
        "chains": _chains(revision.chains, revision.made, predict),
        "alternatives": [_alternative(each, predict) for each in revision.alternatives],
    }


def _alternative(each: Alternative, predict: Predict) -> dict[str, Any]:
    chain = each.chains[each.chain]
    return {
        "name": each.name,
        "chain": each.chain,
        "steps": [step.words for step in each.steps],
        "cost": number(each.cost),
        "currency": word(each.currency),
        "totals": _totals(predict(chain, Terms())),
    }


def _chains(chains: Mapping[str, Chain], made: Mapping[str, Made], predict: Predict) -> dict[str, Any]:
    return {name: _chain(chain, made.get(name), predict(chain, Terms())) for name, chain in chains.items()}


def _chain(chain: Chain, made: Made | None, prediction: Prediction) -> dict[str, Any]:
    return {
        "signal_hz": number(chain.signal_hz),
        "level_dbm": _value(chain.level),
        "bandwidth_hz": _value(chain.bandwidth_hz),
        "impedance_ohm": number(chain.impedance_ohm),
        "source_temperature_k": number(prediction.source_temperature_k),
        "snr_db": _value(chain.snr_db),
        "steps": [step.words for step in made.steps] if made is not None else [],
        "why": word(made.why) if made is not None else None,
        "stages": [_stage(stage) for stage in chain.stages],
        "nodes": [_node(node) for node in prediction.nodes],
        "totals": _totals(prediction),
        "lineup": _lineup(chain, prediction),
        "source_noise_share": number(prediction.source_share),
        "noise_unknown_from": word(prediction.noise_unknown_from),
        "taken_as_ideal": {name: list(stages) for name, stages in prediction.ideal.items()},
    }


def _value(parameter: Parameter | None) -> float | None:
    return None if parameter is None else number(parameter.value)


def _stage(stage: Stage) -> dict[str, Any]:
    oscillator = stage.oscillator
    return {
        "name": stage.name,
        "symbol": stage.symbol,
        "passive": stage.passive,
        "parameters": {
            name: {"value": number(each.value), "unit": _UNITS.get(name, "dB"), "u": number(each.u)}
            for name, each in stage.parameters.items()
        },
        "gain_range_db": None if stage.gain_range is None else [number(edge) for edge in stage.gain_range],
        "response": None if stage.response is None else stage.response.file,
        "lo_hz": None if oscillator is None else number(oscillator.frequency_hz),
        "lo_offset_hz": None if oscillator is None else number(oscillator.offset_hz),
        "output": None if oscillator is None else stage.output,
        "part": word(stage.part),
        "note": word(stage.note),
    }


def _node(node: Node) -> dict[str, Any]:
    """What stands behind one stage, from the chain's input up to there; `stage_...` is the stage's own."""
    return {
        "stage": node.stage,
        "frequency_hz": number(node.frequency_hz),
        "gain_db": number(node.gain_db),
        "nf_db": number(node.nf_db),
        "noise_dbm": number(node.noise_dbm),
        "level_dbm": number(node.level_dbm),
        "iip3_dbm": number(node.iip3_dbm),
        "iip2_dbm": number(node.iip2_dbm),
        "ip1db_dbm": number(node.ip1db_dbm),
        "headroom_db": number(node.headroom_db),
        "noise_share": number(node.noise_share),
        "iip3_share": number(node.iip3_share),
        "stage_gain_db": number(node.stage_gain_db),
        "stage_nf_db": number(node.stage_nf_db),
    }


def _totals(prediction: Prediction) -> dict[str, Any]:
    """Every total there is; one that does not apply to this chain, or is not known, is null and says why."""
    found = {}
    for name, unit in TOTAL_UNITS.items():
        total = prediction.totals.get(name)
        found[name] = {
            "value": None if total is None else number(total.value),
            "unit": unit,
            "u": None if total is None else number(total.u),
            "why": "not asked for" if total is None else word(total.words),
        }
    return found


def _lineup(chain: Chain, prediction: Prediction) -> dict[str, Any] | None:
    lineup = chain.lineup
    if lineup is None:
        return None
    totals = prediction.totals
    return {
        "input_dbm": number(lineup.input_dbm.value),
        "at": lineup.at,
        "level_dbm": number(lineup.level_dbm.value),
        "adjust": lineup.adjust,
        "setting": number(totals["setting"].value),
        "range_left": number(totals["range_left"].value),
        "held_at": word(prediction.held_at),
    }
