"""Doubt by source: combining it, taking differences in which common sources cancel, and judging with it.

A number's doubt is a mapping from source to signed contribution c_i u_i, in the number's own unit. Two numbers with a
part from an equal source share that error fully; parts of different sources are independent. None is *not stated*,
and so is an empty mapping; a stated doubt of zero is not.
"""

from __future__ import annotations

import math
from collections.abc import Hashable, Iterable, Mapping
from typing import NamedTuple, TypeVar

S = TypeVar("S", bound=Hashable)


class Explanation(NamedTuple):
    """How much of a disagreement a source may account for: share (1) of the prediction's variance, likely shift."""

    share: float
    shift: float


def rectangular(half_width: float) -> float:
    """a/sqrt 3: limits +-a to a standard uncertainty, same unit. Source: JCGM 100:2008 4.3.7."""
    return half_width / math.sqrt(3.0)


def triangular(half_width: float) -> float:
    """a/sqrt 6: limits +-a to a standard uncertainty, same unit. Source: JCGM 100:2008 4.3.9."""
    return half_width / math.sqrt(6.0)


def u_shaped(half_width: float) -> float:
    """a/sqrt 2: limits +-a of a sine of unknown phase to a standard uncertainty, same unit. Source: common practice."""
    return half_width / math.sqrt(2.0)


def combine(parts: Mapping[S, float] | None) -> float | None:
    """u = sqrt(sum of squares) of a number's parts, same unit; None when not stated. Source: JCGM 100:2008 5.1.2."""
    if not parts:
        return None
    return math.sqrt(math.fsum(part * part for part in parts.values()))


def combine_correlated(contributions: Iterable[float], correlation: float) -> float:
    """u of parts c_i u_i that are all correlated by one coefficient r, same unit; nan if no variance can be so.

    u^2 = (1 - r) sum of squares + r (sum)^2. Source: JCGM 100:2008 5.2.2.
    """
    parts = list(contributions)
    squares = math.fsum(part * part for part in parts)
    variance = (1.0 - correlation) * squares + correlation * math.fsum(parts) ** 2
    return math.sqrt(variance) if variance >= 0.0 else math.nan


def linear_sum(terms: Iterable[tuple[float, Mapping[S, float] | None]]) -> dict[S, float] | None:
    """Parts of sum a_j y_j from (a_j, parts of y_j); equal sources add with sign; None when none states one.

    A term that states nothing adds nothing. Source: JCGM 100:2008 5.2.2, fully correlated within a source.
    """
    total: dict[S, float] = {}
    for factor, parts in terms:
        for source, part in (parts or {}).items():
            total[source] = total.get(source, 0.0) + factor * part
    return total or None


def difference(after: Mapping[S, float] | None, before: Mapping[S, float] | None) -> dict[S, float] | None:
    """Parts of after - before; what both share cancels (0.0 stays listed). None when neither states any.

    Source: JCGM 100:2008 5.2.2.
    """
    return linear_sum([(1.0, after), (-1.0, before)])


def covariance(one: Mapping[S, float] | None, other: Mapping[S, float] | None) -> float:
    """Sum over common sources of the products of the parts, units multiplied; 0 without any.

    Source: JCGM 100:2008 5.2.
    """
    ours, theirs = one or {}, other or {}
    return math.fsum(part * theirs[source] for source, part in ours.items() if source in theirs)


def correlation(one: Mapping[S, float] | None, other: Mapping[S, float] | None) -> float:
    """Covariance over the product of the uncertainties (1); nan when either is zero or not stated.

    Source: JCGM 100:2008 5.2.2.
    """
    product = (combine(one) or 0.0) * (combine(other) or 0.0)
    return covariance(one, other) / product if product > 0.0 else math.nan


def mean_of_repeats(values: Iterable[float]) -> tuple[float, float | None]:
    """Mean and its standard uncertainty s/sqrt n, same unit; None for fewer than two values, nan mean for none.

    Source: JCGM 100:2008 4.2.1, 4.2.3.
    """
    repeats = list(values)
    if not repeats:
        return math.nan, None
    mean = math.fsum(repeats) / len(repeats)
    if len(repeats) < 2:
        return mean, None
    variance = math.fsum((value - mean) ** 2 for value in repeats) / (len(repeats) - 1)
    return mean, math.sqrt(variance / len(repeats))


