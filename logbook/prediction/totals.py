"""The totals of a chain over all copies, each with the words for why it may not be known."""

from __future__ import annotations

from functools import cached_property, partial

import numpy as np

from logbook.hardware import Chain, Parameter
from logbook.physics.cascade import Cascade, Stages
from logbook.physics.constants import Array
from logbook.physics.linearity import output_compression, output_intercept, sensitivity, sfdr
from logbook.physics.noise import temperature_from_nf
from logbook.prediction.copies import Copies
from logbook.prediction.data import TOTAL_UNITS, Estimate, LazyTotals, Terms


class Totals:
    """The totals of a chain over all copies, each with the words for why it may not be known."""

    def __init__(
        self, copies: Copies, terms: Terms, stages: Stages, done: Cascade, wanted: Array | None, top: float
    ) -> None:
        self.copies, self.stages, self.done, self.wanted, self.top = copies, stages, done, wanted, top
        self.gain = done.gain_db[..., -1]
        self.density = done.noise_dbm_per_hz[..., -1] - self.gain
        self.given_bandwidth = terms.bandwidth_hz

    def all(self) -> LazyTotals:
        """Every total that applies to the chain, computed when it is asked for."""
        chain = self.copies.chain
        found = {"gain": self._gain, "nf": self._nf, "noise_temperature": self._noise_temperature}
        found |= {"noise_floor": self._noise_floor, "noise_density": self._noise_density}
        found |= {"output_noise": self._output_noise}
        for name in ("iip3", "oip3", "iip2", "oip2"):
            found[name] = partial(self._intercept, name)
        found |= {"ip1db": partial(self._compression, "ip1db"), "op1db": partial(self._compression, "op1db")}
        found["sfdr"] = self._sfdr
        if chain.snr_db is not None:
            found["sensitivity"] = self._sensitivity
        for name, level in (("headroom", chain.level), ("headroom_strongest", chain.strongest)):
            if level is not None:
                found[name] = partial(self._headroom, name, level)
        if chain.weakest is not None:
            found["snr_weakest"] = self._snr_weakest
        if self.wanted is not None:
            found |= {"setting": self._setting, "range_left": self._range_left}
        return LazyTotals({name: found[name] for name in TOTAL_UNITS if name in found})

    @cached_property
    def bandwidth(self) -> Array:
        if self.given_bandwidth is not None:
            return np.full(self.copies.count, self.given_bandwidth)
        return self.copies.scalar("bandwidth", self.copies.chain.bandwidth_hz)

    @cached_property
    def floor(self) -> Array:
        """Noise at the input in the bandwidth, dBm."""
        floor: Array = self.density + 10 * np.log10(self.bandwidth)
        return floor

    @cached_property
    def why(self) -> str:
        """Why the noise is not known."""
        unknown = first_unknown(self.copies.chain, self.stages)
        return f"'{unknown}' has gain and no noise figure" if unknown else ""

    @property
    def wide(self) -> str:
        """Why the noise in a bandwidth is not known."""
        return self.why or ("no bandwidth is given" if np.isnan(self.bandwidth[0]) else _NO_GAIN)

    def _gain(self) -> Estimate:
        return self.copies.estimate("gain", self.gain, _NO_GAIN)

    def _nf(self) -> Estimate:
        return self.copies.estimate("nf", self.done.nf_db[..., -1], self.why or _NO_GAIN)

    def _noise_temperature(self) -> Estimate:
        kelvin = temperature_from_nf(self.done.nf_db[..., -1])
        return self.copies.estimate("noise_temperature", kelvin, self.why or _NO_GAIN)

    def _noise_floor(self) -> Estimate:
        return self.copies.estimate("noise_floor", self.floor, self.wide)

    def _noise_density(self) -> Estimate:
        return self.copies.estimate("noise_density", self.density, self.why or _NO_GAIN)

    def _output_noise(self) -> Estimate:
        return self.copies.estimate("output_noise", self.floor + self.gain, self.wide)

    def _sensitivity(self) -> Estimate:
        snr = self.copies.scalar("snr", self.copies.chain.snr_db)
        return self.copies.estimate("sensitivity", sensitivity(self.floor, snr), self.wide)

    def _snr_weakest(self) -> Estimate:
        weakest = self.copies.scalar("weakest", self.copies.chain.weakest)
        return self.copies.estimate("snr_weakest", weakest - self.floor, self.wide)

    def _sfdr(self) -> Estimate:
        iip3 = self.done.iip3_dbm[..., -1]
        words = self.wide if np.isfinite(iip3[0]) else _no_stage_gives("third-order")
        return self.copies.estimate("sfdr", sfdr(iip3, self.floor), words)

    def _intercept(self, name: str) -> Estimate:
        third = name.endswith("3")
        values = (self.done.iip3_dbm if third else self.done.iip2_dbm)[..., -1]
        said = _no_stage_gives("third-order" if third else "second-order")
        return self.copies.estimate(name, values if name.startswith("i") else output_intercept(values, self.gain), said)

    def _compression(self, name: str) -> Estimate:
        point = self.done.ip1db_dbm[..., -1]
        return self.copies.estimate(name, point if name == "ip1db" else output_compression(point, self.gain), _NO_POINT)

    def _headroom(self, name: str, level: Parameter) -> Estimate:
        entering = self.copies.scalar(name.removeprefix("headroom_") if "_" in name else "level", level)
        room = headroom(self.stages, self.done, entering)
        return self.copies.estimate(name, room.min(axis=-1), _NO_POINT)

    def _setting(self) -> Estimate:
        assert self.wanted is not None
        return self.copies.estimate("setting", self.wanted)

    def _range_left(self) -> Estimate:
        assert self.wanted is not None
        return self.copies.estimate("range_left", self.top - self.wanted)


_NO_GAIN = "a stage's gain is not known at this frequency"
_NO_POINT = "no stage gives a compression point"


def _no_stage_gives(order: str) -> str:
    return f"no stage gives a {order} intercept"


def headroom(stages: Stages, done: Cascade, level: Array) -> Array:
    """Compression point minus level, at each stage's input, in dB; infinite where the stage gives none."""
    ahead = done.gain_db - stages.gain_db
    room: Array = np.asarray(stages.ip1db_dbm) - ahead - level[:, None]
    return room


def first_unknown(chain: Chain, stages: Stages) -> str:
    unknown = np.isnan(np.asarray(stages.own_temperature_k)[0])
    return chain.stages[int(np.argmax(unknown))].name if unknown.any() else ""
