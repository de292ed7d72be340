"""What an entry holds once it is read, and what a result is."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from datetime import date
from math import sqrt
from typing import Any, NamedTuple

from logbook.problems import Place
from logbook.quantities import Better
from logbook.quantity_display import key_frequency

BUILT, TRIAL, PLANNED = "built", "trial", "planned"
STATES = (BUILT, TRIAL, PLANNED)

MEASURED, PREDICTED, DERIVED = "measured", "predicted", "derived"


class Values(Mapping[str, Any]):
    """The values read from one YAML mapping, each with the place where it was written."""

    def __init__(self, data: dict[str, Any], places: dict[str, Place], place: Place) -> None:
        self._data = data
        self._places = places
        self.start = place

    def __getitem__(self, key: str) -> Any:
        return self._data[key]

    def __iter__(self) -> Iterator[str]:
        return iter(self._data)

    def __len__(self) -> int:
        return len(self._data)

    def place(self, key: str, item: int | None = None) -> Place:
        """Where the value of a key, or an item of its list, stands; the start of the mapping when the key is not there.

        A single value that stands in place of a list is its own first item.
        """
        whole = self._places.get(key, self.start)
        return whole if item is None else self._places.get(f"{key}.{item}", whole)


@dataclass(frozen=True, slots=True)
class Block:
    """A block as read: `items` holds its mapping, or several where the kind takes a list. Broken: no items."""

    entry: str
    kind: str
    number: int
    line: int
    last_line: int
    text: str
    items: tuple[Values, ...] = ()

    @property
    def place(self) -> Place:
        """The opening fence."""
        return Place(self.entry, self.line)

    @property
    def id(self) -> str:
        """The id of the block's place on its page."""
        return f"lb-{self.kind}-{self.number}"


@dataclass(frozen=True, slots=True)
class Entry:
    """One dated file. `revision` is as written, or None; `speaks_of` is the revision it turns out to be about."""

    path: str
    title: str
    date: date
    revision: str | None
    comes_from: str | None
    state: str
    places: Mapping[str, Place]
    blocks: tuple[Block, ...] = ()
    speaks_of: str | None = None


@dataclass(frozen=True, slots=True)
class Conditions:
    """What a number holds under. None: not stated."""

    bench: str | None = None
    bench_from: str | None = None
    rbw_hz: float | None = None
    vbw_hz: float | None = None
    averaging: str | None = None
    through: tuple[str, ...] = ()
    shown_at: str | None = None
    drive_dbm: float | None = None
    temperature_c: float | None = None
    source_temperature_k: float | None = None


class Source(NamedTuple):
    """Where a part of a doubt comes from. Two numbers with a part from an equal source share that error.

    `sort` is stage, chain, bench or fresh; `owner` the chain, the bench, or the entry and line of a fresh reading;
    `name` the stage or the part of the bench; `what` the parameter; `since` the revision or date it holds from.
    """

    sort: str
    owner: str
    name: str
    what: str
    since: str = ""

    @property
    def words(self) -> str:
        """The source as a person would name it."""
        named = f"{self.name} {self.what.replace('_', ' ')}".strip()
        if self.sort == "bench":
            return f"{named}, {self.owner} bench" + (f" as of {self.since}" if self.since else "")
        if self.sort == "fresh":
            return f"{named}, this reading ({self.owner})"
        return f"{named} ({self.owner})"


# A number's doubt by origin: source -> signed standard contribution, in the number's own unit.
Parts = Mapping[Source, float]


def standard_uncertainty(parts: Parts | None) -> float | None:
    """u of a number from its independent parts: the root of the sum of their squares; None when not stated."""
    if not parts:
        return None
    return sqrt(sum(part * part for part in parts.values()))


@dataclass(frozen=True, slots=True)
class Result:
    """One number with its unit, doubt, conditions and origin.

    `value` is on equal terms and in base or dB units, nan when not known; `words` then says why. `shown` is what was
    read (`read_as` how, where it was no level) and `corrections` lead from it to `value`, in order. `bound` is "upper"
    or "lower" when only such a bound is known.
    """

    quantity: str
    chain: str
    at_hz: float | None
    name: str
    revision: str
    entry: str
    line: int
    block: str
    basis: str
    value: float
    unit: str
    better: Better
    parts: Parts | None = None
    conditions: Conditions = Conditions()
    shown: float | None = None
    corrections: tuple[tuple[str, float], ...] = ()
    bound: str = ""
    words: str = ""
    notes: tuple[str, ...] = ()
    read_as: str = ""
    repeats: tuple[float, ...] = field(default=())
    noise_ratio: float = 1.0

    @property
    def u(self) -> float | None:
        """Standard uncertainty, None when not stated."""
        return standard_uncertainty(self.parts)

    @property
    def key(self) -> str:
        """`chain/quantity@frequency#name`."""
        return result_key(self.chain, self.quantity, self.at_hz, self.name)


def result_key(chain: str, quantity: str, at_hz: float | None = None, name: str = "") -> str:
    """The key under which results are compared: `rx/noise_floor@50.1MHz#name`."""
    at = "" if at_hz is None else "@" + key_frequency(at_hz)
    return f"{chain}/{quantity}{at}{'#' + name if name else ''}"
