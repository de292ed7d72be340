"""A detector or display as calibrated by a staircase: what a voltage, or divisions, read at it mean."""

from __future__ import annotations

from dataclasses import dataclass

from logbook.hardware import Parameter
from logbook.model import Source
from logbook.physics.constants import Array
from logbook.physics.detector import DetectorFit, level_from_output, line_parts
from logbook.quantity import Quantity
from logbook.quantity_display import show_value


@dataclass(frozen=True, slots=True, eq=False)
class Steps:
    """What was put in (dBm, (N,)) and what came out (V or divisions, (N,)), with the outputs' stated doubt."""

    input_dbm: Array
    output: Array
    unit: str
    dimension: str
    u_output: float | None


@dataclass(frozen=True, slots=True, eq=False)
class Calibration:
    """A detector's line as of `since`, by the staircase at `written` (entry and line).

    Levels are in dBm, outputs in V or divisions.

    `drive` is the accuracy of the source that stepped it, common to all that is read through it. `lowest` and
    `highest` are the levels between which it was stepped, `window_dbm` those between which the line was fitted.
    """

    name: str
    since: str
    written: str
    fit: DetectorFit
    unit: str
    dimension: str
    drive: Parameter | None
    lowest_dbm: float
    highest_dbm: float
    steps: Steps
    window_dbm: tuple[float, float]

    def level(self, output: Quantity, departure: Source) -> tuple[float, dict[Source, float], tuple[str, ...]]:
        """The level of an output in dBm, its doubt by source (dB) without that of the output, and notes."""
        read = level_from_output(self.fit, output.value)
        height, slope = line_parts(self.fit, output.value)
        parts = {self._line("height"): height, self._line("slope"): slope, departure: read.u_scatter_db}
        if self.drive is not None and self.drive.u:
            parts[self.drive.source] = self.drive.u
        notes: tuple[str, ...] = ()
        if not self.lowest_dbm <= read.level_dbm <= self.highest_dbm:
            span = f"{show_value(self.lowest_dbm, 'dBm')} to {show_value(self.highest_dbm, 'dBm')}"
            notes = (f"outside the range in which detector {self.name} was stepped ({span})",)
        return read.level_dbm, {source: part for source, part in parts.items() if part}, notes

    def _line(self, what: str) -> Source:
        """Another staircase of the same detector, be it on the same day, is another line with errors of its own."""
        return Source("bench", self.name, "detector line's", what, f"{self.since} ({self.written})")
