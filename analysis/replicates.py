"""Agreement of replicate titrations. The engine never drops a value: it says which ones agree."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from statistics import fmean, stdev

EDGE = 1e-12  # relative: titres are differences of decimals, 10.05 - 9.95 is a little more than 0.10 in binary


@dataclass(frozen=True, slots=True)
class ConcordantSet:
    """The largest set of values whose range is within a limit.

    Attributes
    ----------
    values : tuple of float
        All values that were given.
    limit : float
        The limit of the range, in their unit.
    indices : tuple of int
        Places of the values of the set.
    range : float
        Range of the set.
    tie_sentence : str
        How a tie between sets of the same size was decided, or empty.
    """

    values: tuple[float, ...]
    limit: float
    indices: tuple[int, ...]
    range: float
    tie_sentence: str


@dataclass(frozen=True, slots=True)
class Spread:
    """Mean, sample standard deviation, relative standard deviation [%] and range of values."""

    n: int
    mean: float
    sd: float | None
    rsd_percent: float | None
    range: float


def concordant_set(values: Sequence[float], *, limit: float) -> ConcordantSet:
    """The largest set of values whose range is within the limit (common practice of titrimetry).

    Of sets of the same size the one with the smallest range counts; of those with the same range the one
    whose values were obtained first.

    Parameters
    ----------
    values : sequence of float
        Titres, in the order they were obtained.
    limit : float
        Largest range of a concordant set, in the unit of the values.

    Raises
    ------
    ValueError
        When there is no value, one is not finite, or the limit is not above zero.
    """
    _check(values)
    if not limit > 0 or not math.isfinite(limit):
        raise ValueError(f"Limit of the range is {limit}; a finite number above 0 is expected.")
    order = sorted(range(len(values)), key=lambda place: (values[place], place))
    windows = _windows(order, values, limit=limit)
    largest = max(len(window) for window in windows)
    best = [window for window in windows if len(window) == largest]
    chosen = min(best, key=lambda window: (round(_range(window, values) / limit, 9), sorted(window)))
    sentence = ""
    if len(best) > 1 and largest > 1:
        how = "the one with the smallest range counts, then the earliest"
        sentence = f"{len(best)} sets of {largest} titres agree; {how}."
    return ConcordantSet(tuple(values), limit, tuple(sorted(chosen)), _range(chosen, values), sentence)


def spread(values: Sequence[float]) -> Spread:
    """Mean, sample standard deviation (n - 1), RSD and range; ValueError when there is no value."""
    _check(values)
    mean, sd = fmean(values), stdev(values) if len(values) > 1 else None
    rsd = None if sd is None or mean == 0 else 100 * sd / abs(mean)
    return Spread(n=len(values), mean=mean, sd=sd, rsd_percent=rsd, range=max(values) - min(values))


def lag_1_autocorrelation(values: Sequence[float]) -> float:
    """Correlation of neighbouring values about the common mean: drift within a series shows in it.

    Raises
    ------
    ValueError
        When fewer than three values are given, or all are the same.

    References
    ----------
    NIST/SEMATECH e-Handbook of Statistical Methods 1.3.5.12.
    """
    _check(values)
    mean = fmean(values)
    away = [value - mean for value in values]
    whole = math.fsum(a * a for a in away)
    if len(values) < 3 or max(values) == min(values):
        raise ValueError(f"{len(values)} values are given; at least 3 that are not all the same are expected.")
    return math.fsum(a * b for a, b in pairwise(away)) / whole


def _windows(order: Sequence[int], values: Sequence[float], *, limit: float) -> list[tuple[int, ...]]:
    found, last = [], 0
    widest = limit + EDGE * max(abs(value) for value in values)
    for first in range(len(order)):
        last = max(last, first)
        while last + 1 < len(order) and values[order[last + 1]] - values[order[first]] <= widest:
            last += 1
        found.append(tuple(order[first : last + 1]))
    return found


def _range(window: Sequence[int], values: Sequence[float]) -> float:
    inside = [values[place] for place in window]
    return max(inside) - min(inside)


def _check(values: Sequence[float]) -> None:
    if len(values) == 0:
        raise ValueError("Values are empty; at least one is expected.")
    for place, value in enumerate(values, start=1):
        if not math.isfinite(value):
            raise ValueError(f"Value {place} is {value}; a finite number is expected.")
