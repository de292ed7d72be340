"""The cascade against printed examples, closed forms and scikit-rf."""

from __future__ import annotations

import numpy as np
import pytest
import skrf

from logbook.physics import noise
from logbook.physics.cascade import Cascade, Stages, cascade

INF = float("inf")
NAN = float("nan")


def chain(
    gain: list[float],
    nf: list[float],
    *,
    image: list[float] | None = None,
    iip3: list[float] | None = None,
    iip2: list[float] | None = None,
    ip1db: list[float] | None = None,
) -> Stages:
    ideal = np.full(len(gain), INF)
    images = np.zeros(len(gain)) if image is None else np.array(image)
    return Stages(
        gain_db=np.array(gain),
        own_temperature_k=noise.own_temperature_from_nf(np.array(nf), images),
        image=images,
        iip3_dbm=ideal if iip3 is None else np.array(iip3),
        iip2_dbm=ideal if iip2 is None else np.array(iip2),
        ip1db_dbm=ideal if ip1db is None else np.array(ip1db),
    )


def test_receiver_front_end_of_the_textbook() -> None:
    # Pozar, Microwave Engineering 4th ed., Ex. 10.2: F 1.80, Te 232 K, No -96.8 dBm, Si -82.8 dBm (for 20 dB).
    stages = chain([10.0, -1.0, -3.0], [2.0, 1.0, 4.0])
    total = cascade(stages, 150.0)
    factor = 10 ** (total.nf_db[-1] / 10)
    assert factor == pytest.approx(1.80, abs=0.005)
    assert total.noise_temperature_k[-1] == pytest.approx(232.0, abs=0.5)
    output = noise.noise_power_dbm(total.noise_dbm_per_hz[-1], 10e6)
    assert output == pytest.approx(-96.8, abs=0.05)
    assert output + 20.0 - total.gain_db[-1] == pytest.approx(-82.8, abs=0.05)


def test_intercept_of_amplifier_and_mixer() -> None:
    # Pozar 4th ed., Ex. 10.4, from memory: 6.4 dBm printed; exact 6.485 dBm in closed form.
    total = cascade(chain([20.0, -6.0], [0.0, 6.0], iip3=[22.0 - 20.0, 13.0]))
    assert total.iip3_dbm[-1] + total.gain_db[-1] == pytest.approx(6.485, abs=0.0005)


@pytest.mark.parametrize(("image", "nf"), [(0.0, 2.719), (1.0, 5.345)])
def test_mixer_given_by_its_double_sideband_figure(image: float, nf: float) -> None:
    # Closed form: LNA 15 dB/2 dB before a mixer of 7 dB DSB, with an image filter and without one.
    images = np.array([0.0, image])
    own = np.array([noise.own_temperature_from_nf(2.0, 0.0), noise.own_temperature_from_nf_dsb(7.0, image)])
    ideal = np.full(2, INF)
    total = cascade(Stages(np.array([15.0, 0.0]), own, images, ideal, ideal, ideal))
    assert total.nf_db[-1] == pytest.approx(nf, abs=0.0005)


def test_friis_and_no_image_filter_in_closed_form() -> None:
    # Closed form: F = F1 + (F2 - 1)/G1; without any image filter F = 2 F1 + (F_ssb - 2)/G1.
    f1, f2, g1 = 10**0.15, 10**0.9, 10**1.2
    full = cascade(chain([12.0, 0.0], [1.5, 9.0]))
    assert 10 ** (full.nf_db[-1] / 10) == pytest.approx(f1 + (f2 - 1) / g1, rel=1e-12)
    none = cascade(chain([12.0, 0.0], [1.5, 9.0], image=[0.0, 1.0]))
    assert 10 ** (none.nf_db[-1] / 10) == pytest.approx(2 * f1 + (f2 - 2) / g1, rel=1e-12)


