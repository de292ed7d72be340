"""Which products fall into an IF over a tuning range, and which choice of IF and oscillator has the fewest of them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from logbook.physics.mixing import Band, Orders, crossing_ranges, half_if_frequency, image_frequency, product_order
from logbook.quantity_display import key_frequency, show_frequency
from logbook.spurs.candidates import Row, ahead_of_mixer, all_products, behind_mixer, one_sign, response_of
from logbook.spurs.setting import SIGNAL, Setting, Spot, SpurSource, behind, product_words

LO = "lo"
_SIGNAL = SpurSource(SIGNAL, 0.0, 1.0, enters=True, foreign=False)
HIGH, LOW = "high", "low"


@dataclass(frozen=True, slots=True)
class Asked:
    """What is to be planned: the tuning range, the bandwidth, up to which order, and the foreign sources."""

    tune: Band
    bandwidth_hz: float
    order: int
    sources: tuple[SpurSource, ...]


@dataclass(frozen=True, slots=True)
class Crossing:
    """A product that falls into the IF, or onto the signal frequency, from one tuning to another (Hz)."""

    words: str
    order: int
    low_hz: float
    high_hz: float
    spot: str
    response: str = ""

    @property
    def middle_hz(self) -> float:
        """The middle of its stretch."""
        return 0.5 * (self.low_hz + self.high_hz)


@dataclass(frozen=True, slots=True)
class Choice:
    """An IF with its oscillator above or below the signal; `why` says what makes it unusable, else nothing."""

    if_hz: float
    side: str
    lo: Band
    image: Band
    half_if: Band
    crossings: tuple[Crossing, ...] = ()
    affected: float = 0.0
    why: str = ""

    @property
    def name(self) -> str:
        """The choice in a few words."""
        return f"{show_frequency(self.if_hz)}, oscillator {'above' if self.side == HIGH else 'below'}"

    @property
    def key(self) -> str:
        """The choice in the key of a result: `10.7MHz-above`."""
        return f"{key_frequency(self.if_hz)}-{'above' if self.side == HIGH else 'below'}"

    def counts(self, order: int) -> tuple[int, ...]:
        """How many crossings there are of each order, from the first."""
        by = Counter(crossing.order for crossing in self.crossings)
        return tuple(by[each] for each in range(1, order + 1))


def ranked_choices(asked: Asked, ifs: Sequence[float], sides: Sequence[str]) -> list[Choice]:
    """Every choice, the one with the fewest crossings of low order first; then by the part of the range affected."""
    found = [_choice(asked, if_hz, side) for if_hz in ifs for side in sides]
    most = max([asked.order, *(crossing.order for each in found for crossing in each.crossings)])
    return sorted(found, key=lambda each: (bool(each.why), each.counts(most), each.affected))


def common_crossings(asked: Asked) -> list[Crossing]:
    """What the foreign sources put onto the signal frequency by themselves, whatever IF and oscillator are taken."""
    spot = _signal_spot(asked, len(asked.sources) + 1)
    setting = Setting((_SIGNAL, *asked.sources), (spot,), asked.tune[0])
    rows = all_products(setting.sources, asked.order, [])
    return sorted(_crossings(rows[rows[:, 0] == 0], spot, setting, asked), key=_rank)


def _rank(crossing: Crossing) -> tuple[int, float, str]:
    return crossing.order, crossing.low_hz, crossing.words


def _choice(asked: Asked, if_hz: float, side: str) -> Choice:
    low, high = asked.tune
    reach = asked.bandwidth_hz / 2.0
    lo = _oscillator(if_hz, side, high)
    band = _band(lo.at(low), lo.at(high))
    output = "sum" if lo.follows < 0 else "difference"
    image = _band(*(image_frequency(each, lo.at(each), output) for each in asked.tune))
    half = _band(*(half_if_frequency(each, lo.at(each), output) for each in asked.tune))
    if low - reach <= if_hz <= high + reach:
        return Choice(if_hz, side, band, image, half, why="the IF lies inside the tuning range")
    setting = _setting(asked, lo, output, low)
    rows = all_products(setting.sources, asked.order, [1])
    own, mixed = setting.spots
    # Of what falls onto the signal frequency only what the oscillator has a part in depends on the choice.
    onto_signal = rows[(rows[:, 0] == 0) & (rows[:, 1] != 0)]
    found = _crossings(onto_signal, own, setting, asked) + _crossings(rows, mixed, setting, asked)
    found.sort(key=_rank)
    return Choice(if_hz, side, band, image, half, tuple(found), _covered(found) / max(high - low, 1e-9))


def _oscillator(if_hz: float, side: str, highest_hz: float) -> SpurSource:
    """The oscillator that follows the tuning; below an IF that lies above the signal it runs the other way."""
    if side == HIGH:
        return SpurSource(LO, if_hz, 1.0, foreign=False)
    if if_hz > highest_hz:
        return SpurSource(LO, if_hz, -1.0, foreign=False)
    return SpurSource(LO, -if_hz, 1.0, foreign=False)


def _setting(asked: Asked, lo: SpurSource, output: str, tuned_hz: float) -> Setting:
    sources = (_SIGNAL, lo, *asked.sources)
    own = _signal_spot(asked, len(sources))
    mixed = behind(own, 0, sources, 1, tuned_hz, output, own.half_width_hz, "IF")
    return Setting(sources, (own, mixed), tuned_hz)


def _signal_spot(asked: Asked, length: int) -> Spot:
    wanted = tuple(int(i == 0) for i in range(length))
    return Spot(SIGNAL, asked.tune[0], 1.0, asked.bandwidth_hz / 2.0, wanted)


def _crossings(rows: Orders, spot: Spot, setting: Setting, asked: Asked) -> list[Crossing]:
    """Where the products fall onto a spot."""
    at_zero = rows @ np.array([source.frequency_hz for source in setting.sources])
    half = spot.half_width_hz + np.abs(rows) @ setting.tolerances_hz
    start = spot.frequency_hz - spot.follows * setting.tuned_hz
    ranges = crossing_ranges(at_zero, rows @ setting.follows, start, spot.follows, half, asked.tune)
    found = []
    for index, low, high in zip(ranges.product.tolist(), ranges.low_hz.tolist(), ranges.high_hz.tolist(), strict=True):
        row: Row = tuple(int(n) for n in rows[index])
        there = _tuned(setting, 0.5 * (low + high))
        if one_sign(row) == one_sign(spot.wanted) or _told_elsewhere(row, spot, there):
            continue
        response = response_of(row, there.spots[-1], there, float(half[index])) if spot.name != SIGNAL else ""
        words = product_words(row, setting.sources, there.tuned_hz)
        found.append(Crossing(words, int(product_order(rows[index])), low, high, spot.name, response))
    return found


def _tuned(setting: Setting, tuned_hz: float) -> Setting:
    """The same setting at another tuning."""
    own, *mixed = setting.spots
    here = replace(own, frequency_hz=tuned_hz)
    there = [
        behind(here, 0, setting.sources, each.lo, tuned_hz, each.output, each.half_width_hz, each.name)
        for each in mixed
    ]
    return Setting(setting.sources, (here, *there), tuned_hz)


def _told_elsewhere(row: Row, spot: Spot, there: Setting) -> bool:
    """Whether the same product, ahead of the mixer or behind it, has a shorter row, by which it is counted."""
    mixer = there.spots[-1]
    if mixer.lo < 0:
        return False
    if spot.name == SIGNAL:
        other = behind_mixer(row, mixer, there)
    elif row[0] == 0:
        other = ahead_of_mixer(row, mixer, there)
    else:
        return False
    return any(other) and sum(map(abs, other)) < sum(map(abs, row))


def _band(one: float, other: float) -> Band:
    return min(one, other), max(one, other)


def _covered(crossings: Sequence[Crossing]) -> float:
    """The length of tuning that any crossing takes (Hz)."""
    total, reached = 0.0, -np.inf
    for each in sorted(crossings, key=lambda c: c.low_hz):
        total += max(0.0, each.high_hz - max(each.low_hz, reached))
        reached = max(reached, each.high_hz)
    return float(total)
