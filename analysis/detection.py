"""How many endpoints a curve has, and where about."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from scipy.signal import find_peaks

from analysis.curve import Curve

FloatArray = npt.NDArray[np.float64]
LEAST_RISE = {"pH": 1.0, "mV": 60.0}
BIN = {"pH": 0.30, "mV": 18.0}
PROMINENCE = 0.20
LN_10 = np.log(10.0)


def endpoints_near(curve: Curve, *, noise: float) -> list[float]:
    """Volumes [mL] near which the curve jumps, in order.

    The reading is made monotone (pool adjacent violators) and inverted to V(y) in bins; interior minima of
    log10(dV/dy) whose prominence exceeds 0.20 + 3 u count, with u = 2 s / (bin ln 10).
    """
    sign = 1.0 if curve.reading[-1] >= curve.reading[0] else -1.0
    y = monotone(sign * curve.reading)
    width = max(BIN.get(curve.quantity, float(np.ptp(y)) / 20), 12 * noise)
    if np.ptp(y) < 4 * width:
        return []
    edges = np.arange(y[0], y[-1], width)
    y_strict = y + 1e-9 * np.arange(y.size)
    volumes = np.interp(edges, y_strict, curve.volume)
    log_width = np.log10(np.maximum(np.diff(volumes), 1e-4))
    least = PROMINENCE + 3 * 2 * noise / (width * LN_10)
    found = [
        (float(log_width[at]), float((volumes[at] + volumes[at + 1]) / 2))
        for at in _minima(log_width, prominence=least)
    ]
    return _merged(found, curve)


def _merged(found: list[tuple[float, float]], curve: Curve) -> list[float]:
    """Minima within two points of the grid are one jump; the sharpest stands for it."""
    groups: list[list[tuple[float, float]]] = []
    for each in found:
        at = int(np.searchsorted(curve.volume, each[1]))
        reach = float(curve.volume[min(at + 2, curve.volume.size - 1)] - curve.volume[max(at - 2, 0)])
        if groups and each[1] - groups[-1][-1][1] <= reach:
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


def _minima(x: FloatArray, *, prominence: float) -> list[int]:
    found, _ = find_peaks(-x, prominence=prominence)
    return [int(at) for at in found]
