"""Charts with memory: the exponentially weighted moving average and the tabular cumulative sum.

References
----------
Roberts, Technometrics 1 (1959) 239-250; Page, Biometrika 41 (1954) 100-115; Lucas, Crosier, Technometrics 24
(1982) 199-205 (head start); Montgomery, Introduction to Statistical Quality Control, chapter 9.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy import signal

FloatArray = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Ewma:
    """An EWMA chart.

    Attributes
    ----------
    z : array
        The average after each point [unit of the points].
    lower, upper : array
        Limits at each point; they widen from the first point on.
    target, sigma, weight, width
        What was chosen: the target, the standard deviation of single points, lambda and L.
    signals : tuple of int
        Places of the points beyond the limits.
    """

    z: FloatArray
    lower: FloatArray
    upper: FloatArray
    target: float
    sigma: float
    weight: float
    width: float
    signals: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Cusum:
    """A two-sided tabular CUSUM in units of sigma.

    Attributes
    ----------
    upper, lower : array
        Sums of what lies above target + k sigma, and below target - k sigma; both at least 0.
    reference, interval : float
        k and h in units of sigma.
    signals : tuple of int
        Places of the points at which a sum is beyond h.
    """

    upper: FloatArray
    lower: FloatArray
    target: float
    sigma: float
    reference: float
    interval: float
    head_start: float
    signals: tuple[int, ...]


def ewma(
    values: Sequence[float] | FloatArray,
    *,
    target: float,
    sigma: float,
    weight: float = 0.2,
    width: float = 2.962,
    is_steady: bool = False,
) -> Ewma:
    """EWMA of a series: z_i = lambda x_i + (1 - lambda) z_(i-1), from the target on.

    Parameters
    ----------
    values : sequence of float
    target, sigma : float
        Target and standard deviation of single points [unit of the values].
    weight : float
        lambda, above 0 and at most 1.
    width : float
        L, the half width of the limits in standard deviations of z.
    is_steady : bool
        Whether the limits are those of a long series from the first point on.

    Raises
    ------
    ValueError
        When a value is not finite or a setting is outside its range.
    """
    x = checked_series(values, sigma=sigma, target=target)
    check_weight(weight, width=width)
    z = ewma_from(x, previous=target, weight=weight)
    half = np.full(x.size, width * sigma * math.sqrt(weight / (2 - weight)))
    if not is_steady:
        young = min(x.size, math.ceil(40 / weight))  # later (1 - lambda)^(2 i) is lost beside 1
        half[:young] *= np.sqrt(1 - (1 - weight) ** (2 * np.arange(1, young + 1, dtype=float)))
    out = np.flatnonzero(np.abs(z - target) > half)
    return Ewma(z, target - half, target + half, target, sigma, weight, width, tuple(int(place) for place in out))


def ewma_from(x: FloatArray, *, previous: float, weight: float) -> FloatArray:
    """The averages after each of some points, going on from a previous average."""
    if not x.size:
        return x.copy()
    z, _ = signal.lfilter([weight], [1.0, weight - 1.0], x, zi=[(1.0 - weight) * previous])
    return np.asarray(z)


def cusum(
    values: Sequence[float] | FloatArray,
    *,
    target: float,
    sigma: float,
    reference: float = 0.5,
    interval: float = 5.0,
    head_start: float = 0.0,
) -> Cusum:
    """Tabular CUSUM: C+ = max(0, z - k + C+), C- = max(0, -z - k + C-), with z = (x - target) / sigma.

    Both are found without a loop: with S the running sum of z - k, C+ = S - min(0, running minimum of S).

    Parameters
    ----------
    values : sequence of float
    target, sigma : float
        [unit of the values]
    reference, interval : float
        k and h, in units of sigma.
    head_start : float
        First value of both sums, in units of sigma; h/2 is usual for a fast first response, 0 for none.

    Raises
    ------
    ValueError
        When a value is not finite or a setting is outside its range.
    """
    x = checked_series(values, sigma=sigma, target=target)
    check_cusum(reference, interval=interval, head_start=head_start)
    z = (x - target) / sigma
    up, _ = one_sided(z - reference, total=head_start, least=0.0)
    down, _ = one_sided(-z - reference, total=head_start, least=0.0)
    out = np.flatnonzero((up > interval) | (down > interval))
    return Cusum(up, down, target, sigma, reference, interval, head_start, tuple(int(place) for place in out))


def one_sided(steps: FloatArray, *, total: float, least: float) -> tuple[FloatArray, tuple[float, float]]:
    """One side of a CUSUM from its running total and the least of it, with both as they are afterwards."""
    if not steps.size:
        return steps.copy(), (total, least)
    sums = np.add.accumulate(np.concatenate([[total], steps]))[1:]
    lows = np.minimum.accumulate(np.minimum(sums, least))
    return np.asarray(sums - lows), (float(sums[-1]), float(lows[-1]))


def shift_estimate(chart: Cusum) -> tuple[int, float] | None:
    """Place of the first point after the shift, and the new mean [unit of the values], at the first signal.

    References
    ----------
    Montgomery, Introduction to Statistical Quality Control, equation 9.5.
    """
    if not chart.signals:
        return None
    place = chart.signals[0]
    is_up = chart.upper[place] > chart.interval
    side = chart.upper if is_up else chart.lower
    zeros = np.flatnonzero(side[:place] == 0)
    start = int(zeros[-1]) + 1 if zeros.size else 0
    moved = chart.reference + float(side[place]) / (place - start + 1)
    return start, chart.target + (moved if is_up else -moved) * chart.sigma


def checked_series(values: Sequence[float] | FloatArray, *, sigma: float, target: float) -> FloatArray:
    """The values as an array; ValueError when one, or the target or sigma, is not usable."""
    if not (sigma > 0 and math.isfinite(sigma)):
        raise ValueError(f"Sigma is {sigma}; a finite number above 0 is expected.")
    if not math.isfinite(target):
        raise ValueError(f"Target is {target}; a finite number is expected.")
    x = np.asarray(values, dtype=float)
    wrong = np.flatnonzero(~np.isfinite(x))
    if wrong.size:
        raise ValueError(f"Value {wrong[0] + 1} is {x[wrong[0]]}; a finite number is expected.")
    return x


def check_weight(weight: float, *, width: float) -> None:
    """Refuse a weight or a width of an EWMA outside its range."""
    if not 0 < weight <= 1:
        raise ValueError(f"Weight is {weight}; a number above 0, at most 1, is expected.")
    if not (width > 0 and math.isfinite(width)):
        raise ValueError(f"Width is {width}; a finite number above 0 is expected.")


def check_cusum(reference: float, *, interval: float, head_start: float = 0.0) -> None:
    """Refuse a reference value, a decision interval or a head start of a CUSUM outside its range."""
    if not (reference >= 0 and math.isfinite(reference)):
        raise ValueError(f"Reference value is {reference}; a finite number not below 0 is expected.")
    if not (interval > 0 and math.isfinite(interval)):
        raise ValueError(f"Decision interval is {interval}; a finite number above 0 is expected.")
    if not 0 <= head_start <= interval:
        raise ValueError(f"Head start is {head_start}; a number from 0 to the decision interval is expected.")
