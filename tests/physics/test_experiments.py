"""Evidence against brute force: sources really shifted, displays really retuned."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize

from logbook.physics import experiments, mixing

MHZ = 1e6


def test_a_shifted_source_moves_every_product_as_it_does() -> None:
    sources = np.array([71.5, 12.288, 33.0]) * MHZ
    rows = mixing.product_orders(3, 6)
    for i in range(3):
        moved = sources.copy()
        moved[i] += 1e3
        expected = mixing.product_frequencies(rows, moved) - mixing.product_frequencies(rows, sources)
        assert experiments.predicted_move(rows, sources, i, 1e3) == pytest.approx(expected, abs=1e-6)
        away = np.abs(rows @ sources) > 1e5
        assert np.abs(experiments.predicted_move(rows, sources, i, 1e3)[away]) == pytest.approx(
            np.abs(rows[away, i]) * 1e3, abs=1e-6
        )


def test_shift_seen_through_the_oscillator_that_follows_the_tuning() -> None:
    """LO = tuning + 21.4 MHz, a clock at 12.288 MHz; where each product is heard before and after, by root search."""
    first_if, clock = 21.4 * MHZ, 12.288 * MHZ
    rows = mixing.product_orders(2, 9, (2,))

    def off(tuned: float, row: np.ndarray, clock_hz: float) -> float:
        return float(abs(row[0] * (tuned + first_if) + row[1] * clock_hz) - first_if)

    checked = 0
    for row in rows:
        heard = [(sign * first_if - row[1] * clock) / row[0] - first_if for sign in (1, -1)]
        for tuned in (f for f in heard if 1 * MHZ < f < 300 * MHZ):
            again = optimize.brentq(off, tuned - 2e5, tuned + 2e5, args=(row, clock + 1e3), xtol=1e-4)
            sources = np.array([tuned + first_if, clock])
            said = experiments.display_move(row[np.newaxis], sources, np.array([1, 0]), np.array([0]), 1, 1e3)
            assert said[0] == pytest.approx(again - tuned, abs=0.01)
            checked += 1
    assert checked > 20


def test_on_a_display_that_shows_the_frequency_itself() -> None:
    """No oscillator follows and the target is the shown frequency: the plain n_i delta."""
    rows, sources = mixing.product_orders(2, 5), np.array([10.0, 3.1]) * MHZ
    shown = experiments.display_move(rows, sources, np.zeros(2), np.ones(len(rows)), 0, 100.0)
    assert shown == pytest.approx(experiments.predicted_move(rows, sources, 0, 100.0), abs=1e-6)


def test_a_product_that_retuning_does_not_move_stands_nowhere() -> None:
    rows = np.array([[0, 2]])
    said = experiments.display_move(rows, np.array([70.0, 10.7]) * MHZ, np.array([1, 0]), np.array([0]), 1, 1e3)
    assert math.isnan(said[0])


def test_drop_of_the_input() -> None:
    # Definition of the order: 3 dB less input, 2nd order in it: 6 dB.
    rows = np.array([[1, 2], [3, -1], [2, 0]])
    assert experiments.predicted_drop(rows, 1, 3.0).tolist() == [6.0, 3.0, 0.0]


def test_drop_of_a_real_second_order_product() -> None:
    """A square law and an FFT: the second harmonic falls 2 dB a dB."""
    t = np.arange(1024) / 1024

    def harmonic(amplitude: float) -> float:
        x = amplitude * np.cos(2 * np.pi * 50 * t)
        return float(20 * np.log10(np.abs(np.fft.rfft(x + 0.1 * x**2))[100]))

    fell = harmonic(1.0) - harmonic(10 ** (-3 / 20))
    assert experiments.predicted_drop(np.array([[2]]), 0, 3.0)[0] == pytest.approx(fell, abs=1e-6)


def test_agreement_with_what_was_seen() -> None:
    said = experiments.agrees(np.array([1000.0, -1000.0, math.nan]), 990.0, 20.0)
    assert said[:2].tolist() == [1.0, 0.0]
    assert math.isnan(said[2])


def test_groups_of_outcomes() -> None:
    assert experiments.outcome_groups(np.array([0.0, 5.0, 1000.0, math.nan, 2000.0, 4.0]), 10.0) == [3, 1, 1, 1]
    assert experiments.outcome_groups(np.array([]), 1.0) == []


def test_the_best_experiment_tells_most_candidates_apart() -> None:
    rows = np.array([[1, -2, 0], [1, 1, 1], [1, -3, 1], [1, 2, -1]])
    sources = np.array([71.5, 12.0, 5.0]) * MHZ
    shifts = [experiments.predicted_move(rows, sources, i, 1e3) for i in range(3)]
    choice = experiments.best_experiment(shifts, [50.0] * 3)
    assert choice == (1, 4, 1)


def test_of_equally_many_outcomes_the_more_even_split_is_taken() -> None:
    uneven, even = np.array([0.0, 0.0, 0.0, 9.0]), np.array([0.0, 0.0, 9.0, 9.0])
    assert experiments.best_experiment([uneven, even], [1.0, 1.0]) == (1, 2, 2)


def test_no_experiment_helps_when_all_predict_the_same() -> None:
    assert experiments.best_experiment([np.array([1.0, 1.0])], [0.5]) is None
    assert experiments.best_experiment([], []) is None


def test_a_tone_moves_with_the_harmonic_of_the_oscillator() -> None:
    """The unit really tuned by 300 Hz: where each product stands beside its target before and after."""
    first_if, tuned, clock = 10.7 * MHZ, 50.1 * MHZ, 12.288 * MHZ
    rows = mixing.product_orders(2, 6)
    for follows in (0.0, 1.0):

        def beside(dial: float, follows: float = follows) -> np.ndarray:
            target = dial if follows else first_if
            return mixing.product_frequencies(rows, np.array([dial - first_if, clock])) - target

        expected = np.abs(beside(tuned + 300.0) - beside(tuned))
        sources = np.array([tuned - first_if, clock])
        said = experiments.tuning_move(rows, sources, np.array([1.0, 0.0]), np.full(len(rows), follows), 300.0)
        assert said == pytest.approx(expected, abs=1e-6)
