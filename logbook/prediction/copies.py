"""A chain as arrays: a nominal copy, and one up and one down for every source of doubt."""

from __future__ import annotations

import numpy as np

from logbook.hardware import Chain, Parameter, Stage
from logbook.physics.constants import T0, Array
from logbook.physics.noise import (
    galactic_temperature,
    image_from_rejection,
    own_temperature_from_nf,
    own_temperature_from_nf_dsb,
    own_temperature_from_noise_voltage,
    own_temperature_passive,
)
from logbook.prediction.data import TOTAL_UNITS, Estimate, Terms


def frequencies(chain: Chain, at_hz: float | None = None) -> list[float]:
    """The frequency at the input of each stage and, last, at the output. Hz; a mixer gives |f_lo − f| or f_lo + f."""
    signal = chain.signal_hz if at_hz is None else at_hz
    found = [signal]
    for stage in chain.stages:
        now = found[-1]
        if stage.oscillator is not None:
            lo = stage.oscillator.at(signal)
            now = lo + now if stage.output == "sum" else abs(lo - now)
        found.append(now)
    return found


class Copies:
    """The chain's parameters as arrays [copies, stages]: copy 0 nominal, then one up and one down for each source."""

    def __init__(self, chain: Chain, terms: Terms) -> None:
        self.chain = chain
        self.frequencies = frequencies(chain, terms.at_hz)
        self._doubts = list(_doubts(chain, terms))
        self.sources = [parameter.source for _, _, parameter in self._doubts]
        self.count = 1 + 2 * len(self._doubts)
        self._shifts = {(i, name): (k, p.u or 0.0) for k, (i, name, p) in enumerate(self._doubts)}

    def column(self, index: int, name: str, default: float = float("nan")) -> Array:
        """One parameter of one stage over all copies."""
        found = self.chain.stages[index].parameters.get(name)
        return self._spread(index, name, default if found is None else found.value)

    def scalar(self, name: str, parameter: Parameter | None, default: float = float("nan")) -> Array:
        """One parameter of the chain as a whole over all copies."""
        return self._spread(-1, name, default if parameter is None else parameter.value)

    def _spread(self, index: int, name: str, value: float) -> Array:
        column = np.full(self.count, value)
        shift = self._shifts.get((index, name))
        if shift is not None:
            k, u = shift
            column[1 + 2 * k] += u
            column[2 + 2 * k] -= u
        return column

    def estimate(self, name: str, values: Array, words: str = "") -> Estimate:
        """A total over all copies, as a number with its doubt by source (central differences)."""
        unit = TOTAL_UNITS[name]
        nominal = float(values[0])
        if not np.isfinite(nominal):
            return Estimate(float("nan"), unit, None, words or "not known")
        halves = (values[1::2] - values[2::2]) / 2
        parts = {s: float(half) for s, half in zip(self.sources, halves, strict=True) if abs(half) > 1e-12}
        return Estimate(nominal, unit, parts or None)


def _doubts(chain: Chain, terms: Terms) -> list[tuple[int, str, Parameter]]:
    found = [
        (index, name, parameter)
        for index, stage in enumerate(chain.stages)
        for name, parameter in stage.parameters.items()
        if parameter.u and name not in ("bandwidth", "max_input")
    ]
    whole = [("level", chain.level), ("strongest", chain.strongest), ("weakest", chain.weakest), ("snr", chain.snr_db)]
    if terms.bandwidth_hz is None:
        whole.append(("bandwidth", chain.bandwidth_hz))
    if terms.source_temperature_k is None:
        whole.append(("source_temperature", chain.source_temperature_k))
    if chain.lineup is not None:
        whole += [("lineup_input", chain.lineup.input_dbm), ("lineup_level", chain.lineup.level_dbm)]
    return found + [(-1, name, parameter) for name, parameter in whole if parameter is not None and parameter.u]


def gains(copies: Copies) -> tuple[Array, Array | None, float]:
    """Gain of each stage [copies, stages]; the lineup's setting as wanted and the top of its range."""
    chain = copies.chain
    gain = np.stack([own_gain(copies, i, stage) for i, stage in enumerate(chain.stages)], axis=-1)
    if chain.lineup is None:
        return gain, None, float("nan")
    names = chain.stage_names
    adjusted, fed = names.index(chain.lineup.adjust), names.index(chain.lineup.at)
    others = gain[:, :fed].copy()
    others[:, adjusted] = 0.0
    level = copies.scalar("lineup_level", chain.lineup.level_dbm)
    wanted = level - copies.scalar("lineup_input", chain.lineup.input_dbm) - others.sum(axis=-1)
    low, top = chain.stages[adjusted].gain_range or (-np.inf, np.inf)
    gain[:, adjusted] = np.clip(wanted, low, top)
    return gain, wanted, top


def own_gain(copies: Copies, index: int, stage: Stage) -> Array:
    if stage.response is not None:
        at = copies.frequencies[index]
        f, g = stage.response.frequency_hz, stage.response.gain_db
        return np.full(copies.count, np.interp(at, f, g, left=np.nan, right=np.nan))
    return copies.column(index, "gain")


def own_temperature(copies: Copies, index: int, gain: Array) -> tuple[Array, Array]:
    """A stage's own noise temperature and the part of the noise ahead that its image lets in, over all copies."""
    stage = copies.chain.stages[index]
    image = np.zeros(copies.count)
    if stage.oscillator is not None and "image_rejection" in stage.parameters:
        image = image_from_rejection(copies.column(index, "image_rejection"))
    if "nf" in stage.parameters:
        return own_temperature_from_nf(copies.column(index, "nf"), image), image
    if "nf_dsb" in stage.parameters:
        return own_temperature_from_nf_dsb(copies.column(index, "nf_dsb"), image), image
    if "noise_voltage" in stage.parameters:
        voltage, current = copies.column(index, "noise_voltage"), copies.column(index, "noise_current", 0.0)
        terminated = "termination" in stage.parameters
        across = copies.column(index, "termination", copies.chain.impedance_ohm)
        return own_temperature_from_noise_voltage(voltage, current, across, terminated=terminated), image
    if stage.passive:
        temperature = copies.column(index, "temperature", T0)
        return own_temperature_passive(-gain[:, index], temperature), image
    return np.full(copies.count, np.nan), image


def limit(copies: Copies, gain: Array, name: str) -> Array:
    """Input intercepts or compression points [copies, stages]; infinite where none is given."""
    columns = []
    for index, stage in enumerate(copies.chain.stages):
        output = "o" + name.removeprefix("i")
        if name in stage.parameters:
            columns.append(copies.column(index, name))
        elif output in stage.parameters:
            kept = 1.0 if name == "ip1db" else 0.0
            columns.append(copies.column(index, output) - gain[:, index] + kept)
        else:
            columns.append(np.full(copies.count, np.inf))
    return np.stack(columns, axis=-1)


def source_temperature(copies: Copies, terms: Terms) -> Array:
    if terms.source_temperature_k is not None:
        return np.full(copies.count, terms.source_temperature_k)
    if copies.chain.galactic:
        return np.full(copies.count, galactic_temperature(copies.frequencies[0]))
    return copies.scalar("source_temperature", copies.chain.source_temperature_k, T0)
