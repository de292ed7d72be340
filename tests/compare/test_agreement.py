"""Prediction against measurement: E_n by hand; shares and shifts by least squares with the tolerances as weights."""

from __future__ import annotations

import math

import numpy as np
import pytest
from workshop import block, book_of, chain, change, entry, reading

from logbook.book import Book
from logbook.findings import Agreement


def agreement(book: Book, key: str) -> Agreement:
    return next(a for a in book.findings.agreement if a.key == key)


def one(stages: str, results: str, more: str = "", chain_more: str = "bandwidth: 10 kHz") -> Book:
    return book_of(entry("01-01", chain(stages, more=chain_more), reading(results, more), revision="A"))


AMP = "name: amp, gain: 20.0(3) dB, nf: 3 dB"


@pytest.mark.parametrize(
    ("written", "en", "verdict"),
    [("20.8(4) dB", 0.8, "agrees"), ("21.5(4) dB", 1.5, "disagrees"), ("19.0(4) dB", 1.0, "agrees")],
)
def test_en_by_hand(written: str, en: float, verdict: str) -> None:
    # ISO 13528: |d| over the root sum of squares of the expanded uncertainties, 2 (0.3^2 + 0.4^2)^(1/2) = 1.
    found = agreement(one(AMP, f"gain: {written}"), "rx/gain")
    assert found.en == pytest.approx(en)
    assert found.verdict == verdict


@pytest.mark.parametrize(("written", "verdict"), [("20.1 dB", "agrees"), ("20.3 dB", "disagrees")])
def test_without_any_doubt_what_matters_decides(written: str, verdict: str) -> None:
    found = agreement(one("name: amp, gain: 20 dB, nf: 3 dB", f"gain: {written}"), "rx/gain")
    assert math.isnan(found.en)
    assert (found.verdict, found.why) == (verdict, "doubt not stated")


def test_prediction_is_made_for_the_reading_s_own_bandwidth_and_source() -> None:
    book = one("name: amp, gain: 20 dB, nf: 3 dB", "noise_floor: -128 dBm", "rbw: 3 kHz\nsource_temperature: 77 K")
    noise = 1.380649e-23 * (77 + 290 * (10**0.3 - 1)) * 3e3
    assert agreement(book, "rx/noise_floor").predicted == pytest.approx(10 * math.log10(noise / 1e-3))


def test_prediction_is_made_for_the_reading_s_own_frequency() -> None:
    stages = "name: amp, gain: 20 dB, nf: 3 dB"
    book = one(stages, "noise_floor: -100 dBm", "at: 10 MHz\nrbw: 3 kHz", "bandwidth: 10 kHz\nexternal_noise: galactic")
    noise = 1.380649e-23 * 290 * (10**2.9 + 10**0.3 - 1) * 3e3
    assert agreement(book, "rx/noise_floor@10MHz").predicted == pytest.approx(10 * math.log10(noise / 1e-3))


def test_output_level_follows_the_drive_of_the_reading() -> None:
    book = one(AMP, "output_level: -9.5(1) dBm", "drive: -30 dBm", "level: -60 dBm")
    assert agreement(book, "rx/output_level").predicted == pytest.approx(-10)
    assert agreement(
        one(AMP, "output_level: -41 dBm", "", "level: -60 dBm"), "rx/output_level"
    ).predicted == pytest.approx(-40)


def test_a_peak_of_noise_and_a_bound_are_held_against_nothing() -> None:
    bench = block("bench", "bench: shack\nreads: {floor: -150 dBm/Hz}")
    book = book_of(
        entry(
            "01-01",
            chain(AMP),
            bench,
            reading("output_noise: -90 dBm", "rbw: 10 kHz\naveraging: peak"),
            reading("output_noise: -109.5 dBm", "bench: shack\nrbw: 10 kHz\naveraging: power"),
            revision="A",
        )
    )
    assert book.findings.agreement == []