def normal_probability(z: float) -> float:
    """Phi(z) = (1 + erf(z/sqrt 2))/2: probability (1) of a normal variable below z. Source: closed form."""
    return 0.5 * math.erfc(-z / math.sqrt(2.0))


def coverage(k: float) -> float:
    """erf(k/sqrt 2): probability (1) within +-k u for a normal distribution; 0.9545 at 2. Source: JCGM 100:2008 G.1."""
    return math.erf(k / math.sqrt(2.0))


def conformity(value: float, u: float | None, lower: float | None = None, upper: float | None = None) -> float | None:
    """Probability (1) that lower <= true value <= upper, all in one unit; a limit of None is not there.

    Normal distribution of mean `value` and standard deviation u; u = 0 gives 0 or 1; None: not stated; nan in, nan out.
    Source: JCGM 106:2012 7.
    """
    if u is None:
        return None
    if math.isnan(value) or math.isnan(u):
        return math.nan
    if u == 0.0:
        return float((lower is None or value >= lower) and (upper is None or value <= upper))
    below = 0.0 if lower is None else normal_probability((lower - value) / u)
    above = 0.0 if upper is None else normal_probability((value - upper) / u)
    return max(0.0, 1.0 - below - above)


def en_number(difference: float, expanded_a: float, expanded_b: float) -> float:
    """|d| / sqrt(U_a^2 + U_b^2), all in one unit, k = 2: at most 1 agrees; nan when both are zero.

    Source: ISO 13528.
    """
    root = math.hypot(expanded_a, expanded_b)
    return abs(difference) / root if root > 0.0 else math.nan


def explain(
    disagreement: float, inputs: Mapping[S, tuple[float, float]], u_measured: float = 0.0
) -> dict[S, Explanation]:
    """Where measurement - prediction = d could come from; inputs: source -> (sensitivity c_i, uncertainty u_i).

    share = (c_i u_i)^2 / sum; shift = d c_i u_i^2 / (sum + u_meas^2), in the input's own unit: the most likely values
    given the tolerances. nan where the sum is zero. Source: linear least squares (closed form), JCGM 100:2008 5.1.
    """
    total = math.fsum((c * u) ** 2 for c, u in inputs.values())
    if not total > 0.0:
        return {source: Explanation(math.nan, math.nan) for source in inputs}
    scale = disagreement / (total + u_measured**2)
    return {source: Explanation((c * u) ** 2 / total, scale * c * u * u) for source, (c, u) in inputs.items()}


def effective_freedom(parts: Iterable[tuple[float, float]]) -> float:
    """u^4 / sum(u_i^4/nu_i) from (u_i, degrees of freedom nu_i, inf for type B); inf when all are.

    Source: JCGM 100 G.4.
    """
    known = list(parts)
    total = math.fsum(u * u for u, _ in known) ** 2
    spread = math.fsum(u**4 / freedom for u, freedom in known)
    return total / spread if spread > 0.0 else math.inf


def coverage_factor(probability: float, freedom: float) -> float:
    """k = t_p(nu) with nu cut to the next lower whole number (1); the normal factor for inf; nan for nu < 1.

    Source: JCGM 100:2008 G.3, G.4, table G.2; Student's distribution from Abramowitz and Stegun 26.7.
    """
    if not (0.0 < probability < 1.0) or not freedom >= 1.0:
        return math.nan
    low, high = 0.0, 1.0
    while _within(high, freedom) < probability:
        high *= 2.0
    for _ in range(80):
        middle = (low + high) / 2.0
        low, high = (middle, high) if _within(middle, freedom) < probability else (low, middle)
    return (low + high) / 2.0


def _within(t: float, freedom: float) -> float:
    """Probability of Student's variable within +-t, Abramowitz and Stegun 26.7.3 and 26.7.4; normal from 10,000 up."""
    if freedom >= 1e4:
        return coverage(t)
    nu = int(freedom)
    theta = math.atan(t / math.sqrt(nu))
    square = math.cos(theta) ** 2
    term, total = 1.0, 0.0
    for k in range(1 + nu % 2, nu, 2):
        total += term
        term *= square * k / (k + 1)
    if nu % 2 == 0:
        return math.sin(theta) * total
    return 2.0 / math.pi * (theta + math.sin(theta) * math.cos(theta) * total)
