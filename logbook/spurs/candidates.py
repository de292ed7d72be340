"""Every product of the sources that lands where a spur was seen, with the responses of each mixer by name."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from logbook.physics.mixing import (
    Orders,
    half_if_frequency,
    image_frequency,
    landing,
    product_order,
    product_orders,
)
from logbook.quantity_display import show_frequency
from logbook.spurs.setting import SIGNAL, Setting, Spot, SpurSource, product_words

IMAGE, HALF_IF, FEED_THROUGH, TRUE_SIGNAL = "image", "half-IF", "IF feed-through", "true signal"

Row = tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Candidate:
    """A product that lands on a spot: `orders` has one number a source of the setting it is returned with."""

    orders: Row
    order: int
    words: str
    spot: Spot
    frequency_hz: float
    offset_hz: float
    foreign: int
    response: str = ""
    struck: tuple[str, ...] = ()
    agreed: int = 0

    @property
    def rank(self) -> tuple[bool, int, int, int, float]:
        """Possible ones first, of the fewest orders, by the evidence for them, then by how few foreign sources."""
        return bool(self.struck), self.order, -self.agreed, self.foreign, abs(self.offset_hz)


def candidates(setting: Setting, order: int, heard: Sequence[Spot]) -> tuple[Setting, list[Candidate]]:
    """All candidates, and the setting with the outside signals that the mixers' responses call for added to it.

    `heard` are the spots of the setting on which the spur may have landed, or one with the frequency seen.
    """
    rows = all_products(setting.sources, order, [spot.lo for spot in setting.spots if spot.lo >= 0])
    landed = _landed(rows, setting, heard)
    landed = _without_repeats(landed, setting)
    outside = _outside(setting, heard, _explained(landed, setting))
    whole = replace(setting, sources=(*setting.sources, *(source for _, _, _, source in outside)))
    wider = len(whole.sources)
    found = [_candidate((*row, *(0,) * len(outside)), spot, response, whole) for row, spot, response in landed]
    for number, (row, spot, response, _) in enumerate(outside):
        place = len(setting.sources) + number
        full = (*row[:-1], *(row[-1] if i == place else 0 for i in range(len(setting.sources), wider)))
        found.append(_candidate(full, spot, response, whole))
    return whole, sorted(found, key=lambda each: each.rank)


def all_products(sources: Sequence[SpurSource], order: int, los: Iterable[int]) -> Orders:
    """Products up to the order, less harmonics that a source does not have, and those it has beyond the order.

    A harmonic beyond the order is taken alone and with the fundamental of each oscillator of `los`: it is received as
    any signal is.
    """
    rows = product_orders(len(sources), order)
    beyond: list[Row] = []
    for index, source in enumerate(sources):
        if source.harmonics is None:
            continue
        rows = rows[np.abs(rows[:, index]) <= source.harmonics]
        beyond += _harmonics_beyond(index, order, source.harmonics, len(sources), sorted({*los} - {index}))
    if not beyond:
        return rows
    more = np.array(beyond, dtype=np.int64)
    # A harmonic of the order itself is there alone; with an oscillator it is of one order more.
    known = {row.tobytes() for row in rows[product_order(rows) > order - 1]}
    return np.concatenate([rows, more[[row.tobytes() not in known for row in more]]])


def _harmonics_beyond(index: int, order: int, harmonics: int, length: int, los: list[int]) -> list[Row]:
    found = []
    for n in range(order, harmonics + 1):
        for lo, sign in [(-1, 0), *((lo, sign) for lo in los for sign in (1, -1))]:
            row = [0] * length
            row[index] = n
            if lo >= 0:
                row[lo] = sign
            found.append(tuple(row))
    return found


def _landed(rows: Orders, setting: Setting, heard: Sequence[Spot]) -> list[tuple[Row, Spot, str]]:
    targets = np.array([spot.frequency_hz for spot in heard])
    widths = np.array([spot.half_width_hz for spot in heard])
    half = widths + (np.abs(rows) @ setting.tolerances_hz)[:, np.newaxis]
    hits = landing(rows, setting.frequencies_hz, targets, half)
    found = []
    for index, target in zip(hits.product.tolist(), hits.target.tolist(), strict=True):
        row, spot = tuple(int(n) for n in rows[index]), heard[target]
        if one_sign(row) != one_sign(spot.wanted):
            found.append((row, spot, response_of(row, spot, setting, float(half[index, target]))))
    return found


def _without_repeats(landed: list[tuple[Row, Spot, str]], setting: Setting) -> list[tuple[Row, Spot, str]]:
    """What lands on a spot arrives at the next one by the wanted conversion: of the two rows the shorter is told."""
    known = {(one_sign(row), spot.name) for row, spot, _ in landed}
    dropped = set()
    for row, spot, _ in landed:
        if spot.before < 0:
            continue
        ahead = ahead_of_mixer(row, spot, setting), setting.spots[spot.before].name
        if ahead in known:
            dropped.add(max(ahead, (one_sign(row), spot.name), key=lambda each: sum(map(abs, each[0]))))
    return [each for each in landed if (one_sign(each[0]), each[1].name) not in dropped]


def one_sign(row: Row) -> Row:
    """A product and its negative are one: the row whose first order is positive."""
    return row if next((n for n in row if n), 1) > 0 else tuple(-n for n in row)


def ahead_of_mixer(row: Row, spot: Spot, setting: Setting) -> Row:
    """The product ahead of the spot's mixer that its wanted conversion turns into this one."""
    sense = 1 if float(np.array(row) @ setting.frequencies_hz) >= 0 else -1
    return one_sign(tuple(spot.way * (sense * n - spot.lo_sign * (i == spot.lo)) for i, n in enumerate(row)))


