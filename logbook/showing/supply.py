"""Supply noise as pieces: every line, and what arrives at a stage against the noise that is there anyway."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import isfinite, isnan

from logbook.kind import Outcome, View
from logbook.model import Block, Result, Values
from logbook.physics.supply import after_rejection
from logbook.pieces import Line, Note, Piece, Table, Text
from logbook.quantity import Quantity
from logbook.quantity_display import show_frequency, show_value
from logbook.showing.cautions import VOLTAGE
from logbook.showing.readings import show_results
from logbook.showing.words import plain


@dataclass(frozen=True, slots=True)
class LineNoise:
    """One line: density (V/rtHz) and rms (V) in its band (Hz), relative doubt, PSRR (dB, u) where given."""

    name: str
    written: str
    density: float
    rms_v: float
    band_hz: tuple[float, float]
    relative_u: float | None
    psrr: tuple[float, float | None] | None
    values: Values
    results: tuple[Result, ...]

    @property
    def u_density(self) -> float | None:
        """Standard uncertainty of the density, V/rtHz."""
        return None if self.relative_u is None else self.density * self.relative_u

    def with_results(self, results: tuple[Result, ...]) -> LineNoise:
        """The same line with its results."""
        return replace(self, results=results)


@dataclass(frozen=True, slots=True)
class Arrival:
    """What arrives at a stage's output (dBm in the bandwidth) against the noise there, and the rise (dB)."""

    stage: str
    frequency_hz: float
    bandwidth_hz: float
    level_dbm: float
    noise_dbm: float
    rise_db: float
    results: tuple[Result, ...]


@dataclass(frozen=True, slots=True)
class Supply:
    """All lines of one mapping, and their sum at a stage where one is named; `silent` says why there is none."""

    name: str
    lines: tuple[LineNoise, ...]
    arrival: Arrival | None
    results: tuple[Result, ...]
    silent: str


def show_supply(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The lines, their sum, and the results."""
    pieces: list[Piece] = []
    for supply in outcome.data or ():
        if isinstance(supply, Supply):
            pieces.append(_table(supply))
            pieces += _arrival(supply)
    if any(abs(o.value) >= 50 for supply in outcome.data or () for o in _outputs(supply)):
        pieces.insert(0, Note(VOLTAGE, "caution"))
    return pieces + show_results(block, outcome, view)


def _outputs(supply: Supply) -> list[Quantity]:
    return [line.values["output"] for line in supply.lines if "output" in line.values]


def _table(supply: Supply) -> Table:
    rows: list[tuple[Line, ...]] = []
    for line in supply.lines:
        band = "" if isnan(line.rms_v) else " to ".join(show_frequency(f) for f in line.band_hz)
        psrr = "" if line.psrr is None else show_value(line.psrr[0], "dB", line.psrr[1])
        left = "" if line.psrr is None else show_value(float(after_rejection(line.density, line.psrr[0])), "V/rtHz")
        rows.append(
            (line.name, line.written, band, plain(line.rms_v, "V"), show_value(line.density, "V/rtHz"), psrr, left)
        )
    head = ("line", "as given", "band", "rms in the band", "density", "PSRR of the load", "left at its output")
    return Table(head, tuple(rows), "Supply lines", frozenset({1, 3, 4, 5, 6}))


def _arrival(supply: Supply) -> list[Piece]:
    found = supply.arrival
    if found is None:
        return [Text(f"{supply.silent[0].upper()}{supply.silent[1:]}.")] if supply.silent else []
    width, where = show_frequency(found.bandwidth_hz), show_frequency(found.frequency_hz)
    words = f"At {found.stage}, in {width}, {show_value(found.level_dbm, 'dBm')} of supply noise arrive"
    if isnan(found.noise_dbm):
        return [Text(f"{words}; the chain's own noise there is not known.")]
    there = show_value(found.noise_dbm, "dBm")
    words += f" beside {there} of the chain's own: the noise rises by {found.rise_db:.2f} dB."
    pieces: list[Piece] = [Text(words)]
    pieces += _outside(supply, found, where)
    if isfinite(found.rise_db) and found.rise_db >= 1:
        advice = "The supply sets a good part of the noise here: filter the line, or a quieter regulator."
        pieces.append(Note(advice, "caution"))
    return pieces


def _within(frequency_hz: float, band_hz: tuple[float, float]) -> bool:
    return band_hz[0] <= frequency_hz <= band_hz[1]


def _outside(supply: Supply, found: Arrival, where: str) -> list[Piece]:
    """A word where noise given for a band is carried on to a frequency outside of it."""
    beyond = [
        line.name
        for line in supply.lines
        if line.psrr is not None and isfinite(line.rms_v) and not _within(found.frequency_hz, line.band_hz)
    ]
    if not beyond:
        return []
    words = (
        f"The signal there is at {where}, outside the band for which the noise of {', '.join(beyond)} is given; it is "
        "taken as white up to there, with the same rejection. Take it as a guess, not as a measurement."
    )
    return [Note(words, "caution")]
