"""The doubt of any function of several numbers, by what it comes from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from math import isnan
from typing import TypeVar

S = TypeVar("S")

# Where the two half-steps of an input differ by more than this part of their mean, first order is not good enough.
_CURVED = 0.1


def propagate(
    function: Callable[[Mapping[S, float]], float], inputs: Mapping[S, tuple[float, float | None]]
) -> tuple[float, dict[S, float]]:
    """Value of a function of the inputs {source: (value, standard uncertainty)}, and its parts c_i u_i by source.

    Any units; an uncertainty of None adds nothing. c_i u_i is half of f(x_i + u_i) - f(x_i - u_i), so it is exact for
    what is linear or quadratic. Where the function is nan on one side, twice the other side's step stands for both; a
    nan part where it is nan on both, or at the values themselves.
    Source: JCGM 100:2008 5.1.2, 5.1.3 note 2.
    """
    values = {source: value for source, (value, _) in inputs.items()}
    here = float(function(values))
    parts = {}
    for source, (value, u) in inputs.items():
        if u:
            above, below = (float(function({**values, source: value + sign * u})) for sign in (+1.0, -1.0))
            above, below = (2 * here - below if isnan(above) else above), (2 * here - above if isnan(below) else below)
            parts[source] = (above - below) / 2.0
    return here, {source: part for source, part in parts.items() if part != 0.0}


def curved(
    function: Callable[[Mapping[S, float]], float], inputs: Mapping[S, tuple[float, float | None]]
) -> tuple[S, ...]:
    """The inputs along which the function bends so much within one u that first order is doubtful; none for a line.

    Where |f(x+u) + f(x-u) - 2 f(x)| exceeds a tenth of |f(x+u) - f(x-u)|. Source: JCGM 100:2008 5.1.2 note.
    """
    values = {source: value for source, (value, _) in inputs.items()}
    here, found = function(values), []
    for source, (value, u) in inputs.items():
        if u:
            above, below = (function({**values, source: value + sign * u}) for sign in (+1.0, -1.0))
            if isnan(above) or isnan(below) or abs(above + below - 2 * here) > _CURVED * abs(above - below):
                found.append(source)
    return tuple(found)
