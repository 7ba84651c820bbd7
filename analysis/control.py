"""Control charts of individual values: limits from a baseline.

References
----------
ISO 7870-2:2013, clause 6 (individuals and moving range); Montgomery, Introduction to Statistical Quality Control.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise
from statistics import fmean

from scipy import integrate, stats


@dataclass(frozen=True, slots=True)
class IndividualsLimits:
    """Limits of a chart of individual values with the moving range of two.

    Attributes
    ----------
    values : tuple of float
        The baseline.
    centre, sigma : float
        Mean, and standard deviation from the mean moving range over d2(2).
    mean_moving_range : float
    lower, upper : float
        centre - 3 sigma and centre + 3 sigma.
    moving_range_upper : float
        Upper limit of the moving range, D4 times its mean.
    """

    values: tuple[float, ...]
    centre: float
    sigma: float
    mean_moving_range: float
    lower: float
    upper: float
    moving_range_upper: float


def individuals_limits(values: Sequence[float]) -> IndividualsLimits:
    """Centre line and limits of individual values from their mean moving range.

    Raises
    ------
    ValueError
        When fewer than two values are given, one is not finite, or all are the same.
    """
    if len(values) < 2:
        raise ValueError(f"{len(values)} values are given; at least 2 are needed for limits.")
    for place, value in enumerate(values, start=1):
        if not math.isfinite(value):
            raise ValueError(f"Value {place} is {value}; a finite number is expected.")
    ranges = [abs(after - before) for before, after in pairwise(values)]
    mean_range = fmean(ranges)
    if mean_range == 0:
        raise ValueError("All values are the same; no limits can be set from them.")
    centre, sigma = fmean(values), mean_range / d2(2)
    widest = mean_range * (1 + 3 * d3(2) / d2(2))
    return IndividualsLimits(tuple(values), centre, sigma, mean_range, centre - 3 * sigma, centre + 3 * sigma, widest)


@lru_cache(maxsize=32)
def d2(n: int) -> float:
    """Mean range of n standard normal values: the integral of 1 - (1 - Phi)^n - Phi^n."""
    return float(integrate.quad(lambda x: 1 - stats.norm.sf(x) ** n - stats.norm.cdf(x) ** n, -8, 8, epsabs=1e-11)[0])


@lru_cache(maxsize=32)
def d3(n: int) -> float:
    """Standard deviation of the range of n standard normal values, by integration of its second moment."""

    def second(y: float, x: float) -> float:
        low, high = stats.norm.cdf(x), stats.norm.cdf(y)
        return float(1 - high**n - (1 - low) ** n + (high - low) ** n)

    if n == 2:  # the range is |N(0, 2)|: its variance is 2 - 4/pi
        return math.sqrt(2 - 4 / math.pi)
    moment = 2 * integrate.dblquad(second, -7, 7, lambda x: x, lambda x: 7.0, epsabs=1e-7)[0]
    return math.sqrt(moment - d2(n) ** 2)
