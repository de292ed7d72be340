"""A chain as arrays: a nominal copy, and one up and one down for every source of doubt."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from logbook.hardware import Chain, Parameter
from logbook.model import Source
from logbook.physics.constants import T0, Array
from logbook.physics.linearity import input_compression_from_output, input_intercept_from_output
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
        doubts = _doubts(chain, terms)
        self.sources = [parameter.source for _, _, parameter in doubts]
        self.count = 1 + 2 * len(doubts)
        self._shifts: dict[str, list[tuple[int, int, float]]] = {}
        for k, (index, name, parameter) in enumerate(doubts):
            self._shifts.setdefault(name, []).append((index, k, parameter.u or 0.0))

    def matrix(self, name: str, default: float = float("nan")) -> Array:
        """One parameter of all stages over all copies, [copies, stages]; `default` where a stage does not give it."""
        stages = self.chain.stages
        values = [default if (p := stage.parameters.get(name)) is None else p.value for stage in stages]
        found = np.empty((self.count, len(stages)))
        found[:] = values
        for index, k, u in self._shifts.get(name, ()):
            if index >= 0:
                self._move(found[:, index], k, u)
        return found

    def _move(self, column: Array, k: int, u: float) -> None:
        """Let the k-th source of doubt move what it moves: up in one copy, down in the next."""
        column[1 + 2 * k] += u
        column[2 + 2 * k] -= u

    def given(self, name: str) -> npt.NDArray[np.bool_]:
        """Which stages give a parameter, [stages]."""
        return np.array([name in stage.parameters for stage in self.chain.stages])

    def scalar(self, name: str, parameter: Parameter | None, default: float = float("nan")) -> Array:
        """One parameter of the chain as a whole over all copies."""
        found = np.full(self.count, default if parameter is None else parameter.value)
        for index, k, u in self._shifts.get(name, ()):
            if index < 0:
                self._move(found, k, u)
        return found

    def estimate(self, name: str, values: Array, words: str = "") -> Estimate:
        """A total over all copies, as a number with its doubt by source (central differences)."""
        unit = TOTAL_UNITS[name]
        nominal = float(values[0])
        if not np.isfinite(nominal):
            return Estimate(float("nan"), unit, None, words or "not known")
        halves = (values[1::2] - values[2::2]) / 2
        parts = {s: half for s, half in zip(self.sources, halves.tolist(), strict=True) if abs(half) > 1e-12}
        return Estimate(nominal, unit, parts or None)


class Draws(Copies):
    """The same with copies drawn at random: copy 0 nominal, in all others every source moved by its own draw.

    Normal distributions, the same draws at every run. Source: JCGM 101:2008 5, 7.
    """

    def __init__(self, chain: Chain, terms: Terms, draws: int) -> None:
        super().__init__(chain, terms)
        self.count = 1 + draws
        self._drawn = np.random.default_rng(101).standard_normal((len(self.sources), draws))

    def _move(self, column: Array, k: int, u: float) -> None:
        column[1:] += u * self._drawn[k]

    def estimate(self, name: str, values: Array, words: str = "") -> Estimate:
        """A total's nominal value, with the standard deviation of all draws as its doubt."""
        unit = TOTAL_UNITS[name]
        if not np.isfinite(values).all():
            return Estimate(float("nan"), unit, None, words or "not known in all draws")
        spread = float(np.std(values[1:], ddof=1))
        return Estimate(float(values[0]), unit, {Source("chain", self.chain.name, "", "all draws"): spread})


def _doubts(chain: Chain, terms: Terms) -> list[tuple[int, str, Parameter]]:
    found = [
        (index, name, parameter)
        for index, stage in enumerate(chain.stages)
        for name, parameter in stage.parameters.items()
        if parameter.u and name not in ("bandwidth", "max_input")
    ]
    whole = [("level", chain.level), ("strongest", chain.strongest), ("weakest", chain.weakest), ("snr", chain.snr_db)]
    whole.append(("bandwidth", chain.bandwidth_hz))
    if terms.source_temperature_k is None:
        whole.append(("source_temperature", chain.source_temperature_k))
    if chain.lineup is not None:
        whole += [("lineup_input", chain.lineup.input_dbm), ("lineup_level", chain.lineup.level_dbm)]
    return found + [(-1, name, parameter) for name, parameter in whole if parameter is not None and parameter.u]


def gains(copies: Copies) -> tuple[Array, Array | None, float]:
    """Gain of each stage [copies, stages]; the lineup's setting as wanted and the top of its range."""
    chain = copies.chain
    gain = own_gains(copies)
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


def own_gains(copies: Copies) -> Array:
    """The gain of each stage at its frequency, [copies, stages]; nan outside of a response."""
    gain = copies.matrix("gain")
    for index, stage in enumerate(copies.chain.stages):
        if stage.response is not None:
            f, g = stage.response.frequency_hz, stage.response.gain_db
            gain[:, index] = np.interp(copies.frequencies[index], f, g, left=np.nan, right=np.nan)
    return gain


def own_temperatures(copies: Copies, gain: Array) -> tuple[Array, Array]:
    """Own noise temperatures, and the part of the noise ahead that images let in, both [copies, stages]."""
    stages = copies.chain.stages
    image = np.zeros_like(gain)
    mixers = np.array([stage.oscillator is not None for stage in stages]) & copies.given("image_rejection")
    if mixers.any():
        image = np.where(mixers, image_from_rejection(copies.matrix("image_rejection", np.inf)), 0.0)
    own = np.full_like(gain, np.nan)
    passive = np.array([stage.passive for stage in stages])
    if passive.any():
        own = np.where(passive, own_temperature_passive(-gain, copies.matrix("temperature", T0)), own)
    for name, function in (("nf_dsb", own_temperature_from_nf_dsb), ("nf", own_temperature_from_nf)):
        given = copies.given(name)
        if given.any():
            own = np.where(given, function(copies.matrix(name), image), own)
    return _by_noise_voltage(copies, own), image


def _by_noise_voltage(copies: Copies, own: Array) -> Array:
    given = copies.given("noise_voltage") & ~copies.given("nf") & ~copies.given("nf_dsb")
    if not given.any():
        return own
    voltage, current = copies.matrix("noise_voltage"), copies.matrix("noise_current", 0.0)
    across = copies.matrix("termination", copies.chain.impedance_ohm)
    terminated = copies.given("termination")
    for each in (True, False):
        found = own_temperature_from_noise_voltage(voltage, current, across, terminated=each)
        own = np.where(given & (terminated == each), found, own)
    return own


def limits(copies: Copies, gain: Array, name: str) -> Array:
    """Input intercepts or compression points [copies, stages]; infinite where none is given."""
    output = "o" + name.removeprefix("i")
    found = copies.matrix(name, np.inf)
    given = copies.given(output) & ~copies.given(name)
    if not given.any():
        return found
    at_input = input_compression_from_output if name == "ip1db" else input_intercept_from_output
    return np.where(given, at_input(copies.matrix(output), gain), found)


def source_temperature(copies: Copies, terms: Terms) -> Array:
    if terms.source_temperature_k is not None:
        return np.full(copies.count, terms.source_temperature_k)
    if copies.chain.galactic:
        return np.full(copies.count, galactic_temperature(copies.frequencies[0]))
    return copies.scalar("source_temperature", copies.chain.source_temperature_k, T0)
