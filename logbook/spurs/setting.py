"""What a spur can be made of, and where in a chain it is heard."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from logbook.hardware import Chain, Oscillator, Stage
from logbook.physics.constants import Array
from logbook.physics.mixing import Orders

SIGNAL = "signal"


@dataclass(frozen=True, slots=True)
class SpurSource:
    """Something that makes a frequency.

    `frequency_hz` is the one at a tuning of zero, to which `follows` times the tuning is added. `enters`: it comes in
    by the chain's input. `foreign`: it is not the chain's own. `harmonics`: how many of them count, None as the order.
    """

    name: str
    frequency_hz: float
    follows: float = 0.0
    tolerance_hz: float = 0.0
    enters: bool = False
    foreign: bool = True
    movable: bool = True
    harmonics: int | None = None
    note: str = ""

    def at(self, tuned_hz: float) -> float:
        """Its frequency at a tuning."""
        return self.frequency_hz + self.follows * tuned_hz


@dataclass(frozen=True, slots=True)
class Spot:
    """A frequency at which a product is heard: the signal frequency, or an IF behind a mixer.

    `wanted` is the row of orders by which the wanted signal arrives there; `follows` how far the spot moves with the
    tuning. Behind a mixer: f = lo_sign * f_lo + way * (frequency of the spot `before`), `lo` the oscillator's index.
    """

    name: str
    frequency_hz: float
    follows: float
    half_width_hz: float
    wanted: tuple[int, ...]
    before: int = -1
    lo: int = -1
    lo_sign: int = 0
    way: int = 1
    output: str = "difference"


@dataclass(frozen=True, slots=True)
class Setting:
    """Sources, where their products are heard, and the tuning. `display`: the spur was seen on the unit's own dial."""

    sources: tuple[SpurSource, ...]
    spots: tuple[Spot, ...]
    tuned_hz: float
    display: bool = True

    @property
    def frequencies_hz(self) -> Array:
        """Each source at the tuning, [sources]."""
        return np.array([source.at(self.tuned_hz) for source in self.sources])

    @property
    def follows(self) -> Array:
        """How far each source moves with the tuning, [sources]."""
        return np.array([source.follows for source in self.sources])

    @property
    def tolerances_hz(self) -> Array:
        """How far each source may be off, [sources]."""
        return np.array([source.tolerance_hz for source in self.sources])


def own_sources(chain: Chain | None) -> list[SpurSource]:
    """The signal that is fed in, and each oscillator of the chain once; nothing without a chain."""
    if chain is None:
        return []
    signal = SpurSource(SIGNAL, chain.signal_hz, enters=True, foreign=False)
    return [signal, *(_oscillator(each, name) for each, name in oscillators(chain).items())]


def _oscillator(oscillator: Oscillator, name: str) -> SpurSource:
    if oscillator.offset_hz is not None:
        return SpurSource(name, oscillator.offset_hz, 1.0, foreign=False)
    return SpurSource(name, oscillator.at(0.0), foreign=False)


def oscillators(chain: Chain) -> dict[Oscillator, str]:
    """Each oscillator with its name: `lo` where there is one, else with the mixer's name."""
    mixers = {stage.oscillator: stage.name for stage in reversed(chain.stages) if stage.oscillator is not None}
    found = {each: mixers[each] for each in (stage.oscillator for stage in chain.stages) if each is not None}
    return {each: "lo" if len(found) == 1 else f"lo of {name}" for each, name in found.items()}


def spots_of(
    chain: Chain, sources: Sequence[SpurSource], tuned_hz: float, tolerance_hz: float, bandwidth_hz: float | None = None
) -> list[Spot]:
    """The signal frequency and the IF behind each mixer, when the chain is tuned to `tuned_hz`.

    Each is as wide as `bandwidth_hz`, or as the narrowest stage from there on.
    """
    names = oscillators(chain)
    width = (bandwidth_hz or narrowest(chain, 0)) / 2.0 + tolerance_hz
    spots = [Spot(SIGNAL, tuned_hz, 1.0, width, _unit(0, len(sources)))]
    for index, stage in enumerate(chain.stages):
        if stage.oscillator is None:
            continue
        lo = next(i for i, source in enumerate(sources) if source.name == names[stage.oscillator])
        width = (bandwidth_hz or narrowest(chain, index)) / 2.0 + tolerance_hz
        spots.append(behind(spots[-1], len(spots) - 1, sources, lo, tuned_hz, stage.output, width, stage.name))
    return spots


def behind(
    before: Spot,
    index: int,
    sources: Sequence[SpurSource],
    lo: int,
    tuned_hz: float,
    output: str,
    half_width_hz: float,
    name: str,
) -> Spot:
    """The spot behind a mixer whose input is the spot `before`, number `index`."""
    lo_hz = sources[lo].at(tuned_hz)
    signs = (1, 1) if output == "sum" else (1, -1) if lo_hz >= before.frequency_hz else (-1, 1)
    lo_sign, way = signs
    row = way * np.array(before.wanted) + lo_sign * np.array(_unit(lo, len(sources)))
    follows = way * before.follows + lo_sign * sources[lo].follows
    frequency = way * before.frequency_hz + lo_sign * lo_hz
    wanted = tuple(int(n) for n in row)
    return Spot(name, frequency, follows, half_width_hz, wanted, index, lo, lo_sign, way, output)


def _unit(index: int, length: int) -> tuple[int, ...]:
    return tuple(int(i == index) for i in range(length))


def narrowest(chain: Chain, start: int) -> float:
    """The narrowest bandwidth from a stage on; the chain's noise bandwidth, then 0, where no stage gives one."""
    widths = [width for stage in chain.stages[start:] if (width := stage.value("bandwidth")) is not None]
    own = chain.bandwidth_hz.value if chain.bandwidth_hz is not None else 0.0
    return min(widths, default=own)


def at_stage(spots: Sequence[Spot], chain: Chain, stage: Stage) -> Spot:
    """The spot that stands behind a stage."""
    upto = chain.stage_names[: chain.stage_names.index(stage.name) + 1]
    return next(spot for spot in reversed(spots) if spot.name == SIGNAL or spot.name in upto)


def product_words(orders: Sequence[int] | Orders, sources: Sequence[SpurSource], tuned_hz: float) -> str:
    """A product as a person writes it: `2·lo − signal`, what is added first."""
    total = sum(int(n) * source.at(tuned_hz) for n, source in zip(orders, sources, strict=True))
    terms = [(int(n) if total >= 0 else -int(n), s.name) for n, s in zip(orders, sources, strict=True) if n]
    terms.sort(key=lambda term: term[0] < 0)
    words = [f"{'' if abs(n) == 1 else f'{abs(n)}·'}{name}" for n, name in terms]
    return words[0] + "".join(
        f" {'−' if n < 0 else '+'} {word}" for (n, _), word in zip(terms[1:], words[1:], strict=True)
    )
