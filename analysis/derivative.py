"""Endpoints from the slope of a curve: no chemistry is needed, and the step of the grid is the limit."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve
from analysis.noise import noise_of

FloatArray = npt.NDArray[np.float64]
SQRT_3, SQRT_12 = math.sqrt(3), math.sqrt(12)
AS_STEEP = 0.9  # of the steepest, that no one tells from it: the inflection of a weak acid is not its equivalence
OF_SCATTER, GAP = 2.0, 3  # standard deviations of a difference of slopes; intervals
CLEAR = 70.0  # times the scatter, that the points of a cubic rise


def first_derivative(curve: Curve) -> tuple[FloatArray, FloatArray]:
    """Middle volumes [mL] and the difference quotient of the reading there [quantity per mL]."""
    middle = (curve.volume[1:] + curve.volume[:-1]) / 2
    return middle, np.diff(curve.reading) / np.diff(curve.volume)


def second_derivative_zero(curve: Curve, *, near: float) -> tuple[float, float]:
    """Volume [mL] where the second derivative changes sign, and its standard uncertainty.

    Linear interpolation between the two second differences beside the steepest interval. The method knows the
    inflection no better than the grid and the scatter allow: the standard uncertainty is the width of all that is as
    steep as the steepest, one step at least, over the root of twelve.

    References
    ----------
    Meites, Goldman, Anal. Chim. Acta 29 (1963) 472-479 (inflection and equivalence point).
    """
    middle, slope = first_derivative(curve)
    size = np.abs(slope)
    peak = _peak(middle, size, near=near)
    u = _standard_uncertainty(curve, peak)
    if not 0 < peak < size.size - 1:
        return float(middle[peak]), u * SQRT_3
    change = np.diff(size) / np.diff(middle)
    between = (middle[1:] + middle[:-1]) / 2
    before, after = change[peak - 1], change[peak]
    if not before >= 0 >= after:  # no steepest place here, only the edge of what was searched
        return float(middle[peak]), u * SQRT_3
    share = before / (before - after) if before != after else 0.5
    volume = between[peak - 1] + share * (between[peak] - between[peak - 1])
    return float(volume), u


def derivative_parabola(curve: Curve, *, near: float) -> tuple[float, float]:
    """Top of the parabola through the greatest slope and its neighbours: the same zero by another name."""
    middle, slope = first_derivative(curve)
    size = np.abs(slope)
    peak = min(max(_peak(middle, size, near=near), 1), size.size - 2)
    a, b, _ = np.polyfit(middle[peak - 1 : peak + 2] - middle[peak], size[peak - 1 : peak + 2], 2)
    top = middle[peak] - b / (2 * a) if a < 0 else middle[peak]
    return float(np.clip(top, middle[peak - 1], middle[peak + 1])), _standard_uncertainty(curve, peak)


def inverse_square_parabola(curve: Curve, *, near: float) -> tuple[float, float]:
    """Vertex of the parabola through (dV/dy)^2 beside the steepest place, exact for a strong acid and a strong base."""
    middle, slope = first_derivative(curve)
    peak = _peak(middle, np.abs(slope), near=near)
    low, high = max(peak - 2, 0), min(peak + 3, slope.size)
    x, y = middle[low:high] - middle[peak], 1.0 / np.maximum(slope[low:high] ** 2, 1e-12)
    step, u = float(curve.volume[peak + 1] - curve.volume[peak]), _standard_uncertainty(curve, peak)
    if x.size < 3:
        return float(middle[peak]), u * SQRT_3
    a, b, _ = np.polyfit(x, y, 2)
    inside = a > 0 and abs(b / (2 * a)) <= step
    return float(middle[peak] - b / (2 * a)) if inside else float(middle[peak]), u


def local_polynomial(curve: Curve, *, near: float, points: int = 6) -> tuple[float, float]:
    """Inflection of a cubic through the points beside the steepest place, as many as stand out of the scatter.

    For dense grids, where the difference quotient is mostly scatter.
    """
    middle, slope = first_derivative(curve)
    peak = _peak(middle, np.abs(slope), near=near)
    low, high = _beside(curve, peak, near=near, points=points)
    centre = float(middle[peak] if high - low <= points else near)
    x, y = curve.volume[low:high] - centre, curve.reading[low:high]
    reach = max(2 * float(curve.volume[peak + 1] - curve.volume[peak]), float(np.ptp(x)) / 2)
    a, b, _, _ = np.polyfit(x, y, 3)
    inside = a != 0 and abs(b / (3 * a)) <= reach
    return centre - float(b / (3 * a)) if inside else centre, _standard_uncertainty(curve, peak)


def _beside(curve: Curve, peak: int, *, near: float, points: int) -> tuple[int, int]:
    """Bounds of the points about an interval: this many, or more about the jump until they rise out of the scatter."""
    size, least = curve.volume.size, CLEAR * noise_of(curve)
    low = min(max(peak + 1 - points // 2, 0), max(size - points, 0))
    high = min(low + points, size)
    if np.ptp(curve.reading[low:high]) < least:
        low = high = int(np.searchsorted(curve.volume, near))
    while high - low < min(points, size) or (low > 0 and high < size and np.ptp(curve.reading[low:high]) < least):
        low, high = max(low - 1, 0), min(high + 1, size)
    return low, high


def _peak(middle: FloatArray, size: FloatArray, *, near: float) -> int:
    reach = max(3 * float(np.median(np.diff(middle))), 0.02 * float(middle[-1] - middle[0]))
    window = np.abs(middle - near) <= reach
    return int(np.where(window, size, -1.0).argmax())


def _standard_uncertainty(curve: Curve, peak: int) -> float:
    """Width of all that is as steep as the steepest interval within scatter, over the root of twelve [mL]."""
    width = np.diff(curve.volume)
    size = np.abs(np.diff(curve.reading)) / width
    scatter = math.sqrt(2) * noise_of(curve) / width
    alike = size >= AS_STEEP * size[peak] - OF_SCATTER * np.hypot(scatter, scatter[peak])
    low, high = _last_within(alike[peak::-1]), _last_within(alike[peak:])
    return float(curve.volume[peak + high + 1] - curve.volume[peak - low]) / SQRT_12


def _last_within(alike: npt.NDArray[np.bool_]) -> int:
    """How far one can go from the first place to others like it without a wider gap."""
    places = np.flatnonzero(alike)
    wide = np.flatnonzero(np.diff(places) > GAP)
    return int(places[wide[0] if wide.size else -1])
