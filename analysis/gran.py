"""Gran's linearization: straight lines before and after the equivalence point.

References
----------
Gran, Analyst 77 (1952) 661-671; activity is taken as constant over the points used.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from analysis.activity import nernst
from analysis.curve import Curve
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
LEAST = 4
MOST_DECADES = 18  # as wide as pH


def gran(curve: Curve, *, system: System, near: float) -> tuple[float, float]:
    """Equivalence volume [mL] from the lines on both sides, weighted by their variances.

    Raises
    ------
    ValueError
        When neither side has four usable points, or the lines end outside the curve.
    """
    sides = [side for side in (_before(curve, system, near), _after(curve, system, near)) if side is not None]
    if not sides:
        raise ValueError("Gran's lines need four usable points before or after the endpoint.")
    weights = [1 / u**2 for _, u in sides]
    volume = sum(v * w for (v, _), w in zip(sides, weights, strict=True)) / sum(weights)
    if not curve.volume[0] <= volume <= curve.volume[-1]:
        raise ValueError(
            f"Gran's lines end at {volume:g} mL, outside the curve ({curve.volume[0]:g} to {curve.volume[-1]:g} mL)."
        )
    u = math.sqrt(1 / sum(weights))
    if len(sides) == 2:
        u = max(u, abs(sides[0][0] - sides[1][0]) / 2)
    return volume, u


def _before(curve: Curve, system: System, near: float) -> tuple[float, float] | None:
    """The line of the analyte that is left: as such, or beside its product where the electrode sees their ratio."""
    use = (curve.volume > 0.25 * near) & (curve.volume < 0.93 * near)
    v = curve.volume[use]
    is_ratio = system.kind == "redox" or (system.kind == "acid_base" and bool(system.analytes[-1].pKa))
    electrons = system.analytes[-1].electrons if system.kind == "redox" else 1
    left = _grown(curve, system, use, sign=_sign_of_analyte(system) * electrons)
    return None if left is None else _line(v, v * left if is_ratio else (system.sample_volume + v) * left)


def _after(curve: Curve, system: System, near: float) -> tuple[float, float] | None:
    """The line of the titrant in excess: as such, or beside its product (redox, complex)."""
    use = (curve.volume > 1.05 * near) & (curve.volume < 1.6 * near)
    v = curve.volume[use]
    is_ratio = system.kind in ("redox", "complex")
    electrons = system.titrant_electrons if system.kind == "redox" else 1
    excess = _grown(curve, system, use, sign=-_sign_of_analyte(system) * electrons)
    return None if excess is None else _line(v, excess if is_ratio else (system.sample_volume + v) * excess)


def _sign_of_analyte(system: System) -> int:
    """1 where the logarithm that the electrode follows grows with the analyte that is left, -1 where it falls."""
    return -1 if system.titrant in ("acid", "silver", "oxidant") else 1


def _grown(curve: Curve, system: System, use: npt.NDArray[np.bool_], *, sign: int) -> FloatArray | None:
    """Ten to the power of the reading in decades; None for too few points or readings that no solution gives."""
    if np.count_nonzero(use) < LEAST:
        return None
    unit = -1.0 if curve.quantity == "pH" else nernst(system.temperature)
    if system.kind == "complex":
        unit /= max(abs(system.analytes[0].charge), 1)
    decades = sign * (curve.reading[use] - curve.reading[use].mean()) / unit
    return None if np.ptp(decades) > MOST_DECADES else np.asarray(10**decades)


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
    slope = np.array([-1 / b, a / b**2])
    # by the inverse of the design: its square would be singular much sooner
    u = float(np.linalg.norm(slope @ np.linalg.pinv(design))) * math.sqrt(variance)
    return (-a / b, max(u, 1e-4)) if math.isfinite(u) else None
