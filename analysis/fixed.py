"""Endpoints at a fixed reading, such as pH 8.2 for acidity or pH 4.5 for alkalinity."""

from __future__ import annotations

import math

import numpy as np

from analysis.curve import Curve

READING_U = {
    "pH": 0.06,
    "mV": 3.5,
}  # of the electrode's zero between calibrations, as the model of a curve takes it; beside the scatter
SQRT_12 = math.sqrt(12)
CLEAR = 6  # times the scatter of a reading, that a slope is told from two of them


def fixed_reading(curve: Curve, *, reading: float, noise: float) -> tuple[float, float]:
    """Volume [mL] at which a reading is first passed, interpolated linearly, and its standard uncertainty.

    Raises
    ------
    ValueError
        When the curve does not pass the reading.
    """
    side = np.sign(curve.reading - reading)
    crossing = np.flatnonzero(side[:-1] * side[1:] <= 0)
    crossing = crossing[curve.reading[crossing] != curve.reading[crossing + 1]]
    if crossing.size == 0:
        low, high = curve.reading.min(), curve.reading.max()
        raise ValueError(f"The curve runs from {low:g} to {high:g} {curve.quantity} and does not pass {reading:g}.")
    volume, slope = _line_about(curve, int(crossing[0]), reading=reading, noise=noise)
    u_reading = math.hypot(READING_U.get(curve.quantity, 0.0), noise)
    return volume, math.hypot(u_reading / abs(slope), _bend(curve, int(crossing[0]), reading=reading) / SQRT_12)


def _bend(curve: Curve, at: int, *, reading: float) -> float:
    """How far apart the crossing is by the straight line between two points and by the lines beside it, drawn on [mL].

    A curve bends between its points: the crossing lies between these lines, and never outside the two points.
    """
    v, y = curve.volume, curve.reading
    width, rise = float(v[at + 1] - v[at]), float(y[at + 1] - y[at])
    share = float((reading - y[at]) / rise)
    shares = [share]
    if at > 0:
        shares.append(_drawn_on(share, slope=float(y[at] - y[at - 1]) / float(v[at] - v[at - 1]) * width / rise))
    if at + 2 < v.size:
        slope = float(y[at + 2] - y[at + 1]) / float(v[at + 2] - v[at + 1]) * width / rise
        shares.append(1.0 - _drawn_on(1.0 - share, slope=slope))
    return width * (max(shares) - min(shares))


def _drawn_on(share: float, *, slope: float) -> float:
    """How much of the interval a line takes to rise by this share of its rise: all of it, if it does not get there."""
    if share <= 0:
        return 0.0
    return share / slope if slope > share else 1.0


def _line_about(curve: Curve, at: int, *, reading: float, noise: float) -> tuple[float, float]:
    """Volume and slope at a reading from the two points beside it; where those differ by no more than scatter, from
    as many as it takes to tell them apart."""
    low, high = at, at + 1
    while abs(curve.reading[high] - curve.reading[low]) < CLEAR * noise and (low > 0 or high < curve.reading.size - 1):
        low, high = max(low - 1, 0), min(high + 1, curve.reading.size - 1)
    v, y = curve.volume[low : high + 1], curve.reading[low : high + 1]
    if v.size == 2:
        slope = float((y[1] - y[0]) / (v[1] - v[0]))
        return float(v[0] + (reading - y[0]) / slope), slope
    slope = float(((v - v.mean()) * (y - y.mean())).sum() / ((v - v.mean()) ** 2).sum())
    if slope == 0:
        raise ValueError(f"The curve does not rise or fall clearly at {reading:g} {curve.quantity}.")
    volume = float(v.mean() + (reading - y.mean()) / slope)
    return min(max(volume, float(v[0])), float(v[-1])), slope