def test_stage_by_stage_as_on_paper() -> None:
    """T_out = g (T_in (1 + image) + T_own), walked along in plain floats, two mixers in the chain."""
    gain, nf, image = [8.0, -5.0, 20.0, -7.0, 3.0], [2.0, 5.5, 3.0, 10.0, 12.0], [0.0, 0.3, 0.0, 0.05, 0.0]
    total = cascade(chain(gain, nf, image=image), 77.0)
    t, g_all = 77.0, 1.0
    for i, (g_db, nf_db, im) in enumerate(zip(gain, nf, image, strict=True)):
        g = 10 ** (g_db / 10)
        t = g * (t * (1 + im) + 290.0 * (10 ** (nf_db / 10) - 1) - 290.0 * im)
        g_all *= g
        assert total.noise_dbm_per_hz[i] == pytest.approx(10 * np.log10(1.380649e-20 * t), abs=1e-9)
        assert total.input_noise_dbm_per_hz[i] == pytest.approx(10 * np.log10(1.380649e-20 * t / g_all), abs=1e-9)


def two_port(gain_db: float, nf_db: float) -> skrf.Network:
    frequency = skrf.Frequency(50, 50, 1, unit="MHz")
    s = np.zeros((1, 2, 2), dtype=complex)
    s[0, 1, 0] = 10 ** (gain_db / 20)
    made = skrf.Network(frequency=frequency, s=s, z0=50)
    # A matched stage whose noise does not depend on the source: optimum at the reference impedance.
    made.set_noise_a(made.noise_freq if made.noisy else frequency, nfmin_db=nf_db, gamma_opt=0, rn=1e-9)
    return made


@pytest.mark.filterwarnings("ignore:divide by zero:RuntimeWarning")
@pytest.mark.parametrize("seed", range(8))
def test_cascades_of_noisy_two_ports_against_scikit_rf(seed: int) -> None:
    rng = np.random.default_rng(seed)
    n = 2 + seed % 5
    gain, nf = rng.uniform(-8, 20, n), rng.uniform(0.3, 12, n)
    whole = two_port(gain[0], nf[0])
    for g, f in zip(gain[1:], nf[1:], strict=True):
        whole = whole ** two_port(g, f)
    total = cascade(chain(list(gain), list(nf)))
    assert total.gain_db[-1] == pytest.approx(float(whole.s_db[0, 1, 0]), abs=1e-6)
    assert total.nf_db[-1] == pytest.approx(float(10 * np.log10(whole.nf(50)[0].real)), abs=1e-4)


def test_passive_at_another_temperature_against_scikit_rf() -> None:
    """A pad of 3 dB ahead of an amplifier: only at 290 K does its loss equal its noise figure."""
    pad = two_port(-3.0, 10 * np.log10(1 + (10**0.3 - 1) * 77.0 / 290.0))
    whole = pad ** two_port(15.0, 2.0)
    own = np.array([noise.own_temperature_passive(3.0, 77.0), noise.own_temperature_from_nf(2.0, 0.0)])
    ideal = np.full(2, INF)
    total = cascade(Stages(np.array([-3.0, 15.0]), own, np.zeros(2), ideal, ideal, ideal))
    assert total.nf_db[-1] == pytest.approx(float(10 * np.log10(whole.nf(50)[0].real)), abs=1e-4)


def test_intercepts_and_compression_in_closed_form() -> None:
    # Closed form, sums written out with G_pre = 0, 10, 4 dB.
    gain, iip3, iip2, ip1 = [10.0, -6.0, 20.0], [5.0, 13.0, 2.0], [30.0, 50.0, 25.0], [-5.0, 3.0, -8.0]
    stages = chain(gain, [1.0, 6.0, 3.0], iip3=iip3, iip2=iip2, ip1db=ip1)
    pre = [1.0, 10.0, 10**0.4]

    def dbm(p: float) -> float:
        return float(10 * np.log10(p))

    def mw(values: list[float]) -> list[float]:
        return [10 ** (v / 10) for v in values]

    phase, random = cascade(stages), cascade(stages, in_phase=False)
    third = [g / p for g, p in zip(pre, mw(iip3), strict=True)]
    second = [g / p for g, p in zip(pre, mw(iip2), strict=True)]
    assert phase.iip3_dbm[-1] == pytest.approx(dbm(1 / sum(third)))
    assert random.iip3_dbm[-1] == pytest.approx(dbm(1 / np.sqrt(sum(t**2 for t in third))))
    assert phase.iip2_dbm[-1] == pytest.approx(dbm(1 / sum(np.sqrt(t) for t in second) ** 2))
    assert random.iip2_dbm[-1] == pytest.approx(dbm(1 / sum(second)))
    assert phase.ip1db_dbm[-1] == pytest.approx(dbm(1 / sum(g / p for g, p in zip(pre, mw(ip1), strict=True))))
    assert phase.iip3_share == pytest.approx([t / sum(third) for t in third])
    assert random.iip3_share == pytest.approx([t**2 / sum(x**2 for x in third) for t in third])