def test_shares_and_shifts_by_hand() -> None:
    # Gain is a plain sum: c = 1. Shares u_i^2 over their sum; shifts d u_i^2 over (sum + u_meas^2).
    stages = "name: one, gain: 10.0(3) dB, nf: 3 dB\nname: two, gain: 5.0(4) dB, nf: 3 dB"
    found = agreement(one(stages, "gain: 17.0(5) dB"), "rx/gain")
    by_stage = {share.source.name: share for share in found.shares}
    assert by_stage["one"].share == pytest.approx(0.09 / 0.25)
    assert by_stage["two"].share == pytest.approx(0.16 / 0.25)
    assert by_stage["one"].shift == pytest.approx(2.0 * 0.09 / 0.5)
    assert by_stage["two"].shift == pytest.approx(2.0 * 0.16 / 0.5)
    assert [share.source.name for share in found.shares] == ["two", "one"]


def noise_figure(gain: np.ndarray, nf: np.ndarray) -> float:  # type: ignore[type-arg]
    """Friis, in dB."""
    ahead = 10 ** ((np.cumsum(gain) - gain) / 10)
    factor = 10 ** (nf[0] / 10) + ((10 ** (nf[1:] / 10) - 1) / ahead[1:]).sum()
    return float(10 * np.log10(factor))


@pytest.mark.parametrize("seed", range(6))
def test_shifts_against_weighted_least_squares(seed: int) -> None:
    """The most likely shifts: minimise (d - c.x)^2/u_meas^2 + sum (x_i/u_i)^2, solved with numpy's lstsq."""
    rng = np.random.default_rng(seed)
    n = 3
    gain, nf = rng.uniform(5, 12, n).round(2), rng.uniform(2, 9, n).round(2)
    u_gain, u_nf = rng.uniform(0.05, 0.4, n).round(3), rng.uniform(0.05, 0.4, n).round(3)
    stages = "\n".join(
        f"name: s{i}, gain: {gain[i]} ± {2 * u_gain[i]:.3f} dB (k=2), nf: {nf[i]} ± {2 * u_nf[i]:.3f} dB (k=2)"
        for i in range(n)
    )
    u_measured = 0.15
    found = agreement(one(stages, f"nf: {noise_figure(gain, nf) + 0.9:.6f} ± {2 * u_measured} dB (k=2)"), "rx/nf")
    values, u = np.concatenate([gain, nf]), np.concatenate([u_gain, u_nf])

    def total(x: np.ndarray) -> float:  # type: ignore[type-arg]
        return noise_figure(x[:n], x[n:])

    # The engine's sensitivities are central differences over +-u, and so are these.
    slopes = np.array([(total(values + step) - total(values - step)) / 2 / step.max() for step in np.diag(u)])
    rows = np.vstack([slopes / u_measured, np.diag(1 / u)])
    wanted = np.concatenate([[0.9 / u_measured], np.zeros(2 * n)])
    shifts, *_ = np.linalg.lstsq(rows, wanted, rcond=None)
    shares = (slopes * u) ** 2 / ((slopes * u) ** 2).sum()
    names = [(f"s{i}", "gain") for i in range(n)] + [(f"s{i}", "nf") for i in range(n)]
    by_name = {(share.source.name, share.source.what): share for share in found.shares}
    for name, shift, share in zip(names, shifts, shares, strict=True):
        if name in by_name:
            assert by_name[name].shift == pytest.approx(shift, rel=1e-3, abs=1e-6)
            assert by_name[name].share == pytest.approx(share, rel=1e-3, abs=1e-6)
    # What has no part in it, such as the gain of the last stage, is not listed.
    assert {name for name, share in zip(names, shares, strict=True) if share > 1e-6} <= set(by_name)


def test_a_measured_stage_value_replaces_the_assumption() -> None:
    book = book_of(
        entry("01-01", chain("name: amp, gain: 20 ± 1 dB, nf: 3 dB"), reading("gain: 18.5(1) dB"), revision="A"),
        entry("02-01", change("  - {set: amp, to: {gain: 18.4(1) dB}}"), reading("gain: 18.5(1) dB"), revision="B"),
    )
    first, second = book.findings.agreement
    assert first.en == pytest.approx(1.5 / (2 * math.hypot(0.1, 1 / math.sqrt(3))))
    assert second.predicted == pytest.approx(18.4)
    assert second.en == pytest.approx(0.1 / (2 * math.hypot(0.1, 0.1)))
