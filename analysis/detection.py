"""How many endpoints a curve has, and where about.

A jump is a place where little titrant changes the reading much: a dip of dV/dy, the volume that a unit of the reading
takes, between two buffers that take more.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from scipy.ndimage import median_filter
from scipy.signal import find_peaks

from analysis.curve import Curve

FloatArray = npt.NDArray[np.float64]
LEAST_RISE = {"pH": 1.0, "mV": 60.0}
WINDOW = {"pH": 0.38, "mV": 22.5}  # two neighbouring pKa 2.5 apart still leave a dip between them
OF_SCATTER = 5.0  # times the scatter of a reading, that a window is at least
LEVELS = 4  # in each window
PROMINENCE = 0.215  # decades of dV/dy; neighbouring pKa 2.5 apart make 0.3, 2 mV of scatter in a buffer hardly 0.2
QUIET, LOUDER = 0.17, 0.7  # scatter over window, up to which that holds, and what is asked beyond it
SHOULDER = 0.15  # decades above the least that still belong to the bottom of a dip
BETWEEN = 3  # recorded points that part two jumps
STRAY = 5.0  # times the scatter, that a reading is away from the median of its neighbours


def endpoints_near(curve: Curve, *, noise: float) -> list[float]:
    """Volumes [mL] near which the curve jumps, in order.

    Stray readings are put in line, the reading is made monotone (pool adjacent violators) and inverted to V(y); dV/dy
    is the mean of a triangle of readings about each level, and dips of its logarithm that are deep enough count.

    Parameters
    ----------
    curve : Curve
    noise : float
        Standard deviation of a reading, see ``noise_of``.
    """
    y = _without_strays(curve.reading, noise=noise)
    y = monotone(y if y[-1] >= y[0] else -y)
    width = max(WINDOW.get(curve.quantity, float(np.ptp(y)) / 20), OF_SCATTER * noise)
    if np.ptp(y) < max(3 * width, LEAST_RISE.get(curve.quantity, 0.0)):
        return []
    log_width, volumes = _log_volume_per_reading(curve.volume, y, width=width)
    least = PROMINENCE + LOUDER * max(noise / width - QUIET, 0.0)
    dips, found = find_peaks(-log_width, prominence=least)
    bottoms = [
        (float(log_width[at]), _bottom(log_width, volumes, at=int(at), shoulder=min(SHOULDER, depth / 2)))
        for at, depth in zip(dips, found["prominences"], strict=True)
    ]
    return _merged(bottoms, curve.volume)


def _without_strays(y: FloatArray, *, noise: float) -> FloatArray:
    """One or two bad readings become the median of five; a curve that only rises is its own median and stays."""
    middle = median_filter(y, size=5, mode="nearest")
    return np.where(np.abs(y - middle) > STRAY * noise, middle, y)


def _log_volume_per_reading(v: FloatArray, y: FloatArray, *, width: float) -> tuple[FloatArray, FloatArray]:
    """log10 of dV/dy at even levels of the reading, and the volume of each level [mL].

    The second difference of the integral of V over y is dV/dy in the mean of a triangle of half this width, so that
    all points within it count and not the two at its edges alone.
    """
    y = y + 1e-9 * (y[-1] - y[0]) * np.linspace(0.0, 1.0, y.size)  # no two alike
    levels = np.arange(y[0], y[-1], width / LEVELS)
    volumes = np.interp(levels, y, v)
    below = np.clip(np.searchsorted(y, levels, side="right") - 1, 0, y.size - 1)
    whole = np.concatenate([[0.0], np.cumsum(np.diff(y) * (v[1:] + v[:-1]) / 2)])
    integral = whole[below] + (levels - y[below]) * (volumes + v[below]) / 2
    second = integral[2 * LEVELS :] - 2 * integral[LEVELS:-LEVELS] + integral[: -2 * LEVELS]
    return np.log10(np.maximum(second / width**2, 1e-6 * float(v[-1] - v[0]) / width)), volumes[LEVELS:-LEVELS]


def _bottom(log_width: FloatArray, volumes: FloatArray, *, at: int, shoulder: float) -> float:
    """Mean volume of the bottom of a dip, weighted by its depth; its single least level is at the mercy of scatter."""
    rim = log_width[at] + shoulder
    above = np.flatnonzero(log_width >= rim)
    low = int(above[above < at].max(initial=-1)) + 1
    high = int(above[above > at].min(initial=log_width.size))
    return float(np.average(volumes[low:high], weights=rim - log_width[low:high]))


def _merged(found: list[tuple[float, float]], volume: FloatArray) -> list[float]:
    """Dips with hardly a recorded point between them are one jump; the sharpest stands for it."""
    groups: list[list[tuple[float, float]]] = []
    for each in found:
        if groups and np.count_nonzero((volume > groups[-1][-1][1]) & (volume < each[1])) < BETWEEN:
            groups[-1].append(each)
        else:
            groups.append([each])
    return [min(group)[1] for group in groups]


def monotone(y: FloatArray) -> FloatArray:
    """The nearest non-decreasing sequence in least squares (pool adjacent violators)."""
    values: list[float] = []
    weights: list[int] = []
    for each in y:
        values.append(float(each))
        weights.append(1)
        while len(values) > 1 and values[-2] > values[-1]:
            whole = weights[-2] + weights[-1]
            values[-2] = (values[-2] * weights[-2] + values[-1] * weights[-1]) / whole
            weights[-2] = whole
            values.pop()
            weights.pop()
    return np.repeat(np.array(values), np.array(weights))
