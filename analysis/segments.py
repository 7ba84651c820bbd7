"""The crossing of two straight segments: conductometric, thermometric and photometric curves."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve

FloatArray = npt.NDArray[np.float64]
LEAST = 3


def crossing(curve: Curve) -> tuple[float, float]:
    """Volume [mL] where two straight lines cross, with its standard uncertainty.

    Every split that leaves three points on each side is tried; the one with the least sum of squares counts, and the
    lines are fitted without the points within 5 % of the range of their crossing, where the curve bends.

    Raises
    ------
    ValueError
        When the lines do not cross inside the curve, or are one line within their scatter.
    """
    v, y = curve.volume, curve.reading
    best = _best_split(v, y)
    guess = _cross(_fit(v[:best], y[:best]), _fit(v[best:], y[best:]))
    gap = 0.05 * float(v[-1] - v[0])
    left, right = v < guess - gap, v > guess + gap
    if left.sum() >= LEAST and right.sum() >= LEAST:
        first, second = _fit(v[left], y[left]), _fit(v[right], y[right])
    else:
        first, second = _fit(v[:best], y[:best]), _fit(v[best:], y[best:])
    _check_bend(first, second)
    volume = _cross(first, second)
    if not v[0] < volume < v[-1]:
        raise ValueError(f"The two segments cross at {volume:g} mL, outside the curve ({v[0]:g} to {v[-1]:g} mL).")
    return volume, _cross_u(first, second, volume)


def _fit(v: FloatArray, y: FloatArray) -> tuple[FloatArray, FloatArray]:
    design = np.column_stack([np.ones_like(v), v])
    line, *_ = np.linalg.lstsq(design, y, rcond=None)
    variance = float(((y - design @ line) ** 2).sum()) / max(v.size - 2, 1)
    inverse = np.linalg.pinv(design)
    return np.asarray(line, dtype=np.float64), inverse @ inverse.T * variance


def _best_split(v: FloatArray, y: FloatArray) -> int:
    """Points on the first line; running sums give the sum of squares of every split at once."""
    size = v.size
    ahead = _misfits(v, y)[LEAST - 1 : size - LEAST]
    behind = _misfits(v[::-1], y[::-1])[LEAST - 1 : size - LEAST][::-1]
    return LEAST + int((ahead + behind).argmin())


def _misfits(v: FloatArray, y: FloatArray) -> FloatArray:
    """Sum of squares about the line through the first 1, 2, 3 ... points."""
    v, y, n = v - v.mean(), y - y.mean(), np.arange(1.0, v.size + 1)
    sum_v, sum_y = np.cumsum(v), np.cumsum(y)
    square_v = np.cumsum(v * v) - sum_v**2 / n
    product = np.cumsum(v * y) - sum_v * sum_y / n
    square_y = np.cumsum(y * y) - sum_y**2 / n
    slope = np.divide(product, square_v, out=np.zeros_like(product), where=square_v > 0)
    return np.maximum(square_y - slope * product, 0.0)


def _check_bend(first: tuple[FloatArray, FloatArray], second: tuple[FloatArray, FloatArray]) -> None:
    """The best of many splits of one straight line bends by three to four standard deviations, so five are asked."""
    slopes = float(first[0][1]), float(second[0][1])
    least = 5 * math.sqrt(float(first[1][1, 1] + second[1][1, 1])) + 1e-9 * max(map(abs, slopes))
    if abs(slopes[0] - slopes[1]) <= least:
        raise ValueError("The two segments are one straight line within their scatter; there is no crossing.")


def _cross(first: tuple[FloatArray, FloatArray], second: tuple[FloatArray, FloatArray]) -> float:
    (a1, b1), (a2, b2) = first[0], second[0]
    if b1 == b2:
        raise ValueError("The two segments are parallel; there is no crossing.")
    return float((a2 - a1) / (b1 - b2))


def _cross_u(first: tuple[FloatArray, FloatArray], second: tuple[FloatArray, FloatArray], volume: float) -> float:
    slope = np.array([1.0, volume])
    variance = float(slope @ first[1] @ slope + slope @ second[1] @ slope)
    return math.sqrt(max(variance, 0.0)) / abs(float(first[0][1] - second[0][1]))
