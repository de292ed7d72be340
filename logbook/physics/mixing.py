"""Mixing products of several sources: which there are, where they land, and a mixer's unwanted responses by name.

A product is a row of whole orders, one per source: f = |sum n_i f_i|. Of a row and its negative only the one whose
first order is positive is listed, since both give the same frequency. Its order is sum |n_i|.
"""

from __future__ import annotations

from functools import lru_cache
from itertools import combinations, product
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from logbook.physics.constants import Array

Orders = npt.NDArray[np.int64]
Band = tuple[float, float]


class Hits(NamedTuple):
    """Products that land on a target: indices of product and target, frequency and offset from the target (Hz).

    All [h], lowest order first, then the smallest offset.
    """

    product: Orders
    target: Orders
    frequency_hz: Array
    offset_hz: Array


class Ranges(NamedTuple):
    """Products that fall into a band somewhere in a tuning range: their indices, from where to where (Hz); [r]."""

    product: Orders
    low_hz: Array
    high_hz: Array


@lru_cache(maxsize=32)
def product_orders(sources: int, order: int, taken: tuple[int, ...] = (1, 2, 3)) -> Orders:
    """Every product of so many sources up to an order: [products, sources], read-only, lowest order first.

    `taken` says how many sources a product is made of: 1 is a harmonic. Six sources to order 15: 39,640 rows.
    Source: enumeration, see the module's head.
    """
    blocks = [_placed(sources, chosen, order) for size in taken for chosen in combinations(range(sources), size)]
    rows = np.concatenate([np.zeros((0, sources), dtype=np.int64), *blocks])
    rows = rows[np.argsort(product_order(rows), kind="stable")]
    rows.setflags(write=False)
    return rows


def _placed(sources: int, chosen: tuple[int, ...], order: int) -> Orders:
    few = _orders_of_all(len(chosen), order)
    rows = np.zeros((len(few), sources), dtype=np.int64)
    rows[:, list(chosen)] = few
    return rows


@lru_cache(maxsize=64)
def _orders_of_all(size: int, order: int) -> Orders:
    """Rows of `size` orders, none zero, the first positive, |n| summed up to `order`."""
    if order < size:
        return np.zeros((0, size), dtype=np.int64)
    steps = np.indices((order - size + 1,) * size, dtype=np.int64).reshape(size, -1).T + 1
    steps = steps[steps.sum(axis=1) <= order]
    signs = np.array([(1, *rest) for rest in product((1, -1), repeat=size - 1)], dtype=np.int64)
    rows: Orders = (steps[:, np.newaxis, :] * signs[np.newaxis, :, :]).reshape(-1, size)
    return rows


def product_order(orders: Orders) -> Orders:
    """sum |n_i| of each row, [products, sources] to [products] (1). Source: definition."""
    total: Orders = np.abs(orders).sum(axis=-1)
    return total


def product_frequencies(orders: Orders, sources_hz: Array) -> Array:
    """|sum n_i f_i|: [products, sources] and [..., sources] to [..., products], Hz. Source: definition."""
    frequencies: Array = np.abs(np.asarray(sources_hz, dtype=np.float64) @ orders.T)
    return frequencies


def without(orders: Orders, wanted: tuple[int, ...]) -> Orders:
    """The products but for one and its negative, such as the wanted conversion; [products, sources] (1).

    Source: definition.
    """
    row = np.asarray(wanted, dtype=np.int64)
    same = np.all(orders == row, axis=1) | np.all(orders == -row, axis=1)
    kept: Orders = orders[~same]
    return kept


def landing(orders: Orders, sources_hz: Array, targets_hz: Array, half_width_hz: Array) -> Hits:
    """Products within half_width of a target, bounds included: Hz, sources [s], targets and half widths [t].

    half_width is IF bandwidth/2 + tolerance; where it differs by product, [products, t]. Source: definition.
    """
    frequencies = product_frequencies(orders, sources_hz)
    targets = np.atleast_1d(np.asarray(targets_hz, dtype=np.float64))
    offsets = frequencies[:, np.newaxis] - targets
    which, target = np.nonzero(np.abs(offsets) <= half_width_hz)
    offset = offsets[which, target]
    ranked = np.lexsort((np.abs(offset), product_order(orders)[which]))
    which, target = which[ranked], target[ranked]
    return Hits(which, target, frequencies[which], offset[ranked])


def crossing_ranges(
    at_zero_hz: Array, per_hz: Array, target_at_zero_hz: float, target_per_hz: float, half_width_hz: Array, tune: Band
) -> Ranges:
    """Where in a tuning range products |a + b t| lie within half_width of a target c + d t, to the hertz; [r].

    a at_zero_hz (Hz) and b per_hz (1) [products]; half_width_hz (Hz) one or [products]; tune: lowest and highest
    tuning t (Hz). Sorted by where they begin. No grid: |a + b t| - (c + d t) is linear on either side of zero, so that
    its bounds are solved for. Source: closed form.
    """
    low, high = tune
    found: list[tuple[Orders, Array, Array]] = []
    for sense in (1.0, -1.0):
        offset = sense * np.asarray(at_zero_hz, dtype=np.float64) - target_at_zero_hz
        slope = sense * np.asarray(per_hz, dtype=np.float64) - target_per_hz
        with np.errstate(divide="ignore", invalid="ignore"):
            ends = np.stack([(half - offset) / slope for half in (-half_width_hz, half_width_hz)])
        always = np.where(np.abs(offset) <= half_width_hz, low, np.inf)
        first = np.maximum(np.where(slope == 0.0, always, ends.min(axis=0)), low)
        last = np.minimum(np.where(slope == 0.0, high, ends.max(axis=0)), high)
        # Beyond the zero of a product the other sense holds.
        middle = np.where(first <= last, 0.5 * (first + last), 0.0)
        inside = (first <= last) & (sense * (at_zero_hz + per_hz * middle) >= 0.0)
        which = np.flatnonzero(inside)
        found.append((which, first[which], last[which]))
    product, begin, end = (np.concatenate(column) for column in zip(*found, strict=True))
    ranked = np.lexsort((product, begin))
    return Ranges(product[ranked], begin[ranked], end[ranked])


def converted(frequency_hz: float, lo_hz: float, output: str = "difference") -> float:
    """|f_lo - f| or, for output "sum", f_lo + f; Hz. Source: definition."""
    return lo_hz + frequency_hz if output == "sum" else abs(lo_hz - frequency_hz)


def image_frequency(signal_hz: float, lo_hz: float, output: str = "difference") -> float:
    """The other input that lands on the same IF: |2 f_lo - f|, or 2 f_lo + f for output "sum"; Hz.

    Source: closed form; 144.3 MHz with 116 MHz: 87.7 MHz.
    """
    return 2.0 * lo_hz + signal_hz if output == "sum" else abs(2.0 * lo_hz - signal_hz)


def half_if_frequency(signal_hz: float, lo_hz: float, output: str = "difference") -> float:
    """The input nearest to the signal whose second harmonic meets the oscillator's in the IF: |2 f +- 2 f_lo| = IF; Hz.

    (f + f_lo)/2 for output "difference". Source: closed form; 900 MHz, IF 100 MHz: 850 and 950 MHz.
    """
    half = converted(signal_hz, lo_hz, output) / 2.0
    meeting = [f for f in (lo_hz + half, lo_hz - half, half - lo_hz) if f > 0.0]
    return min(meeting, key=lambda f: abs(f - signal_hz))
