"""Endpoints at a fixed reading, such as pH 8.2 for acidity or pH 4.5 for alkalinity."""

from __future__ import annotations

import math

import numpy as np

from analysis.curve import Curve

READING_U = {
    "pH": 0.03,
    "mV": 2.0,
}  # of the calibration of the electrode (common practice), beside the scatter


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
    at = int(crossing[0])
    v, y = curve.volume[at : at + 2], curve.reading[at : at + 2]
    slope = float((y[1] - y[0]) / (v[1] - v[0]))
    volume = float(v[0] + (reading - y[0]) / slope)
    u_reading = math.hypot(READING_U.get(curve.quantity, 0.0), noise)
    step = float(v[1] - v[0])
    return volume, math.hypot(u_reading / abs(slope), step / 20)
