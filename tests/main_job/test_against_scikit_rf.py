"""Chains as written in an entry against scikit-rf's cascades of noisy two-ports."""

from __future__ import annotations

import numpy as np
import pytest
import skrf
from workshop import prediction


def two_port(gain_db: float, nf_db: float) -> skrf.Network:
    """A matched two-port whose noise does not depend on the source: its optimum is the reference impedance."""
    frequency = skrf.Frequency(50, 50, 1, unit="MHz")
    s = np.zeros((1, 2, 2), dtype=complex)
    s[0, 1, 0] = 10 ** (gain_db / 20)
    made = skrf.Network(frequency=frequency, s=s, z0=50)
    made.set_noise_a(frequency, nfmin_db=nf_db, gamma_opt=0, rn=1e-9)
    return made


@pytest.mark.filterwarnings("ignore:divide by zero:RuntimeWarning")
@pytest.mark.parametrize("seed", range(6))
def test_gain_and_noise_figure_of_random_chains(seed: int) -> None:
    rng = np.random.default_rng(seed)
    lines, whole = [], None
    for number in range(2 + seed):
        gain, nf = float(rng.uniform(-9, 20)), float(rng.uniform(0.3, 12))
        passive = rng.random() < 0.4
        gain = -abs(gain) if passive else gain
        lines.append(f"name: s{number}, gain: {gain!r} dB" + ("" if passive else f", nf: {nf!r} dB"))
        # A passive at 290 K has a noise figure equal to its loss.
        stage = two_port(gain, -gain if passive else nf)
        whole = stage if whole is None else whole**stage
    assert whole is not None
    found = prediction("\n".join(lines)).totals
    assert found["gain"].value == pytest.approx(float(whole.s_db[0, 1, 0]), abs=1e-6)
    assert found["nf"].value == pytest.approx(float(10 * np.log10(whole.nf(50)[0].real)), abs=1e-4)