def test_ideal_stages_have_no_intercept() -> None:
    total = cascade(chain([10.0, 3.0], [1.0, 2.0]))
    assert np.all(np.isposinf(total.iip3_dbm))
    assert np.all(np.isposinf(total.iip2_dbm))
    assert np.all(np.isposinf(total.ip1db_dbm))
    assert np.all(np.isnan(total.iip3_share))


def test_noise_is_not_known_from_the_unknown_stage_on() -> None:
    total = cascade(chain([10.0, 5.0, 3.0], [1.0, NAN, 2.0], iip3=[0.0, 10.0, 20.0]))
    assert np.isfinite(total.nf_db[0])
    assert np.all(np.isnan(total.nf_db[1:]))
    assert np.all(np.isnan(total.noise_dbm_per_hz[1:]))
    assert np.all(np.isnan(total.noise_share))
    assert np.isnan(total.source_share)
    assert np.all(np.isfinite(total.iip3_dbm))


def test_shares_are_what_vanishes_with_the_stage() -> None:
    """The share of a stage is the part of the output noise that goes when its own noise is taken out."""
    stages = chain([12.0, -6.0, 25.0], [1.5, 8.0, 4.0], image=[0.0, 0.2, 0.0])
    total = cascade(stages, 200.0)
    assert total.noise_share.sum() + total.source_share == pytest.approx(1.0, abs=1e-12)
    with_all = 10 ** (total.noise_dbm_per_hz[-1] / 10)
    for i in range(3):
        own = stages.own_temperature_k.copy()
        own[i] = 0.0
        quiet = Stages(stages.gain_db, own, stages.image, stages.iip3_dbm, stages.iip2_dbm, stages.ip1db_dbm)
        without = 10 ** (cascade(quiet, 200.0).noise_dbm_per_hz[-1] / 10)
        assert total.noise_share[i] == pytest.approx(1 - without / with_all, abs=1e-9)
    dark = 10 ** (cascade(stages, 0.0).noise_dbm_per_hz[-1] / 10)
    assert total.source_share == pytest.approx(1 - dark / with_all, abs=1e-9)


def test_many_copies_at_once_equal_one_at_a_time() -> None:
    rng = np.random.default_rng(7)
    shape = (4, 5, 6)
    many = Stages(
        gain_db=rng.uniform(-6, 15, shape),
        own_temperature_k=rng.uniform(50, 3000, shape),
        image=np.broadcast_to(np.array([0.0, 0.0, 0.1, 0.0, 0.5, 0.0]), shape),
        iip3_dbm=rng.uniform(0, 30, shape),
        iip2_dbm=rng.uniform(20, 60, shape),
        ip1db_dbm=rng.uniform(-10, 20, shape),
    )
    sources = rng.uniform(10, 1000, shape[:-1])
    together = cascade(many, sources)
    for i, j in np.ndindex(*shape[:-1]):
        one = cascade(Stages(*(getattr(many, name)[i, j] for name in Stages.__dataclass_fields__)), sources[i, j])
        for name in Cascade.__dataclass_fields__:
            assert getattr(together, name)[i, j] == pytest.approx(getattr(one, name), rel=1e-12), name


def test_copies_of_the_gain_alone_are_broadcast() -> None:
    stages = chain([10.0, -6.0], [1.0, 6.0], iip3=[0.0, 10.0])
    gains = stages.gain_db + np.array([[0.0, 0.0], [0.1, 0.0]])
    both = cascade(Stages(gains, *(getattr(stages, n) for n in list(Stages.__dataclass_fields__)[1:])))
    assert both.nf_db.shape == (2, 2)
    assert both.nf_db[1, -1] < both.nf_db[0, -1]
    assert both.iip3_dbm[1, -1] < both.iip3_dbm[0, -1]
