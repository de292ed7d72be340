"""First-order propagation of the totals against Monte Carlo (JCGM 101:2008) on random chains.

The trials are computed here, from the formulas, and not by the engine. Tolerances are limits of up to 1 dB.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
import pytest
from workshop import prediction

Array = npt.NDArray[np.float64]

DRAWS = 150_000
BANDWIDTH_HZ = 10e3
BOLTZMANN, T0 = 1.380649e-23, 290.0


def linear(decibels: Array) -> Array:
    return np.asarray(10.0 ** (decibels / 10.0))


def db(ratio: Array) -> Array:
    return np.asarray(10.0 * np.log10(ratio))


class Drawn:
    """A random chain: its text for an entry, and its parameters [draws, stages]."""

    def __init__(self, seed: int) -> None:
        self._rng = np.random.default_rng(seed)
        self.lines: list[str] = []
        columns: list[list[Array]] = []
        for number in range(int(self._rng.integers(2, 6))):
            passive = number > 0 and self._rng.random() < 0.4
            gain = -self._rng.uniform(1, 8) if passive else self._rng.uniform(6, 20)
            texts, drawn = zip(
                *(
                    self._tolerance(name, centre)
                    for name, centre in (
                        ("gain", gain),
                        ("nf", 0.0 if passive else self._rng.uniform(2, 9)),
                        ("iip3", self._rng.uniform(-10, 25)),
                        ("iip2", self._rng.uniform(10, 50)),
                        ("ip1db", self._rng.uniform(-20, 15)),
                    )
                    if not (passive and name == "nf")
                ),
                strict=True,
            )
            found = list(drawn)
            if passive:
                # At 290 K the noise figure of a passive is its loss.
                found.insert(1, -found[0])
            self.lines.append(f"name: s{number}, " + ", ".join(texts))
            columns.append(found)
        self.gain, self.nf, self.iip3, self.iip2, self.ip1db = (
            np.stack(each, axis=-1) for each in zip(*columns, strict=True)
        )

    def _tolerance(self, name: str, centre: float) -> tuple[str, Array]:
        """A parameter with limits of a rectangular distribution, or with a standard uncertainty of a normal one."""
        unit = "dB" if name in ("gain", "nf") else "dBm"
        size = round(float(self._rng.uniform(0.1, 1.0)), 2)
        centre = round(float(centre), 2)
        if self._rng.random() < 0.5:
            return f"{name}: {centre} ± {size} {unit}", centre + self._rng.uniform(-size, size, DRAWS)
        return f"{name}: {centre} ± {size} {unit} (k=2)", self._rng.normal(centre, size / 2, DRAWS)

    def totals(self) -> dict[str, Array]:
        """The totals of every draw."""
        before = np.cumsum(self.gain, axis=-1) - self.gain
        ahead = linear(before)
        gain = self.gain.sum(axis=-1)
        factor = linear(self.nf[:, 0]) + ((linear(self.nf) - 1) / ahead)[:, 1:].sum(axis=-1)
        floor = db(BOLTZMANN * T0 * factor * BANDWIDTH_HZ / 1e-3)
        iip3 = -db((ahead / linear(self.iip3)).sum(axis=-1))
        iip2 = -2 * db(np.sqrt(ahead / linear(self.iip2)).sum(axis=-1))
        ip1db = -db((ahead / linear(self.ip1db)).sum(axis=-1))
        return {
            "gain": gain,
            "nf": db(factor),
            "noise_temperature": T0 * (factor - 1),
            "noise_floor": floor,
            "output_noise": floor + gain,
            "iip3": iip3,
            "oip3": iip3 + gain,
            "iip2": iip2,
            "oip2": iip2 + gain,
            "ip1db": ip1db,
            "op1db": ip1db + gain - 1,
            "sfdr": 2 / 3 * (iip3 - floor),
        }


@pytest.mark.parametrize("seed", range(8))
def test_uncertainty_of_every_total(seed: int) -> None:
    drawn = Drawn(seed)
    found = prediction("\n".join(drawn.lines), more="bandwidth: 10 kHz").totals
    for name, values in drawn.totals().items():
        assert found[name].u == pytest.approx(float(values.std()), rel=0.02), name
