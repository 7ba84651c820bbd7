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
        When the lines do not cross inside the curve.
    """
    v, y = curve.volume, curve.reading
    splits = range(LEAST, v.size - LEAST + 1)
    best = min(splits, key=lambda split: _misfit(v[:split], y[:split]) + _misfit(v[split:], y[split:]))
    guess = _cross(_fit(v[:best], y[:best]), _fit(v[best:], y[best:]))
    gap = 0.05 * float(v[-1] - v[0])
    left, right = v < guess - gap, v > guess + gap
    if left.sum() >= LEAST and right.sum() >= LEAST:
        first, second = _fit(v[left], y[left]), _fit(v[right], y[right])
    else:
        first, second = _fit(v[:best], y[:best]), _fit(v[best:], y[best:])
    volume = _cross(first, second)
    if not v[0] < volume < v[-1]:
        raise ValueError(f"The two segments cross at {volume:g} mL, outside the curve ({v[0]:g} to {v[-1]:g} mL).")
    return volume, _cross_u(first, second, volume)


def _fit(v: FloatArray, y: FloatArray) -> tuple[FloatArray, FloatArray]:
    design = np.column_stack([np.ones_like(v), v])
    line, *_ = np.linalg.lstsq(design, y, rcond=None)
    variance = float(((y - design @ line) ** 2).sum()) / max(v.size - 2, 1)
    return np.asarray(line, dtype=np.float64), np.linalg.inv(design.T @ design) * variance


def _misfit(v: FloatArray, y: FloatArray) -> float:
    line = np.polyfit(v, y, 1)
    return float(((y - np.polyval(line, v)) ** 2).sum())


def _cross(first: tuple[FloatArray, FloatArray], second: tuple[FloatArray, FloatArray]) -> float:
    (a1, b1), (a2, b2) = first[0], second[0]
    if b1 == b2:
        raise ValueError("The two segments are parallel; there is no crossing.")
    return float((a2 - a1) / (b1 - b2))


def _cross_u(first: tuple[FloatArray, FloatArray], second: tuple[FloatArray, FloatArray], volume: float) -> float:
    slope = np.array([1.0, volume])
    variance = float(slope @ first[1] @ slope + slope @ second[1] @ slope)
    return math.sqrt(variance) / abs(float(first[0][1] - second[0][1]))
