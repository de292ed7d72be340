"""What a prediction is made for, and what it says."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from logbook.hardware import Chain
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
        at = None if self.at_hz == chain.signal_hz else self.at_hz
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


@dataclass(frozen=True, slots=True)
class Prediction:
    """All that one evaluation says of a chain."""

    chain: Chain
    terms: Terms
    nodes: tuple[Node, ...]
    totals: Mapping[str, Estimate]
    source_share: float
    source_temperature_k: float
    ideal: Mapping[str, tuple[str, ...]]
    noise_unknown_from: str = ""
    held_at: str = ""
    frequencies_hz: tuple[float, ...] = field(default=())
    nominal: Stages | None = None
