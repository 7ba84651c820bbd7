"""Control charts of individual values and of subgroups: limits from a baseline, listed exclusions left out.

References
----------
ISO 7870-2:2013, clauses 5 and 6; Montgomery, Introduction to Statistical Quality Control, chapter 6; Burr, J.
Qual. Technol. 1 (1969) 163-167 (weights for subgroups of unequal size).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from statistics import fmean, stdev

from analysis.control_constants import c4, d2, d3

__all__ = ["IndividualsLimits", "SubgroupLimits", "d2", "d3", "individuals_limits", "subgroup_limits"]


@dataclass(frozen=True, slots=True)
class IndividualsLimits:
    """Limits of a chart of individual values with the moving range of two.

    Attributes
    ----------
    values : tuple of float
        The baseline, excluded points included.
    centre, sigma : float
        Mean, and standard deviation from the mean moving range over d2(2).
    mean_moving_range : float
    lower, upper : float
        centre - 3 sigma and centre + 3 sigma.
    moving_range_upper : float
        Upper limit of the moving range, D4 times its mean.
    excluded : dict of int to str
        Places of the points left out, each with its reason.
    """

    values: tuple[float, ...]
    centre: float
    sigma: float
    mean_moving_range: float
    lower: float
    upper: float
    moving_range_upper: float
    excluded: dict[int, str]


@dataclass(frozen=True, slots=True)
class SubgroupLimits:
    """Limits of an X-bar chart with its chart of ranges or standard deviations, one pair of limits per
    subgroup.

    Attributes
    ----------
    spread : str
        range or sd.
    sizes : tuple of int
    means, spreads : tuple of float
        What is plotted, one number per subgroup.
    centre, sigma : float
        Mean of all baseline values; standard deviation within subgroups.
    mean_limits, spread_limits : tuple of (lower, upper)
    spread_centres : tuple of float
        Expected range or standard deviation of each subgroup.
    excluded : dict of int to str
    """

    spread: str
    sizes: tuple[int, ...]
    means: tuple[float, ...]
    spreads: tuple[float, ...]
    centre: float
    sigma: float
    mean_limits: tuple[tuple[float, float], ...]
    spread_limits: tuple[tuple[float, float], ...]
    spread_centres: tuple[float, ...]
    excluded: dict[int, str]


def individuals_limits(values: Sequence[float], *, excluded: Mapping[int, str] | None = None) -> IndividualsLimits:
    """Centre line and limits of individual values from their mean moving range.

    An excluded point takes no part, and neither do the two moving ranges that touch it.

    Parameters
    ----------
    values : sequence of float
        The baseline, in order.
    excluded : mapping of int to str, optional
        Places (from 0) of points left out, each with its reason.

    Raises
    ------
    ValueError
        When fewer than two neighbouring values are left, one is not finite, or all are the same.
    """
    if len(values) < 2:
        raise ValueError(f"{len(values)} values are given; at least 2 are needed for limits.")
    _finite(values, where="Value")
    left_out = _exclusions(excluded, count=len(values), what="value")
    kept = [value for place, value in enumerate(values) if place not in left_out]
    ranges = [abs(b - a) for (i, a), (j, b) in pairwise(enumerate(values)) if not {i, j} & left_out.keys()]
    if not ranges:
        raise ValueError("No two neighbouring values are left; at least 2 are needed for limits.")
    return limits_from_means(tuple(values), centre=fmean(kept), mean_range=fmean(ranges), excluded=left_out)


def limits_from_means(
    values: tuple[float, ...], *, centre: float, mean_range: float, excluded: Mapping[int, str]
) -> IndividualsLimits:
    """Limits from a mean and a mean moving range; ValueError when nothing varies."""
    if mean_range == 0:
        raise ValueError("All values are the same; no limits can be set from them.")
    sigma = mean_range / d2(2)
    widest = mean_range * (1 + 3 * d3(2) / d2(2))
    return IndividualsLimits(
        values, centre, sigma, mean_range, centre - 3 * sigma, centre + 3 * sigma, widest, dict(excluded)
    )


def subgroup_limits(
    subgroups: Sequence[Sequence[float]], *, spread: str, excluded: Mapping[int, str] | None = None
) -> SubgroupLimits:
    """Limits of an X-bar chart with ranges or standard deviations; the subgroups may differ in size.

    Sigma is the weighted mean of R/d2 (or s/c4) with the weights of least variance, which for equal sizes is
    the mean range over d2 (or the mean s over c4).

    Parameters
    ----------
    subgroups : sequence of sequences of float
    spread : str
        "range" or "sd".
    excluded : mapping of int to str, optional
        Places (from 0) of subgroups left out of the baseline, each with its reason; they stay on the chart.

    Raises
    ------
    ValueError
        When a subgroup has fewer than two values, none is left, or nothing varies.
    """
    estimates = [spread_estimate(each, spread=spread, place=place) for place, each in enumerate(subgroups, start=1)]
    left_out = _exclusions(excluded, count=len(subgroups), what="subgroup")
    kept = [place for place in range(len(subgroups)) if place not in left_out]
    if not kept:
        raise ValueError("No subgroup is left; at least 1 is needed for limits.")
    centre = fmean([value for place in kept for value in subgroups[place]])
    weights = math.fsum(estimates[place][0] for place in kept)
    sigma = math.fsum(estimates[place][0] * estimates[place][1] for place in kept) / weights
    return subgroup_chart(subgroups, spread=spread, centre=centre, sigma=sigma, excluded=left_out)


@dataclass(frozen=True, slots=True)
class _Measure:
    """A measure of spread with its mean and standard deviation for n standard normal values."""

    of: Callable[[Sequence[float]], float]
    mean: Callable[[int], float]
    sd: Callable[[int], float]


def _measure(spread: str) -> _Measure:
    if spread == "range":
        return _Measure(lambda values: max(values) - min(values), d2, d3)
    if spread == "sd":
        return _Measure(stdev, c4, lambda n: math.sqrt(1 - c4(n) ** 2))
    raise ValueError(f"Spread is {spread!r}; expected range or sd.")


def spread_estimate(subgroup: Sequence[float], *, spread: str, place: int) -> tuple[float, float]:
    """Weight and estimate of the spread within, from one subgroup; ValueError naming its place."""
    measure = _measure(spread)
    if len(subgroup) < 2:
        raise ValueError(f"Subgroup {place} holds {len(subgroup)} values; at least 2 are needed.")
    _finite(subgroup, where=f"Subgroup {place}, value")
    mean = measure.mean(len(subgroup))
    return (mean / measure.sd(len(subgroup))) ** 2, measure.of(subgroup) / mean


def subgroup_chart(
    subgroups: Sequence[Sequence[float]],
    *,
    spread: str,
    centre: float,
    sigma: float,
    excluded: Mapping[int, str],
) -> SubgroupLimits:
    """Limits of each subgroup from a centre and a spread within; ValueError when nothing varies."""
    if sigma == 0:
        raise ValueError("No subgroup has any spread; no limits can be set from them.")
    measure = _measure(spread)
    sizes = tuple(len(each) for each in subgroups)
    half = [3 * sigma / math.sqrt(n) for n in sizes]
    middles = tuple(measure.mean(n) * sigma for n in sizes)
    widths = [3 * measure.sd(n) * sigma for n in sizes]
    return SubgroupLimits(
        spread, sizes, tuple(fmean(each) for each in subgroups),
        tuple(measure.of(each) for each in subgroups),
        centre, sigma, tuple((centre - h, centre + h) for h in half),
        tuple((max(0.0, m - w), m + w) for m, w in zip(middles, widths, strict=True)), middles,
        dict(excluded),
    )  # fmt: skip


def _exclusions(excluded: Mapping[int, str] | None, *, count: int, what: str) -> dict[int, str]:
    for place, reason in (excluded or {}).items():
        if not 0 <= place < count:
            raise ValueError(f"Excluded {what} is at place {place}; expected 0 to {count - 1}.")
        if not reason.strip():
            raise ValueError(f"The {what} at place {place} is excluded without a reason; a sentence is expected.")
    return dict(excluded or {})


def _finite(values: Sequence[float], *, where: str) -> None:
    for place, value in enumerate(values, start=1):
        if not math.isfinite(value):
            raise ValueError(f"{where} {place} is {value}; a finite number is expected.")
