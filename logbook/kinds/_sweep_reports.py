"""What a sweep is asked for, computed: each report gives numbers with their doubt, and marks for the picture."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from math import isnan, nan

import numpy as np

from logbook.physics.constants import Array
from logbook.physics.curves import (
    Edges,
    arithmetic_centre,
    bandwidth,
    edges_below_peak,
    find_peak,
    flatness,
    geometric_centre,
    passband_ripple,
    shape_factor,
    skirt_balance,
    value_at,
)
from logbook.physics.spectrum import band_density, band_power, spot_density
from logbook.quantity_display import show_frequency
from logbook.sweep import Found, Request


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """A curve on equal terms, x in Hz and y in dB or dBm, (N,).

    `u_db` is the fresh doubt of each point (None: not stated); `calibrated` whether 0 dB means no loss.
    """

    x: Array
    y: Array
    unit: str
    u_db: float | None = None
    calibrated: bool = True
    noise_bandwidth_hz: float = nan

    def edges(self, below_db: float) -> Edges:
        """The edges of the pass-band so far below the peak, Hz."""
        found = edges_below_peak(self.x, self.y, np.array([below_db]))
        return Edges(found.lower[0], found.upper[0])

    def spread(self, compute: Callable[[float], float], below_db: float) -> float | None:
        """u of what depends on a level below the peak, by moving that level by the doubt of the ratio of two points."""
        if self.u_db is None:
            return None
        step = self.u_db * 2**0.5
        low, high = compute(max(below_db - step, 1e-6)), compute(below_db + step)
        # At the edge of what was swept only one side is known; it stands for both.
        here = compute(below_db)
        sides = [abs(each - here) for each in (low, high) if not isnan(each)]
        return sum(sides) / len(sides) if sides else None

    @property
    def u_ratio(self) -> float | None:
        """u of the difference of two points, dB."""
        return None if self.u_db is None else self.u_db * 2**0.5


Report = Callable[[Curve, tuple[float, ...]], Iterable[Found]]

_AT_EDGE = "the highest point is the sweep's end; there may be more beyond"
_SHORT = "the sweep does not reach so far down on both sides"


def _level(db: float) -> str:
    return f"{db:g}db"


def peak(curve: Curve, _: tuple[float, ...]) -> Iterable[Found]:
    """Frequency of the peak, by the parabola through its three highest points."""
    top = find_peak(curve.x, curve.y)
    words = _AT_EDGE if top.at_edge else ""
    mark = ((top.x, top.y, f"peak {show_frequency(float(f'{top.x:.7g}'))}"),)
    yield Found("peak_frequency", nan if top.at_edge else top.x, "Hz", words=words, better="neither", marks=mark)


def insertion_loss(curve: Curve, _: tuple[float, ...]) -> Iterable[Found]:
    """The loss at the peak."""
    top = find_peak(curve.x, curve.y)
    words = _AT_EDGE if top.at_edge else ""
    if not curve.calibrated:
        words = "levels without a reference sweep say nothing of the loss"
    # The sign of a zero would show.
    yield Found("insertion_loss", nan if words else 0.0 - top.y, "dB", curve.u_ratio, words=words)


def centre(curve: Curve, levels: tuple[float, ...]) -> Iterable[Found]:
    """Arithmetic and geometric centre of the band at a level, -3 dB unless asked for another."""
    for below in levels or (3.0,):
        edges = curve.edges(below)
        suffix = "" if below == 3.0 and len(levels) < 2 else f"_{_level(below)}"
        for name, function in (("centre", arithmetic_centre), ("centre_geometric", geometric_centre)):
            value = float(function(edges))
            u = curve.spread(lambda at, f=function: float(f(curve.edges(at))), below)  # type: ignore[misc]
            yield Found(name + suffix, value, "Hz", u, words=_SHORT if isnan(value) else "", better="neither")


def widths(curve: Curve, levels: tuple[float, ...]) -> Iterable[Found]:
    """Bandwidth at each level below the peak."""
    for below in levels or (3.0, 6.0, 60.0):
        value = float(bandwidth(curve.edges(below)))
        if isnan(value) and not levels:
            continue
        u = curve.spread(lambda at: float(bandwidth(curve.edges(at))), below)
        marks = tuple(
            (float(edge), find_peak(curve.x, curve.y).y - below, "" if side else f"-{below:g} dB")
            for side, edge in enumerate(curve.edges(below))
            if not isnan(edge)
        )
        words = _SHORT if isnan(value) else ""
        yield Found(f"bandwidth_{_level(below)}", value, "Hz", u, words=words, better="neither", marks=marks)


def shape(curve: Curve, levels: tuple[float, ...]) -> Iterable[Found]:
    """Bandwidth at the lower level over that at the upper."""
    wide, narrow = (max(levels), min(levels)) if len(levels) == 2 else (60.0, 3.0)

    def factor(below: float) -> float:
        return float(shape_factor(float(bandwidth(curve.edges(below))), float(bandwidth(curve.edges(narrow)))))

    value = factor(wide)
    if isnan(value) and not levels:
        return
    words = _SHORT if isnan(value) else ""
    yield Found(f"shape_factor_{wide:g}_{narrow:g}", value, "1", curve.spread(factor, wide), words=words)


def ripple(curve: Curve, levels: tuple[float, ...]) -> Iterable[Found]:
    """Highest less lowest between the outermost maxima of the pass-band."""
    value = passband_ripple(curve.x, curve.y, levels[0] if levels else 3.0)
    yield Found("ripple", value, "dB", curve.u_ratio, words=_SHORT if isnan(value) else "")


def balance(curve: Curve, levels: tuple[float, ...]) -> Iterable[Found]:
    """Upper less lower half-width about the centre of the -3 dB band, at each level."""
    middle = float(arithmetic_centre(curve.edges(3.0)))
    for below in levels or (20.0, 60.0):

        def uneven(at: float) -> float:
            return float(skirt_balance(curve.edges(at), middle))

        value = uneven(below)
        if isnan(value) and not levels:
            continue
        words = _SHORT if isnan(value) else ""
        yield Found(f"skirt_balance_{_level(below)}", value, "Hz", curve.spread(uneven, below), words=words)


def rejection(curve: Curve, frequencies: tuple[float, ...]) -> Iterable[Found]:
    """How far below the peak the curve is at each frequency."""
    top = find_peak(curve.x, curve.y).y
    for at in frequencies:
        here = float(value_at(curve.x, curve.y, at))
        words = _outside(curve, at, here)
        mark = () if isnan(here) else ((at, here, show_frequency(at)),)
        yield Found("rejection", top - here, "dB", curve.u_ratio, at, words, marks=mark)


def gain(curve: Curve, frequencies: tuple[float, ...]) -> Iterable[Found]:
    """The curve at each frequency."""
    for at in frequencies:
        here = float(value_at(curve.x, curve.y, at))
        words = _outside(curve, at, here)
        if not curve.calibrated:
            here, words = nan, "levels without a reference sweep say nothing of the gain"
        mark = () if isnan(here) else ((at, here, show_frequency(at)),)
        yield Found("gain", here, "dB", curve.u_ratio, at, words, marks=mark)


def flat(curve: Curve, band: tuple[float, ...]) -> Iterable[Found]:
    """Highest less lowest within a band, the whole sweep unless one is given."""
    low, high = (min(band), max(band)) if len(band) == 2 else (float(curve.x[0]), float(curve.x[-1]))
    value = flatness(curve.x, curve.y, low, high)
    words = f"{show_frequency(low)} to {show_frequency(high)} is not within the sweep" if isnan(value) else ""
    yield Found("flatness", value, "dB", curve.u_ratio, words=words)


def density(curve: Curve, band: tuple[float, ...]) -> Iterable[Found]:
    """Mean noise density in a band, the whole sweep unless one is given."""
    low, high = (min(band), max(band)) if len(band) == 2 else (float(curve.x[0]), float(curve.x[-1]))
    value = band_density(curve.x, curve.y, curve.noise_bandwidth_hz, low, high)
    words = f"{show_frequency(low)} to {show_frequency(high)} is not within the sweep" if isnan(value) else ""
    yield Found("noise_density", value, "dBm/Hz", curve.u_db, words=words)


def power(curve: Curve, band: tuple[float, ...]) -> Iterable[Found]:
    """Noise power in a band, kept under the band's middle."""
    low, high = (min(band), max(band)) if len(band) == 2 else (float(curve.x[0]), float(curve.x[-1]))
    value = band_power(curve.x, curve.y, curve.noise_bandwidth_hz, low, high)
    words = f"{show_frequency(low)} to {show_frequency(high)} is not within the sweep" if isnan(value) else ""
    middle = float(f"{(low + high) / 2:.9g}")
    yield Found("band_noise", value, "dBm", curve.u_db, middle, words, "lower", width_hz=high - low)


