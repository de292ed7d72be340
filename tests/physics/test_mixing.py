"""Mixing products against brute force in plain Python, and a mixer's responses in closed form."""

from __future__ import annotations

import time
from itertools import combinations, product

import numpy as np
import pytest

from logbook.physics import mixing

MHZ = 1e6


def brute_force(sources: int, order: int, taken: tuple[int, ...]) -> set[tuple[int, ...]]:
    found = set()
    for row in product(range(-order, order + 1), repeat=sources):
        used = [n for n in row if n]
        if len(used) in taken and sum(map(abs, used)) <= order and used[0] > 0:
            found.add(row)
    return found


@pytest.mark.parametrize(
    ("sources", "order", "taken"),
    [(2, 7, (2,)), (3, 5, (1, 2, 3)), (3, 9, (2, 3)), (4, 4, (2, 3)), (1, 5, (1,)), (2, 1, (1, 2)), (2, 3, (3,))],
)
def test_every_product_once(sources: int, order: int, taken: tuple[int, ...]) -> None:
    rows = mixing.product_orders(sources, order, taken)
    listed = [tuple(int(n) for n in row) for row in rows]
    assert len(listed) == len(set(listed))
    assert set(listed) == brute_force(sources, order, taken)
    sums = mixing.product_order(rows)
    assert np.all(np.diff(sums) >= 0)


def test_six_sources_to_order_fifteen_against_brute_force() -> None:
    """Two and three at a time, in the time it takes to lift a finger: what lands, and the count in closed form."""
    sources, target, half = [71.5e6, 50.1e6, 12.288e6, 25e6, 32.768e3, 600e3], 21.4e6, 20e3
    started = time.process_time()
    rows = mixing.product_orders.__wrapped__(6, 15, (2, 3))
    hits = mixing.landing(rows, np.array(sources), np.array([target]), np.array([half]))
    assert time.process_time() - started < 1.0
    # Closed form: sum over k sources taken of C(6, k) 2^(k-1) C(15, k).
    assert len(rows) == 15 * 2 * 105 + 20 * 4 * 455
    expected = set()
    for size in (2, 3):
        for chosen in combinations(range(6), size):
            for few in product(range(-14, 15), repeat=size):
                if few[0] > 0 and all(few) and sum(map(abs, few)) <= 15:
                    f = abs(sum(n * sources[i] for n, i in zip(few, chosen, strict=True)))
                    if abs(f - target) <= half:
                        expected.add(tuple(dict(zip(chosen, few, strict=True)).get(i, 0) for i in range(6)))
    assert len(expected) > 3
    assert {tuple(row) for row in rows[hits.product].tolist()} == expected


def test_landing_against_brute_force() -> None:
    sources = [71.5 * MHZ, 50.1 * MHZ, 12.288 * MHZ]
    targets, half = [21.4 * MHZ, 50.1 * MHZ], [20e3, 5e3]
    rows = mixing.product_orders(3, 9)
    hits = mixing.landing(rows, np.array(sources), np.array(targets), np.array(half))
    expected = set()
    for row in brute_force(3, 9, (1, 2, 3)):
        f = abs(sum(n * s for n, s in zip(row, sources, strict=True)))
        expected |= {(row, t) for t in range(2) if abs(f - targets[t]) <= half[t]}
    found = [(tuple(int(n) for n in rows[p]), int(t)) for p, t in zip(hits.product, hits.target, strict=True)]
    assert len(found) == len(set(found))
    assert set(found) == expected
    assert ((1, -1, 0), 0) in expected
    ranked = [(int(mixing.product_order(rows)[p]), abs(o)) for p, o in zip(hits.product, hits.offset_hz, strict=True)]
    assert ranked == sorted(ranked)
    assert hits.frequency_hz - np.array(targets)[hits.target] == pytest.approx(hits.offset_hz)


def test_the_wanted_conversion_is_left_out() -> None:
    rows = mixing.product_orders(2, 5)
    kept = mixing.without(rows, (-1, 1))
    assert len(kept) == len(rows) - 1
    assert (1, -1) not in {tuple(row) for row in kept.tolist()}


