"""Published values and closed forms, through chains as they are written in an entry."""

from __future__ import annotations

import math

import pytest
from workshop import prediction

BOLTZMANN = 1.380649e-23  # J/K, exact in the SI of 2019


def db(ratio: float) -> float:
    return 10.0 * math.log10(ratio)


def ratio(decibels: float) -> float:
    return 10.0 ** (decibels / 10.0)


def test_receiver_front_end_of_the_textbook() -> None:
    # Pozar, Microwave Engineering 4th ed., Ex. 10.2: F 1.80, Te 232 K, No -96.8 dBm, input for 20 dB -82.8 dBm.
    found = prediction(
        """name: lna, gain: 10 dB, nf: 2 dB
        name: filter, loss: 1 dB
        name: mixer, gain: -3 dB, nf: 4 dB, lo: 70 MHz""",
        more="bandwidth: 10 MHz\nsource_temperature: 150 K\nsnr: 20 dB",
    ).totals
    assert ratio(found["nf"].value) == pytest.approx(1.80, abs=0.005)
    assert found["noise_temperature"].value == pytest.approx(232, abs=0.5)
    assert found["output_noise"].value == pytest.approx(-96.8, abs=0.05)
    assert found["sensitivity"].value == pytest.approx(-82.8, abs=0.05)
    assert 1e6 * math.sqrt(1e-3 * ratio(found["sensitivity"].value) * 50) == pytest.approx(16.2, abs=0.05)


def test_intercept_of_amplifier_and_mixer() -> None:
    # Pozar 4th ed., Ex. 10.4, from memory: 6.4 dBm is printed with rounded intermediates; exact 6.485 dBm.
    found = prediction(
        """name: lna, gain: 20 dB, nf: 2 dB, oip3: 22 dBm
        name: mixer, gain: -6 dB, nf: 6 dB, iip3: 13 dBm, lo: 70 MHz"""
    ).totals
    assert found["oip3"].value == pytest.approx(6.485, abs=0.0005)
    assert found["iip3"].value == pytest.approx(6.485 - 14, abs=0.0005)


def test_dynamic_range_of_a_receiver() -> None:
    # Razavi, RF Microelectronics 2.4, from memory: NF 9 dB, IIP3 -15 dBm, 200 kHz, SNR 12 dB: SFDR 52.7 dB. It takes
    # kT0 as -174 dBm/Hz and asks for the SNR besides, which is no part of the range between floor and products here.
    found = prediction("name: receiver, gain: 0 dB, nf: 9 dB, iip3: -15 dBm", more="bandwidth: 200 kHz").totals
    floor = -174 + 9 + db(200e3)
    assert found["sfdr"].value - 12 == pytest.approx(2 / 3 * (-15 - floor) - 12, abs=0.03)
    assert found["sfdr"].value - 12 == pytest.approx(52.7, abs=0.08)


@pytest.mark.parametrize(("rejection", "nf"), [("", 2.719), (", image_rejection: 0 dB", 5.345)])
def test_double_sideband_mixer_with_and_without_an_image_filter(rejection: str, nf: float) -> None:
    # Closed form: F1 + (2 F_dsb - 1)/G1 behind an ideal image filter; 2 F1 + (2 F_dsb - 2)/G1 without one.
    found = prediction(
        f"""name: lna, gain: 15 dB, nf: 2 dB
        name: mixer, gain: -7 dB, nf_dsb: 7 dB, lo: 71.5 MHz{rejection}"""
    ).totals
    assert found["nf"].value == pytest.approx(nf, abs=0.0005)


@pytest.mark.parametrize(
    ("stage", "nf"),
    [
        ("loss: 3.0103 dB, temperature: 290 K", 3.010),
        ("loss: 3.0103 dB", 3.010),
        ("loss: 3.0103 dB, temperature: 77 K", 1.023),
        ("loss: 1 dB, temperature: 313.15 K", 1.071),
    ],
)
def test_passives_at_their_temperature(stage: str, nf: float) -> None:
    # Closed form F = 1 + (L - 1) T/T0: a pad of L = 2 at 290 K and at 77 K, a cable of 1 dB at 40 degC.
    assert prediction(f"name: pad, {stage}").totals["nf"].value == pytest.approx(nf, abs=0.0005)


def test_noise_floor_of_a_quiet_receiver() -> None:
    # kT0 = -173.975 dBm/Hz (SI, IEEE); in 10 kHz behind 3 dB.
    found = prediction("name: amp, gain: 20 dB, nf: 3 dB").totals
    assert found["noise_density"].value == pytest.approx(-173.975 + 3, abs=0.0005)
    assert found["noise_floor"].value == pytest.approx(-173.975 + 3 + 40, abs=0.0005)
    assert found["output_noise"].value == pytest.approx(-173.975 + 3 + 40 + 20, abs=0.0005)


@pytest.mark.parametrize(("signal", "fa"), [("10 MHz", 29.0), ("50.1 MHz", 52 - 23 * math.log10(50.1))])
def test_galactic_noise(signal: str, fa: float) -> None:
    # ITU-R P.372-16 eq. 13: Fam = 52 - 23 lg f, 29.0 dB at 10 MHz. The floor holds k (Ta + Te) B.
    found = prediction(
        "name: amp, gain: 20 dB, nf: 3 dB", signal=signal, more="bandwidth: 1 kHz\nexternal_noise: galactic"
    )
    assert db(found.source_temperature_k / 290) == pytest.approx(fa, abs=0.0005)
    total = 290 * ratio(fa) + 290 * (ratio(3) - 1)
    assert found.totals["noise_floor"].value == pytest.approx(db(BOLTZMANN * total * 1e3 / 1e-3), abs=1e-6)
    assert found.totals["nf"].value == pytest.approx(3)
    assert found.source_share == pytest.approx(290 * ratio(fa) / total)


