"""The totals of a chain over all copies, each with the words for why it may not be known."""

from __future__ import annotations

import numpy as np

from logbook.hardware import Chain
from logbook.physics.cascade import Cascade, Stages
from logbook.physics.constants import T0, Array
from logbook.prediction.copies import Copies
from logbook.prediction.data import TOTAL_UNITS, Estimate, Terms


class Totals:
    """The totals of a chain over all copies, each with the words for why it may not be known."""

    def __init__(
        self, copies: Copies, terms: Terms, stages: Stages, done: Cascade, wanted: Array | None, top: float
    ) -> None:
        self.copies, self.stages, self.done, self.wanted, self.top = copies, stages, done, wanted, top
        chain = copies.chain
        self.gain = done.gain_db[..., -1]
        self.density = done.noise_dbm_per_hz[..., -1] - self.gain
        given = terms.bandwidth_hz
        self.bandwidth = (
            np.full(copies.count, given) if given is not None else copies.scalar("bandwidth", chain.bandwidth_hz)
        )

    def all(self) -> dict[str, Estimate]:
        """Every total that applies to the chain."""
        found = {**self._noise(), **self._linearity()}
        chain = self.copies.chain
        if chain.level is not None:
            found["headroom"] = self._headroom("headroom", self.copies.scalar("level", chain.level))
        if chain.strongest is not None:
            strongest = self.copies.scalar("strongest", chain.strongest)
            found["headroom_strongest"] = self._headroom("headroom_strongest", strongest)
        if self.wanted is not None:
            found["setting"] = self.copies.estimate("setting", self.wanted)
            found["range_left"] = self.copies.estimate("range_left", self.top - self.wanted)
        return {name: found[name] for name in TOTAL_UNITS if name in found}

    def _noise(self) -> dict[str, Estimate]:
        copies, chain = self.copies, self.copies.chain
        unknown = first_unknown(chain, self.stages)
        why = f"'{unknown}' has gain and no noise figure" if unknown else ""
        no_gain = "a stage's gain is not known at this frequency"
        wide = why or ("no bandwidth is given" if np.isnan(self.bandwidth[0]) else no_gain)
        floor = self.density + 10 * np.log10(self.bandwidth)
        nf = self.done.nf_db[..., -1]
        found = {
            "gain": copies.estimate("gain", self.gain, no_gain),
            "nf": copies.estimate("nf", nf, why or no_gain),
            "noise_temperature": copies.estimate("noise_temperature", T0 * (10 ** (nf / 10) - 1), why or no_gain),
            "noise_floor": copies.estimate("noise_floor", floor, wide),
            "noise_density": copies.estimate("noise_density", self.density, why or no_gain),
            "output_noise": copies.estimate("output_noise", floor + self.gain, wide),
        }
        if chain.weakest is not None:
            found["snr_weakest"] = copies.estimate("snr_weakest", copies.scalar("weakest", chain.weakest) - floor, wide)
        if chain.snr_db is not None:
            found["sensitivity"] = copies.estimate("sensitivity", floor + copies.scalar("snr", chain.snr_db), wide)
        iip3 = self.done.iip3_dbm[..., -1]
        sfdr = 2 / 3 * (iip3 - floor)
        found["sfdr"] = copies.estimate("sfdr", sfdr, wide if np.isfinite(iip3[0]) else _no_stage_gives("third-order"))
        return found

    def _linearity(self) -> dict[str, Estimate]:
        copies, done = self.copies, self.done
        found = {}
        for name, values, said in (
            ("iip3", done.iip3_dbm[..., -1], "third-order"),
            ("iip2", done.iip2_dbm[..., -1], "second-order"),
        ):
            found[name] = copies.estimate(name, values, _no_stage_gives(said))
            found["o" + name[1:]] = copies.estimate("o" + name[1:], values + self.gain, _no_stage_gives(said))
        point = done.ip1db_dbm[..., -1]
        words = "no stage gives a compression point"
        found["ip1db"] = copies.estimate("ip1db", point, words)
        found["op1db"] = copies.estimate("op1db", point + self.gain - 1, words)
        return found

    def _headroom(self, name: str, level: Array) -> Estimate:
        room = headroom(self.stages, self.done, level)
        return self.copies.estimate(name, room.min(axis=-1), "no stage gives a compression point")


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
