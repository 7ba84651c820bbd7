"""A weighted straight line and where it ends."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]


def weighted_line(x: FloatArray, y: FloatArray, *, sd: FloatArray) -> tuple[float, float, float] | None:
    """Intercept, slope and standard uncertainty of the intercept; None where the points have no spread in x.

    Parameters
    ----------
    x, y : array
    sd : array
        Standard deviation of each y; where the points scatter more than that, they count.

    References
    ----------
    Bevington, Robinson, Data Reduction and Error Analysis for the Physical Sciences, 3rd ed. (2003), chapter 6.
    """
    if not (np.all(np.isfinite(x)) and np.all(np.isfinite(y)) and np.all(np.isfinite(sd))):
        return None
    weight = 1 / sd**2
    whole = float(weight.sum())
    centre, level = float(weight @ x) / whole, float(weight @ y) / whole
    spread = float(weight @ (x - centre) ** 2)
    if not spread > 1e-12 * whole * (centre**2 + 1e-300):
        return None
    slope = float(weight @ ((x - centre) * (y - level))) / spread
    misfit = float(weight @ (y - level - slope * (x - centre)) ** 2) / max(x.size - 2, 1)
    variance = max(misfit, 1.0) * (1 / whole + centre**2 / spread)
    return level - slope * centre, slope, math.sqrt(variance)