def spot(curve: Curve, frequencies: tuple[float, ...]) -> Iterable[Found]:
    """Noise density at each frequency, over the ten points about it, fewer near the sweep's ends."""
    x = curve.x
    widest = 10 * float(np.median(np.diff(x)))
    for at in frequencies:
        reach = min(at - x[0] + (x[1] - x[0]) / 2, x[-1] - at + (x[-1] - x[-2]) / 2)
        # A little less than what reaches to the end, so that rounding does not carry it beyond.
        span = min(widest, 2 * float(reach) * (1 - 1e-9))
        inside = x[0] <= at <= x[-1]
        value = spot_density(x, curve.y, curve.noise_bandwidth_hz, at, span) if inside else nan
        mark = ((at, float(value_at(curve.x, curve.y, at)), show_frequency(at)),)
        yield Found("noise_density", value, "dBm/Hz", curve.u_db, at, _outside(curve, at, value), marks=mark)


def _outside(curve: Curve, at: float, value: float) -> str:
    if not isnan(value):
        return ""
    span = f"{show_frequency(float(curve.x[0]))} to {show_frequency(float(curve.x[-1]))}"
    return f"{show_frequency(at)} is not within the sweep, {span}"


# word: (report, what its numbers are, how many at least)
REPORTS: dict[str, dict[str, tuple[Report, str, int]]] = {
    "bandpass": {
        "peak": (peak, "", 0),
        "insertion_loss": (insertion_loss, "", 0),
        "centre": (centre, "ratio", 0),
        "bandwidth": (widths, "ratio", 0),
        "shape_factor": (shape, "ratio", 0),
        "ripple": (ripple, "ratio", 0),
        "skirt_balance": (balance, "ratio", 0),
        "rejection": (rejection, "frequency", 1),
    },
    "response": {
        "gain": (gain, "frequency", 1),
        "flatness": (flat, "frequency", 0),
        "peak": (peak, "", 0),
    },
    "noise": {
        "density": (density, "frequency", 0),
        "power": (power, "frequency", 0),
        "spot": (spot, "frequency", 1),
    },
}

# What is reported when nothing is asked for.
USUAL = {
    "bandpass": ("peak", "insertion_loss", "centre", "bandwidth", "shape_factor", "ripple", "skirt_balance"),
    "response": ("flatness",),
    "noise": ("density",),
    "spectrum": (),
}


def report(curve: Curve, of: str, requests: Iterable[Request]) -> list[Found]:
    """Everything asked of a curve, or what is usual for its sort."""
    asked = [(request.word, request.numbers) for request in requests] or [(word, ()) for word in USUAL[of]]
    found: list[Found] = []
    for word, numbers in asked:
        if word in REPORTS.get(of, {}):
            found += REPORTS[of][word][0](curve, numbers)
    return found