def behind_mixer(row: Row, spot: Spot, setting: Setting) -> Row:
    """The product that the wanted conversion of the spot's mixer makes out of this one."""
    sense = 1 if float(np.array(row) @ setting.frequencies_hz) >= 0 else -1
    return one_sign(tuple(spot.way * sense * n + spot.lo_sign * (i == spot.lo) for i, n in enumerate(row)))


def response_of(row: Row, spot: Spot, setting: Setting, width_hz: float) -> str:
    """By which response of the mixer one source, or a harmonic of it, comes to the IF; nothing for other products."""
    if spot.lo < 0:
        entering = [abs(n) for n, source in zip(row, setting.sources, strict=True) if n and source.enters]
        return TRUE_SIGNAL if entering == [1] and sum(map(abs, row)) == 1 else ""
    lo, before = setting.sources[spot.lo].at(setting.tuned_hz), setting.spots[spot.before].frequency_hz
    times = abs(row[spot.lo])
    rest = tuple(0 if i == spot.lo else n for i, n in enumerate(row))
    if sum(1 for n in rest if n) != 1:
        return ""
    hz = abs(float(np.array(rest) @ setting.frequencies_hz))
    if times == 0:
        return FEED_THROUGH
    if times == 1:
        return IMAGE if abs(hz - image_frequency(before, lo, spot.output)) <= width_hz else ""
    if times == 2 and all(n % 2 == 0 for n in rest):
        return HALF_IF if abs(hz - 2.0 * half_if_frequency(before, lo, spot.output)) <= width_hz else ""
    return ""


def _explained(landed: list[tuple[Row, Spot, str]], setting: Setting) -> set[tuple[str, str]]:
    """The responses that a known source has which comes in by the input: no unknown one has to be supposed."""
    return {
        (response, spot.name)
        for row, spot, response in landed
        if all(
            source.enters for i, (n, source) in enumerate(zip(row, setting.sources, strict=True)) if n and i != spot.lo
        )
    }


def _outside(
    setting: Setting, heard: Sequence[Spot], known: set[tuple[str, str]]
) -> list[tuple[Row, Spot, str, SpurSource]]:
    """For each response that no source explains: an outside signal at the frequency that would.

    Each row has one number more than the setting has sources, that of the outside signal.
    """
    if not any(source.name == SIGNAL for source in setting.sources):
        return []
    found = []
    for spot in heard:
        for row, response in _response_rows(spot, setting):
            hz = _solved(row, spot, setting)
            if hz > 0 and (response, spot.name) not in known:
                found.append((row, spot, response, _signal_outside(hz)))
    return found


def _signal_outside(hz: float) -> SpurSource:
    return SpurSource(f"({show_frequency(round(hz, 1))} outside)", hz, enters=True, movable=False)


def _response_rows(spot: Spot, setting: Setting) -> list[tuple[Row, str]]:
    nothing = (0,) * len(setting.sources)
    if spot.lo < 0:
        return [((*nothing, 1), TRUE_SIGNAL)]
    before, lo = setting.spots[spot.before], setting.sources[spot.lo].at(setting.tuned_hz)
    image = image_frequency(before.frequency_hz, lo, spot.output)
    half = half_if_frequency(before.frequency_hz, lo, spot.output)
    ways = [(IMAGE, 1, image), (HALF_IF, 2, half)]
    rows = [(_through(before, spot.lo, times, _signs(times, hz, lo, spot)), name) for name, times, hz in ways]
    return [*rows, ((*nothing, 1), FEED_THROUGH)]


def _signs(times: int, hz: float, lo_hz: float, spot: Spot) -> tuple[int, int]:
    """The signs with which a mixer's input at `hz` and its oscillator, `times` each, come nearest to its output."""
    signs = ((1, -1), (-1, 1), (1, 1))
    return min(signs, key=lambda s: abs(times * (s[0] * hz + s[1] * lo_hz) - spot.frequency_hz))


def _through(before: Spot, lo: int, times: int, signs: tuple[int, int]) -> Row:
    """The row of a signal from the chain's input that reaches a mixer on the wanted way and meets it in this one."""
    ahead = [times * signs[0] * n for n in before.wanted]
    outside, ahead[0] = ahead[0], 0
    ahead[lo] += times * signs[1]
    return (*ahead, outside)


def _solved(row: Row, spot: Spot, setting: Setting) -> float:
    """The frequency of the outside signal that puts the row on the spot."""
    rest = float(np.array(row[:-1]) @ setting.frequencies_hz)
    return (spot.frequency_hz - rest) / row[-1]


def _candidate(row: Row, spot: Spot, response: str, setting: Setting) -> Candidate:
    hz = abs(float(np.array(row) @ setting.frequencies_hz))
    return Candidate(
        orders=row,
        order=sum(abs(n) for n in row),
        words=product_words(row, setting.sources, setting.tuned_hz),
        spot=spot,
        frequency_hz=hz,
        offset_hz=hz - spot.frequency_hz,
        foreign=sum(1 for n, source in zip(row, setting.sources, strict=True) if n and source.foreign),
        response=response,
    )


def rows_of(found: Sequence[Candidate]) -> Orders:
    """The candidates' orders as rows, [candidates, sources]."""
    return np.array([each.orders for each in found], dtype=np.int64)


def heard_row(candidate: Candidate, setting: Setting) -> Row:
    """The row by which a candidate arrives where the listener hears it: behind the last mixer, or where it was seen.

    A shift of an oscillator acts on all that is converted with it, also on what is on the signal frequency.
    """
    row = candidate.orders
    if setting.display:
        names = [spot.name for spot in setting.spots]
        for spot in setting.spots[names.index(candidate.spot.name) + 1 :]:
            row = behind_mixer(row, spot, setting)
    return row
