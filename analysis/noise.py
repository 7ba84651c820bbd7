"""The scatter of a curve's readings, from the curve itself."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve

FloatArray = npt.NDArray[np.float64]
FLAT_SHARE = 0.6
NEIGHBOURS = (-2, -1, 1, 2)


def noise_of(curve: Curve) -> float:
    """Standard deviation of a reading: each point against the cubic through its four neighbours, robustly.

    Only the flattest part of the curve is used, and the median absolute deviation over 0.6745.
    """
    v, y = curve.volume, curve.reading
    size = v.size
    if size < 7:
        return 0.0
    nodes = np.stack([v[2 + k : size - 2 + k] for k in NEIGHBOURS])
    weights = _lagrange(nodes, v[2:-2])
    away = y[2:-2] - (weights * np.stack([y[2 + k : size - 2 + k] for k in NEIGHBOURS])).sum(axis=0)
    scale = np.sqrt(1 + (weights**2).sum(axis=0))
    steep = np.abs((y[3:-1] - y[1:-3]) / (v[3:-1] - v[1:-3]))
    flat = np.argsort(steep)[: max(3, int(FLAT_SHARE * steep.size))]
    return float(np.median(np.abs(away[flat] / scale[flat])) / 0.6745)


def _lagrange(nodes: FloatArray, at: FloatArray) -> FloatArray:
    """Weight of each node in the polynomial through all of them, at these places; nodes by places."""
    weights = np.ones_like(nodes)
    for i in range(len(nodes)):
        for j in range(len(nodes)):
            if i != j:
                weights[i] *= (at - nodes[j]) / (nodes[i] - nodes[j])
    return weights
