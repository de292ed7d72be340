"""Numbers to places on the sheet."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from logbook.pieces import Axis, Chart, Limit, Series

Floats = NDArray[np.float64]

# How much of an axis stays empty at each end.
_MARGIN = 0.06
_LARGEST = 1e150


@dataclass(frozen=True, slots=True)
class Scale:
    """From `low` to `high` on the axis, from `start` to `stop` on the sheet."""

    low: float
    high: float
    start: float
    stop: float
    log: bool = False

    def place(self, values: ArrayLike) -> Floats:
        """Where values stand; nan where a value cannot."""
        numbers = as_numbers(values)
        low, high = self.low, self.high
        if self.log:
            with np.errstate(divide="ignore", invalid="ignore"):
                numbers = as_numbers(np.log10(numbers))
            low, high = np.log10(low), np.log10(high)
        return self.start + (numbers - low) / (high - low) * (self.stop - self.start)

    def at(self, value: float) -> float:
        """Where one value stands."""
        return float(self.place([value])[0])


def as_numbers(values: ArrayLike) -> Floats:
    """Values as floats; what is infinite, or so large that a span of it were, becomes nan: none has a place."""
    numbers = np.array(values, dtype=float, ndmin=1)
    numbers[~(np.abs(numbers) < _LARGEST)] = np.nan
    return numbers


def same_length(series: Series) -> tuple[Floats, Floats, Floats]:
    """x, y and error bars of a series; where one is shorter the rest has no place."""
    x, y = as_numbers(series.x), as_numbers(series.y)
    length = min(len(x), len(y))
    error = np.full(length, np.nan)
    given = as_numbers(series.error)[:length] if len(series.error) else error
    error[: len(given)] = given
    return x[:length], y[:length], error


def x_scale(axis: Axis, charts: Sequence[Chart], start: float, stop: float) -> Scale:
    """The x axis of charts that share it."""
    if axis.scale == "category":
        return Scale(-0.5, max(len(axis.ticks), 1) - 0.5, start, stop)
    values = [same_length(series)[0] for chart in charts for series in chart.series if _drawn(series)]
    values += [as_numbers([mark.x]) for chart in charts for mark in chart.marks]
    low, high = _extent(values, axis.scale == "log")
    return Scale(low, high, start, stop, axis.scale == "log")


def y_scale(chart: Chart, start: float, stop: float) -> Scale:
    """The y axis of a chart: all that is drawn and its limits, with a little room."""
    log = chart.y.scale == "log"
    values: list[Floats] = []
    for series in chart.series:
        _, y, error = same_length(series)
        reach = np.nan_to_num(error)
        values += [y - reach, y + reach]
    values += [as_numbers([mark.y]) for mark in chart.marks]
    values += [as_numbers(list(limit_values(chart.limits)))]
    low, high = _extent(values, log)
    if log:
        room = (high / low) ** _MARGIN
        return Scale(low / room, high * room, start, stop, True)
    room = (high - low) * _MARGIN
    return Scale(low - room, high + room, start, stop)


def limit_values(limits: Iterable[Limit]) -> Iterable[float]:
    """Every limit's numbers."""
    return (value for limit in limits for value in (limit.low, limit.high) if value is not None)


def drawable(chart: Chart) -> bool:
    """Whether any point of the chart has a place."""
    return any(_drawn(series) for series in chart.series)


def _drawn(series: Series) -> bool:
    x, y, _ = same_length(series)
    return bool(np.isfinite(x + y).any())


def _extent(values: Iterable[Floats], log: bool) -> tuple[float, float]:
    numbers = np.concatenate([np.empty(0), *values])
    numbers = numbers[np.isfinite(numbers) & ((numbers > 0) | (not log))]
    if not len(numbers):
        return (1.0, 10.0) if log else (0.0, 1.0)
    low, high = float(numbers.min()), float(numbers.max())
    if log:
        return (low, high) if high > low * 1.001 else (low / 2, high * 2)
    if high - low > 1e-9 * max(abs(low), abs(high)):
        return low, high
    room = 0.05 * abs(low) if abs(low) > 1e-300 else 1.0
    return low - room, high + room
