"""The quantities known by name: unit, which direction is better, what change matters, which bench errors enter."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Literal

Better = Literal["higher", "lower", "neither", "towards zero"]
Side = Literal["shown", "gain", "drive", "relative", "none"]

BETTER: tuple[Better, ...] = ("higher", "lower", "neither", "towards zero")


@dataclass(frozen=True, slots=True)
class KnownQuantity:
    """A quantity of the trade.

    `matters` is the smallest change that matters: in dB for dimensions in decibels, else a part of the value.
    `side` says which errors of a bench enter a value: `shown` is read off the instrument behind the path, `gain`
    compares what is read with what is driven, `drive` is known by the driving level alone, `relative` is
    a ratio of two readings of one instrument, `none` owes nothing to the bench.
    """

    name: str
    dimension: str
    better: Better
    matters: float
    side: Side = "none"
    noise: bool = False


# name, dimension, better, smallest change that matters, side, whether it is noise
_ROWS: tuple[tuple[str, str, Better, float, Side, bool], ...] = (
    ("gain", "ratio", "neither", 0.2, "gain", False),
    ("nf", "ratio", "lower", 0.1, "none", False),
    ("noise_temperature", "noise_temperature", "lower", 0.02, "none", False),
    ("noise_floor", "level", "lower", 0.2, "shown", True),
    ("output_noise", "level", "lower", 0.2, "shown", True),
    ("noise_density", "density", "lower", 0.2, "shown", True),
    ("iip3", "level", "higher", 0.5, "drive", False),
    ("oip3", "level", "higher", 0.5, "shown", False),
    ("iip2", "level", "higher", 0.5, "drive", False),
    ("oip2", "level", "higher", 0.5, "shown", False),
    ("ip1db", "level", "higher", 0.5, "drive", False),
    ("op1db", "level", "higher", 0.5, "shown", False),
    ("sfdr", "ratio", "higher", 0.5, "relative", False),
    ("sensitivity", "level", "lower", 0.2, "drive", False),
    ("range_left", "ratio", "higher", 0.2, "none", False),
    ("setting", "ratio", "neither", 0.2, "none", False),
    ("headroom", "ratio", "higher", 0.5, "none", False),
    ("headroom_strongest", "ratio", "higher", 0.5, "none", False),
    ("snr_weakest", "ratio", "higher", 0.5, "none", False),
    ("slope", "slope", "neither", 0.01, "none", False),
    ("intercept", "level", "neither", 0.5, "drive", False),
    ("conformance_error", "ratio", "lower", 0.1, "none", False),
    ("step_error", "ratio", "lower", 0.1, "none", False),
    ("log_range", "ratio", "higher", 0.5, "none", False),
    ("frequency", "frequency", "neither", 1e-6, "none", False),
    ("centre", "frequency", "neither", 1e-4, "none", False),
    ("noise_ahead", "level", "lower", 0.2, "shown", True),
    ("noise_after", "level", "lower", 0.2, "shown", True),
    ("equal_setting", "ratio", "neither", 0.5, "none", False),
    ("margin", "ratio", "higher", 0.5, "relative", False),
    ("junction_margin", "temperature_difference", "higher", 0.02, "none", False),
    ("image_rejection", "ratio", "higher", 0.5, "relative", False),
    ("if_rejection", "ratio", "higher", 0.5, "relative", False),
    ("spur_level", "level", "lower", 0.5, "shown", False),
    ("harmonic", "relative", "lower", 0.5, "relative", False),
    ("spurious", "relative", "lower", 0.5, "relative", False),
    ("phase_noise", "relative_density", "lower", 0.5, "relative", False),
    ("output_level", "level", "neither", 0.2, "shown", False),
    ("insertion_loss", "ratio", "lower", 0.1, "relative", False),
    ("return_loss", "ratio", "higher", 0.5, "relative", False),
    ("bandwidth", "frequency", "neither", 0.01, "none", False),
    ("shape_factor", "number", "lower", 0.01, "none", False),
    ("skirt_balance", "frequency", "towards zero", 0.05, "none", False),
    ("ripple", "ratio", "lower", 0.1, "relative", False),
    ("flatness", "ratio", "lower", 0.1, "relative", False),
    ("supply_current", "current", "lower", 0.01, "none", False),
    ("supply_noise", "voltage", "lower", 0.02, "none", False),
    ("temperature", "temperature", "lower", 0.01, "none", False),
    ("junction", "temperature", "lower", 0.01, "none", False),
    ("frequency_error", "frequency", "towards zero", 0.01, "none", False),
    ("rejection", "ratio", "higher", 0.5, "relative", False),
)

KNOWN = {row[0]: KnownQuantity(*row) for row in _ROWS}

# A level or a pair of levels may be carried in the name: bandwidth_3db, shape_factor_60_3, skirt_balance_20db.
_LEVELS = re.compile(r"_\d+(?:\.\d+)?(?:db|_\d+(?:\.\d+)?)$")


# What people write for a quantity that has another name here.
SPOKEN = {
    "noise figure": "nf",
    "noise_figure": "nf",
    "conversion_gain": "gain",
    "conversion gain": "gain",
    "ip3": "iip3",
    "p1db": "op1db",
    "loss": "insertion_loss",
    "noise": "noise_floor",
    "power": "output_level",
    "output_power": "output_level",
    "current": "supply_current",
}


def known_quantity(name: str) -> KnownQuantity | None:
    """The quantity of this name, whatever level the name carries; None for a name of the user's own."""
    return KNOWN.get(name) or KNOWN.get(_LEVELS.sub("", name))


DECIBELS = frozenset({"dB", "dBm", "dBc", "dBm/Hz", "dBc/Hz", "dBuV"})


def smallest_change(quantity: str, unit: str, before: float, set_by_user: dict[str, float] | None = None) -> float:
    """The smallest change of a quantity that matters, in its own unit.

    Decibel units: as the table says (0.5 dB for names of the user's own). Others: a part of the value before (1 %).
    """
    known = known_quantity(quantity)
    own = (set_by_user or {}).get(known.name if known else quantity, (set_by_user or {}).get(quantity))
    if unit in DECIBELS:
        return own if own is not None else (known.matters if known else 0.5)
    part = own if own is not None else (known.matters if known else 0.01)
    return abs(before) * part
