"""What a prediction is made for, and what it says."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from logbook.hardware import Chain, Stage
from logbook.model import Parts, standard_uncertainty
from logbook.physics.cascade import Stages

TOTAL_UNITS = {
    "gain": "dB",
    "nf": "dB",
    "noise_temperature": "K",
    "noise_floor": "dBm",
    "noise_density": "dBm/Hz",
    "output_noise": "dBm",
    "iip3": "dBm",
    "oip3": "dBm",
    "iip2": "dBm",
    "oip2": "dBm",
    "ip1db": "dBm",
    "op1db": "dBm",
    "sfdr": "dB",
    "sensitivity": "dBm",
    "headroom": "dB",
    "headroom_strongest": "dB",
    "snr_weakest": "dB",
    "setting": "dB",
    "range_left": "dB",
}


@dataclass(frozen=True, slots=True)
class Terms:
    """What a prediction is made for. None: the chain's own."""

    at_hz: float | None = None
    bandwidth_hz: float | None = None
    source_temperature_k: float | None = None

    def for_chain(self, chain: Chain) -> Terms:
        """The same terms with what is the chain's own left to it, so that one prediction serves for both."""
        at = self.at_hz if self.at_hz != chain.signal_hz and chain.minds_frequency else None
        own = chain.bandwidth_hz
        same_width = own is not None and own.u is None and own.value == self.bandwidth_hz
        return Terms(at, None if same_width else self.bandwidth_hz, self.source_temperature_k)


@dataclass(frozen=True, slots=True)
class Estimate:
    """A predicted number with its doubt by source; nan with the reason in `words` when it is not known."""

    value: float
    unit: str
    parts: Parts | None = None
    words: str = ""

    @property
    def u(self) -> float | None:
        """Standard uncertainty, None when not stated."""
        return standard_uncertainty(self.parts)


@dataclass(frozen=True, slots=True)
class Node:
    """The chain's state behind one stage; nan where not known."""

    stage: str
    frequency_hz: float
    stage_gain_db: float
    stage_nf_db: float
    gain_db: float
    nf_db: float
    noise_dbm: float
    level_dbm: float
    iip3_dbm: float
    iip2_dbm: float
    ip1db_dbm: float
    headroom_db: float
    noise_share: float
    iip3_share: float


class LazyTotals(Mapping[str, Estimate]):
    """Totals by name, each computed when it is first asked for: most predictions are made for one of them."""

    def __init__(self, makers: Mapping[str, Callable[[], Estimate]]) -> None:
        self._makers = makers
        self._found: dict[str, Estimate] = {}

    def __getitem__(self, name: str) -> Estimate:
        if name not in self._found:
            self._found[name] = self._makers[name]()
        return self._found[name]

    def __contains__(self, name: object) -> bool:
        return name in self._makers

    def __iter__(self) -> Iterator[str]:
        return iter(self._makers)

    def __len__(self) -> int:
        return len(self._makers)


@dataclass(frozen=True)
class Prediction:
    """All that one evaluation says of a chain; the state behind each stage is drawn up when it is asked for."""

    chain: Chain
    terms: Terms
    totals: Mapping[str, Estimate]
    source_share: float
    source_temperature_k: float
    held_at: str
    frequencies_hz: tuple[float, ...]
    make_nominal: Callable[[], Stages]
    make_nodes: Callable[[], tuple[Node, ...]]

    @cached_property
    def nominal(self) -> Stages:
        """What the cascade was computed from, [stages]."""
        return self.make_nominal()

    @cached_property
    def noise_unknown_from(self) -> str:
        """The first stage whose noise is not known; nothing where all is."""
        unknown = np.isnan(np.asarray(self.nominal.own_temperature_k))
        return self.chain.stages[int(np.argmax(unknown))].name if unknown.any() else ""

    @cached_property
    def nodes(self) -> tuple[Node, ...]:
        """The chain's state behind each stage."""
        return self.make_nodes()

    @cached_property
    def ideal(self) -> Mapping[str, tuple[str, ...]]:
        """The stages taken as ideal, by what they do not give."""
        return {name: tuple(s.name for s in self.chain.stages if not _gives(s, name)) for name in LIMITS}


LIMITS = ("iip3", "iip2", "ip1db")


def _gives(stage: Stage, name: str) -> bool:
    return name in stage.parameters or "o" + name.removeprefix("i") in stage.parameters
