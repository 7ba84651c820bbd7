"""Capability of a process against its limits, with confidence intervals.

References
----------
ISO 22514-2:2017 (indices); Bissell, Appl. Statist. 39 (1990) 331-340 (interval of Cpk); Montgomery,
Introduction to Statistical Quality Control, chapter 8; NIST/SEMATECH e-Handbook of Statistical Methods 6.1.6.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from statistics import fmean, stdev

from scipy import special, stats

from analysis.control import individuals_limits, subgroup_limits
from analysis.control_constants import c4, d2, d3


@dataclass(frozen=True, slots=True)
class Index:
    """A capability index with its confidence interval."""

    value: float
    lower: float
    upper: float


@dataclass(frozen=True, slots=True)
class Capability:
    """Capability indices: Cp and Cpk from the spread within, Pp and Ppk from the whole spread.

    Attributes
    ----------
    n : int
    mean, sigma_within, sigma_overall : float
        [unit of the values]
    cp, pp : Index or None
        None when only one limit exists.
    cpk, ppk : Index
    off_centre : float or None
        k, the distance of the mean from the middle over half the distance of the limits.
    expected_outside : float
        Share of a normal process with the whole spread that lies outside the limits.
    level : float
        Confidence level of the intervals.
    """

    n: int
    mean: float
    sigma_within: float
    sigma_overall: float
    cp: Index | None
    cpk: Index
    pp: Index | None
    ppk: Index
    off_centre: float | None
    expected_outside: float
    level: float


def capability(
    values: Sequence[float],
    *,
    lower: float | None,
    upper: float | None,
    subgroups: Sequence[Sequence[float]] | None = None,
    level: float = 0.95,
) -> Capability:
    """Capability of single values, or of subgroups, against one or two limits.

    The spread within comes from the moving range of single values, or from the ranges of the subgroups.

    Parameters
    ----------
    values : sequence of float
        All values in order; ignored when subgroups are given.
    lower, upper : float or None
        Limits of the specification [unit of the values].
    subgroups : sequence of sequences, optional
    level : float
        Confidence level.

    Raises
    ------
    ValueError
        When no limit is given, limits are out of order, there are too few values, or nothing varies.
    """
    if subgroups is not None:
        limits = subgroup_limits(subgroups, spread="range")
        every = [value for subgroup in subgroups for value in subgroup]
        within, freedom = limits.sigma, freedom_of_ranges([len(each) for each in subgroups])
    else:
        every = list(values)
        within, freedom = individuals_limits(every).sigma, freedom_of_moving_ranges(len(every))
    return capability_from(
        mean=fmean(every), sigma_within=within, sigma_overall=stdev(every), n=len(every),
        freedom_within=freedom, lower=lower, upper=upper, level=level,
    )  # fmt: skip


def capability_from(
    *,
    mean: float,
    sigma_within: float,
    sigma_overall: float,
    n: int,
    freedom_within: float,
    lower: float | None,
    upper: float | None,
    level: float = 0.95,
) -> Capability:
    """Capability from summary figures; see ``capability``."""
    _check(lower, upper, sigma_within, sigma_overall, n, level)
    cp = cp_index(sigma_within, freedom=freedom_within, lower=lower, upper=upper, level=level)
    pp = cp_index(sigma_overall, freedom=n - 1, lower=lower, upper=upper, level=level)
    cpk = cpk_index(mean, sigma_within, n=n, freedom=freedom_within, lower=lower, upper=upper, level=level)
    ppk = cpk_index(mean, sigma_overall, n=n, freedom=n - 1, lower=lower, upper=upper, level=level)
    outside = 0.0 if lower is None else float(special.ndtr((lower - mean) / sigma_overall))
    outside += 0.0 if upper is None else float(special.ndtr((mean - upper) / sigma_overall))
    return Capability(
        n,
        mean,
        sigma_within,
        sigma_overall,
        cp,
        cpk,
        pp,
        ppk,
        _off_centre(mean, lower, upper),
        outside,
        level,
    )


def cp_index(sigma: float, *, freedom: float, lower: float | None, upper: float | None, level: float) -> Index | None:
    """(upper - lower) / (6 sigma), its interval from the chi-squared distribution of the variance."""
    if lower is None or upper is None:
        return None
    value, tail = (upper - lower) / (6 * sigma), (1 - level) / 2
    low, high = (value * math.sqrt(stats.chi2.ppf(p, freedom) / freedom) for p in (tail, 1 - tail))
    return Index(value, float(low), float(high))


def cpk_index(
    mean: float,
    sigma: float,
    *,
    n: int,
    freedom: float,
    lower: float | None,
    upper: float | None,
    level: float,
) -> Index:
    """Distance of the mean from the nearer limit over 3 sigma, with Bissell's interval.

    The half width is z sqrt(1 / (9 n) + Cpk^2 / (2 nu)).
    """
    sides = [(mean - lower) / (3 * sigma)] if lower is not None else []
    sides += [(upper - mean) / (3 * sigma)] if upper is not None else []
    value = min(sides)
    half = float(special.ndtri((1 + level) / 2)) * math.sqrt(1 / (9 * n) + value**2 / (2 * freedom))
    return Index(value, value - half, value + half)


def freedom_of_moving_ranges(n: int) -> float:
    """Effective degrees of freedom of the mean moving range of n values over d2: 1 / (2 CV^2).

    Neighbouring moving ranges share a value; their differences have correlation -1/2, and the covariance of
    their sizes is (4/pi)(sqrt(3)/2 + pi/12) - 4/pi.
    """
    if n < 3:
        return 1.0
    variance, covariance = 2 - 4 / math.pi, (4 / math.pi) * (math.sqrt(3) / 2 + math.pi / 12 - 1)
    ranges = n - 1
    of_mean = (ranges * variance + 2 * (ranges - 1) * covariance) / ranges**2
    return 1 / (2 * of_mean / d2(2) ** 2)


def freedom_of_ranges(sizes: Sequence[int]) -> float:
    """Effective degrees of freedom of pooled ranges of subgroups: half the sum of (d2/d3)^2."""
    return sum((d2(n) / d3(n)) ** 2 for n in sizes) / 2


def freedom_of_deviations(sizes: Sequence[int]) -> float:
    """Effective degrees of freedom of the pooled standard deviations of independent subgroups."""
    return sum(c4(n) ** 2 / (1 - c4(n) ** 2) for n in sizes) / 2


def _off_centre(mean: float, lower: float | None, upper: float | None) -> float | None:
    if lower is None or upper is None:
        return None
    return abs((upper + lower) / 2 - mean) / ((upper - lower) / 2)


def _check(lower: float | None, upper: float | None, within: float, overall: float, n: int, level: float) -> None:
    if lower is None and upper is None:
        raise ValueError("Lower and upper limit are both empty; at least one is expected.")
    if lower is not None and upper is not None and lower >= upper:
        raise ValueError(f"Lower limit is {lower} and upper limit {upper}; the lower must be below the upper.")
    for name, sigma in (("Spread within", within), ("Whole spread", overall)):
        if not (sigma > 0 and math.isfinite(sigma)):
            raise ValueError(f"{name} is {sigma}; a finite number above 0 is expected.")
    if n < 2 or not 0 < level < 1:
        raise ValueError(
            f"{n} values and level {level} are given; at least 2, and a level between 0 and 1, are expected."
        )
