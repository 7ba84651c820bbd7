"""The scatter of a curve's readings, from the curve itself."""

from __future__ import annotations

import numpy as np

from analysis.curve import Curve

FLAT_SHARE = 0.6


def noise_of(curve: Curve) -> float:
    """Standard deviation of a reading: each point against the cubic through its four neighbours, robustly.

    Only the flattest part of the curve is used, and the median absolute deviation over 0.6745.
    """
    v, y = curve.volume, curve.reading
    if v.size < 7:
        return 0.0
    away, scale, steep = [], [], []
    for place in range(2, v.size - 2):
        near = [place - 2, place - 1, place + 1, place + 2]
        weights = _lagrange(v[near], float(v[place]))
        away.append(float(y[place] - weights @ y[near]))
        scale.append(float(np.sqrt(1 + (weights**2).sum())))
        steep.append(abs(float((y[place + 1] - y[place - 1]) / (v[place + 1] - v[place - 1]))))
    flat = np.argsort(steep)[: max(3, int(FLAT_SHARE * len(steep)))]
    return float(np.median(np.abs(np.array(away)[flat] / np.array(scale)[flat])) / 0.6745)


def _lagrange(nodes: np.ndarray, at: float) -> np.ndarray:
    weights = np.ones(nodes.size)
    for i in range(nodes.size):
        for j in range(nodes.size):
            if i != j:
                weights[i] *= (at - nodes[j]) / (nodes[i] - nodes[j])
    return weights
