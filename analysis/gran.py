"""Gran's linearization: straight lines before and after the equivalence point.

References
----------
Gran, Analyst 77 (1952) 661-671; activity is taken as constant over the points used.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve
from analysis.explicit import NERNST
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
LEAST = 4


def gran(curve: Curve, *, system: System, near: float) -> tuple[float, float]:
    """Equivalence volume [mL] from the lines on both sides, weighted by their variances.

    Raises
    ------
    ValueError
        When neither side has four usable points.
    """
    sides = [side for side in (_before(curve, system, near), _after(curve, system, near)) if side is not None]
    if not sides:
        raise ValueError("Gran's lines need four usable points before or after the endpoint.")
    weights = [1 / u**2 for _, u in sides]
    volume = sum(v * w for (v, _), w in zip(sides, weights, strict=True)) / sum(weights)
    u = math.sqrt(1 / sum(weights))
    if len(sides) == 2:
        u = max(u, abs(sides[0][0] - sides[1][0]) / 2)
    return volume, u


def _before(curve: Curve, system: System, near: float) -> tuple[float, float] | None:
    use = (curve.volume > 0.25 * near) & (curve.volume < 0.93 * near)
    v, y = curve.volume[use], curve.reading[use]
    if system.kind == "precipitation":
        return _line(v, (system.sample_volume + v) * 10 ** (-(y - y.mean()) / NERNST)) if v.size >= LEAST else None
    weak = bool(system.analytes[-1].pKa)
    sign = -1.0 if system.titrant == "base" else 1.0
    grown = 10 ** (sign * (y - y.mean())) if y.size else y
    return _line(v, v * grown if weak else (system.sample_volume + v) * grown) if v.size >= LEAST else None


def _after(curve: Curve, system: System, near: float) -> tuple[float, float] | None:
    use = (curve.volume > 1.05 * near) & (curve.volume < 1.6 * near)
    v, y = curve.volume[use], curve.reading[use]
    if v.size < LEAST:
        return None
    scale = 1 / NERNST if system.kind == "precipitation" else (1.0 if system.titrant == "base" else -1.0)
    return _line(v, (system.sample_volume + v) * 10 ** (scale * (y - y.mean())))


def _line(v: FloatArray, g: FloatArray) -> tuple[float, float] | None:
    """Where a straight line through the points crosses zero, with its standard uncertainty; weights 1/g^2."""
    if not np.all(np.isfinite(g)) or np.any(g <= 0):
        return None
    design = np.column_stack([np.ones_like(v), v]) / g[:, None]
    coefficients, _, rank, _ = np.linalg.lstsq(design, np.ones_like(v), rcond=None)
    if rank < 2 or coefficients[1] == 0:
        return None
    a, b = map(float, coefficients)
    variance = float(((np.ones_like(v) - design @ coefficients) ** 2).sum()) / max(v.size - 2, 1)
    covariance = np.linalg.inv(design.T @ design) * variance
    slope = np.array([-1 / b, a / b**2])
    return -a / b, max(math.sqrt(float(slope @ covariance @ slope)), 1e-4)
