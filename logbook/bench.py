"""A bench: the instruments and the path to them, each with the doubt that it brings into a reading."""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import date

from logbook.hardware import Parameter
from logbook.problems import Place


@dataclass(frozen=True, slots=True)
class PathPart:
    """A pad, tap or cable between unit and instrument. Loss in dB, `max_input_dbm` in dBm."""

    name: str
    loss: Parameter
    max_input_dbm: float | None
    place: Place


@dataclass(frozen=True, slots=True)
class Bench:
    """A bench as it is from `since` on. Accuracies are parameters of value 0 whose doubt counts; None: not stated."""

    name: str
    since: str
    place: Place
    accuracy: Parameter | None = None
    linearity_u: float | None = None
    floor_dbm_per_hz: float | None = None
    max_input_dbm: float | None = None
    noise_ratio: float = 1.0
    noise_ratio_stated: bool = False
    drive_accuracy: Parameter | None = None
    path: tuple[PathPart, ...] = ()
    calibrated: date | None = None
    due: date | None = None

    def part(self, name: str) -> PathPart | None:
        """The part of the path with this name."""
        return next((part for part in self.path if part.name == name), None)

    def behind_a_detector(self) -> Bench:
        """The bench with a detector in its instrument's place: its errors, noise and limits do not enter then."""
        return replace(self, accuracy=None, linearity_u=None, floor_dbm_per_hz=None, max_input_dbm=None)

    def overdue(self, on: date) -> bool:
        """Whether a reading on that day stands after the calibration's due date."""
        return self.due is not None and on > self.due