def test_external_noise_as_a_figure() -> None:
    # ITU-R P.372: fa = Ta/T0.
    found = prediction("name: amp, gain: 20 dB, nf: 3 dB", more="bandwidth: 1 kHz\nexternal_noise: 18 dB")
    floor = db(BOLTZMANN * 290 * (ratio(18) + ratio(3) - 1) * 1e3 / 1e-3)
    assert found.totals["noise_floor"].value == pytest.approx(floor, abs=1e-6)


@pytest.mark.parametrize(
    ("stage", "factor"),
    [
        ("noise_voltage: 1.5 nV/rtHz", 1 + 1.5e-9**2 / (4 * BOLTZMANN * 290 * 50)),
        (
            "noise_voltage: 1.5 nV/rtHz, noise_current: 2 pA/rtHz",
            1 + (1.5e-9**2 + (2e-12 * 50) ** 2) / (4 * BOLTZMANN * 290 * 50),
        ),
        (
            "noise_voltage: 1.5 nV/rtHz, noise_current: 2 pA/rtHz, termination: 50 ohm",
            2 + 4 * 1.5e-9**2 / (4 * BOLTZMANN * 290 * 50) + 2e-12**2 * 50 / (4 * BOLTZMANN * 290),
        ),
    ],
)
def test_stages_given_by_noise_voltage_and_current(stage: str, factor: float) -> None:
    # Motchenbacher: high-impedance input, and one terminated by a resistor equal to the source's.
    found = prediction(f"name: detector, gain: 0 dB, {stage}").totals
    assert found["nf"].value == pytest.approx(db(factor), abs=1e-9)


def test_frequencies_and_nodes_through_two_mixers() -> None:
    # By hand: 144.3 MHz, difference with 116 MHz is 28.3 MHz, sum with 12.4 MHz is 40.7 MHz; levels are running sums.
    found = prediction(
        """name: first, gain: -7 dB, nf: 7 dB, lo: 116 MHz, ip1db: 3 dBm
        name: amp, gain: 20 dB, nf: 2 dB, op1db: 10 dBm
        name: second, gain: -6 dB, nf: 6 dB, lo: 12.4 MHz, output: sum""",
        signal="144.3 MHz",
        more="bandwidth: 3 kHz\nlevel: -40 dBm",
    )
    assert [node.frequency_hz for node in found.nodes] == pytest.approx([28.3e6, 28.3e6, 40.7e6])
    assert [node.level_dbm for node in found.nodes] == pytest.approx([-47, -27, -33])
    # Headroom at each stage's input: 3 - (-40); input point of the amplifier 10 - 20 + 1 = -9, less -47.
    assert [node.headroom_db for node in found.nodes[:2]] == pytest.approx([43, 38])
    assert found.totals["headroom"].value == pytest.approx(38)
    assert found.totals["op1db"].value == pytest.approx(found.totals["ip1db"].value + 7 - 1)


def test_oscillator_that_follows_the_signal() -> None:
    found = prediction("name: mixer, gain: -6 dB, nf: 6 dB, lo: {follows: signal, offset: 21.4 MHz}")
    assert found.nodes[0].frequency_hz == pytest.approx(21.4e6)


def test_shares_by_hand() -> None:
    # Friis terms over their sum with the source at T0; third order in phase, terms Gpre/IIP3.
    found = prediction(
        """name: lna, gain: 10 dB, nf: 3.0103 dB, iip3: 0 dBm
        name: amp, gain: 20 dB, nf: 10.4139 dB, iip3: 10 dBm"""
    )
    # F1 = 2, F2 = 11: 1 (source) + 1 + 10/10; third order 1/1 + 10/10.
    assert [node.noise_share for node in found.nodes] == pytest.approx([1 / 3, 1 / 3], abs=1e-5)
    assert found.source_share == pytest.approx(1 / 3, abs=1e-5)
    assert [node.iip3_share for node in found.nodes] == pytest.approx([0.5, 0.5])
    assert found.totals["iip3"].value == pytest.approx(-db(2))


def test_intercepts_that_are_not_in_phase() -> None:
    # 1/IIP3^2 and 1/IIP2 add instead: two equal terms cost half of what they cost in phase.
    stages = """name: lna, gain: 10 dB, nf: 3 dB, iip3: 0 dBm, iip2: 20 dBm
        name: amp, gain: 20 dB, nf: 3 dB, iip3: 10 dBm, iip2: 30 dBm"""
    worst = prediction(stages).totals
    random = prediction(stages, more="bandwidth: 10 kHz\nsums: not in phase").totals
    assert worst["iip3"].value == pytest.approx(-db(2))
    assert random["iip3"].value == pytest.approx(-db(2) / 2)
    assert worst["iip2"].value == pytest.approx(20 - 2 * db(2))
    assert random["iip2"].value == pytest.approx(20 - db(2))
