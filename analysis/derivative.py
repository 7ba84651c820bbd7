"""Endpoints from the slope of a curve: no chemistry is needed, and the step of the grid is the limit."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve

FloatArray = npt.NDArray[np.float64]
SQRT_12 = math.sqrt(12)


def first_derivative(curve: Curve) -> tuple[FloatArray, FloatArray]:
    """Middle volumes [mL] and the difference quotient of the reading there [quantity per mL]."""
    middle = (curve.volume[1:] + curve.volume[:-1]) / 2
    return middle, np.diff(curve.reading) / np.diff(curve.volume)


def second_derivative_zero(curve: Curve, *, near: float) -> tuple[float, float]:
    """Volume [mL] where the second derivative changes sign, and its standard uncertainty.

    Linear interpolation between the two second differences beside the steepest interval. The method knows the
    inflection no better than the grid allows: the standard uncertainty is the step over the root of twelve.

    References
    ----------
    Meites, Goldman, Anal. Chim. Acta 29 (1963) 472-479 (inflection and equivalence point).
    """
    middle, slope = first_derivative(curve)
    size = np.abs(slope)
    peak = _peak(middle, size, near=near)
    step = float(curve.volume[peak + 1] - curve.volume[peak])
    if not 0 < peak < size.size - 1:
        return float(middle[peak]), step / 2
    change = np.diff(size) / np.diff(middle)
    between = (middle[1:] + middle[:-1]) / 2
    before, after = change[peak - 1], change[peak]
    if not before >= 0 >= after:  # no steepest place here, only the edge of what was searched
        return float(middle[peak]), step / 2
    share = before / (before - after) if before != after else 0.5
    volume = between[peak - 1] + share * (between[peak] - between[peak - 1])
    return float(volume), step / SQRT_12


def derivative_parabola(curve: Curve, *, near: float) -> tuple[float, float]:
    """Top of the parabola through the greatest slope and its neighbours: the same zero by another name."""
    middle, slope = first_derivative(curve)
    size = np.abs(slope)
    peak = min(max(_peak(middle, size, near=near), 1), size.size - 2)
    step = float(curve.volume[peak + 1] - curve.volume[peak])
    a, b, _ = np.polyfit(middle[peak - 1 : peak + 2] - middle[peak], size[peak - 1 : peak + 2], 2)
    top = middle[peak] - b / (2 * a) if a < 0 else middle[peak]
    return float(np.clip(top, middle[peak - 1], middle[peak + 1])), step / SQRT_12


def inverse_square_parabola(curve: Curve, *, near: float) -> tuple[float, float]:
    """Vertex of the parabola through (dV/dy)^2 beside the steepest place, exact for a strong acid and a strong base."""
    middle, slope = first_derivative(curve)
    peak = _peak(middle, np.abs(slope), near=near)
    low, high = max(peak - 2, 0), min(peak + 3, slope.size)
    x, y = middle[low:high] - middle[peak], 1.0 / np.maximum(slope[low:high] ** 2, 1e-12)
    step = float(curve.volume[peak + 1] - curve.volume[peak])
    if x.size < 3:
        return float(middle[peak]), step / 2
    a, b, _ = np.polyfit(x, y, 2)
    inside = a > 0 and abs(b / (2 * a)) <= step
    return float(middle[peak] - b / (2 * a)) if inside else float(middle[peak]), step / SQRT_12


def local_polynomial(curve: Curve, *, near: float, points: int = 7) -> tuple[float, float]:
    """Inflection of a cubic through the points beside the steepest place; for dense grids."""
    middle, slope = first_derivative(curve)
    peak = _peak(middle, np.abs(slope), near=near)
    low = min(max(peak + 1 - points // 2, 0), max(curve.volume.size - points, 0))
    x, y = curve.volume[low : low + points] - middle[peak], curve.reading[low : low + points]
    step = float(curve.volume[peak + 1] - curve.volume[peak])
    a, b, _, _ = np.polyfit(x, y, 3)
    inside = a != 0 and abs(b / (3 * a)) <= 2 * step
    return float(middle[peak] - b / (3 * a)) if inside else float(middle[peak]), step / SQRT_12


def _peak(middle: FloatArray, size: FloatArray, *, near: float) -> int:
    window = np.abs(middle - near) <= max(3 * float(np.median(np.diff(middle))), 0.02 * float(middle[-1]))
    return int(np.where(window, size, -1.0).argmax())