@pytest.mark.parametrize(("sense", "first_if"), [(1.0, 21.4), (1.0, -10.7), (-1.0, 71.5)])
def test_crossings_of_a_tuning_range_against_a_grid(sense: float, first_if: float) -> None:
    """Every product at each of 4001 tunings, 1 kHz apart: the stretches are where the grid says, to its step."""
    tuned = np.linspace(50.0, 54.0, 4001) * MHZ
    rows = mixing.product_orders(3, 8)
    sources = np.stack([tuned, sense * tuned + first_if * MHZ, np.full(len(tuned), 10.003 * MHZ)], axis=-1)
    target, half = abs(first_if) * MHZ, 7.4e3
    at_zero, per = rows @ np.array([0.0, first_if, 10.003]) * MHZ, rows @ np.array([1.0, sense, 0.0])
    found = mixing.crossing_ranges(at_zero, per, target, 0.0, np.float64(half), (50.0 * MHZ, 54.0 * MHZ))
    inside = np.abs(np.abs(sources @ rows.T) - target) <= half
    told = np.zeros_like(inside)
    for which, low, high in zip(found.product, found.low_hz, found.high_hz, strict=True):
        told[:, which] |= (tuned >= low - 1e-3) & (tuned <= high + 1e-3)
    assert inside.any()
    assert np.array_equal(told, inside)
    assert np.all(np.diff(found.low_hz) >= 0)


def test_crossings_of_a_target_that_follows_the_tuning() -> None:
    """Harmonics of a 10 MHz clock on the signal frequency itself, 3 kHz to either side."""
    rows = mixing.product_orders(1, 6, (1,))
    found = mixing.crossing_ranges(rows[:, 0] * 10e6, np.zeros(6), 0.0, 1.0, np.full(6, 3e3), (18e6, 40e6))
    assert rows[found.product, 0].tolist() == [2, 3, 4]
    assert found.low_hz == pytest.approx([20e6 - 3e3, 30e6 - 3e3, 40e6 - 3e3])
    assert found.high_hz == pytest.approx([20e6 + 3e3, 30e6 + 3e3, 40e6])


def test_a_product_that_stays_in_the_band_takes_the_whole_range() -> None:
    found = mixing.crossing_ranges(np.array([21.4e6, 21.5e6]), np.zeros(2), 21.4e6, 0.0, np.float64(5e3), (50e6, 52e6))
    assert [(int(p), lo, hi) for p, lo, hi in zip(*found, strict=True)] == [(0, 50e6, 52e6)]


@pytest.mark.parametrize(("lo", "half_if"), [(800.0, 850.0), (1000.0, 950.0)])
def test_half_if(lo: float, half_if: float) -> None:
    # Closed form: 900 MHz, IF 100 MHz: low side 850, high side 950 MHz.
    assert mixing.half_if_frequency(900.0, lo) == pytest.approx(half_if)


def test_converter_from_two_metres() -> None:
    # Own example: 144.3 to 28.3 MHz, LO 116 MHz: image 87.7, half-IF 130.15 MHz.
    assert mixing.converted(144.3, 116.0) == pytest.approx(28.3)
    assert mixing.image_frequency(144.3, 116.0) == pytest.approx(87.7)
    assert mixing.half_if_frequency(144.3, 116.0) == pytest.approx(130.15)


@pytest.mark.parametrize(
    ("signal", "lo", "output"), [(50.1, 71.5, "difference"), (50.0, 10.0, "difference"), (5.0, 40.0, "sum")]
)
def test_responses_land_in_the_same_if(signal: float, lo: float, output: str) -> None:
    wanted = mixing.converted(signal, lo, output)
    image = mixing.image_frequency(signal, lo, output)
    half = mixing.half_if_frequency(signal, lo, output)
    assert image != signal
    assert min(abs(abs(image - lo) - wanted), abs(image + lo - wanted)) == pytest.approx(0.0, abs=1e-9)
    assert min(abs(abs(2 * half - 2 * lo) - wanted), abs(2 * half + 2 * lo - wanted)) == pytest.approx(0.0, abs=1e-9)
