"""Gran's linearization: straight lines before and after the equivalence point.

References
----------
Gran, Analyst 77 (1952) 661-671.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import numpy.typing as npt

from analysis.activity import nernst
from analysis.curve import Curve
from analysis.detection import endpoints_near
from analysis.equivalence import Step, equivalence_steps
from analysis.gran_acid_base import LEAST, Plot, Side, sides_of
from analysis.line import weighted_line
from analysis.noise import noise_of
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
MOST_DECADES = 18  # as wide as pH
RELATIVE_SD = 0.01  # of a point of a line: 0.25 mV; where they scatter more, that counts
LEAN, STRETCH, APART = 0.04, 1.015, 0.04  # what no slope of a line tells: pH of the free ions, electrode, pKa


def gran(
    curve: Curve, *, system: System, near: float, step: int | None = None, after: float | None = None
) -> tuple[float, float]:
    """Equivalence volume [mL] from the lines on both sides, weighted by their variances, and standard uncertainty.

    Parameters
    ----------
    curve : Curve
    system : System
    near : float
        About where the endpoint is [mL].
    step : int, optional
        Which of ``equivalence_steps(system)`` it is, from 0; the last one with a jump otherwise.
    after : float, optional
        The endpoint before it [mL], where there are several analytes; found on the curve otherwise.

    Raises
    ------
    ValueError
        When the chemistry has no line for this endpoint, neither side has four usable points, or the lines end
        outside the curve.
    """
    if not 0 < near < np.inf:
        raise ValueError(f"The endpoint is sought near {near:g} mL; more than 0 mL is expected.")
    if system.kind == "acid_base":
        volume, u = _acid_base(curve, system=system, near=near, step=step, after=after)
    else:
        volume, u = _combined(_other(curve, system, near=near, after=after))
    if not curve.volume[0] <= volume <= curve.volume[-1]:
        raise ValueError(
            f"Gran's lines end at {volume:g} mL, outside the curve ({curve.volume[0]:g} to {curve.volume[-1]:g} mL)."
        )
    return volume, u


def _combined(sides: list[Side]) -> Side:
    if not sides:
        raise ValueError("Gran's lines need four usable points before or after the endpoint.")
    weights = [1 / u**2 for _, u in sides]
    volume = sum(v * w for (v, _), w in zip(sides, weights, strict=True)) / sum(weights)
    u = math.sqrt(1 / sum(weights))
    return volume, max(u, abs(sides[0][0] - sides[-1][0]) / 2)


def _acid_base(curve: Curve, *, system: System, near: float, step: int | None, after: float | None) -> Side:
    plot = _plot(curve, system=system, near=near, step=step, after=after)
    volume, u = _combined(sides_of(plot))
    for _ in range(2):  # with a better idea of where the step ends
        if not plot.base < volume <= curve.volume[-1] or abs(volume - plot.near) < u:
            break
        plot = replace(plot, near=volume)
        volume, u = _combined(sides_of(plot))
    unknown = (replace(plot, lean=LEAN), replace(plot, stretch=STRETCH), replace(plot, apart=APART))
    varied = [sides_of(changed) for changed in unknown]
    away = [_combined(sides)[0] - volume for sides in varied if sides]
    return volume, math.hypot(u, *away)


def _plot(curve: Curve, *, system: System, near: float, step: int | None, after: float | None) -> Plot:
    steps = equivalence_steps(system)
    place = _last_jump(steps) if step is None else step
    if not 0 <= place < len(steps):
        raise ValueError(f"Step is {place}; 0 to {len(steps) - 1} is expected.")
    chosen, is_last = steps[place], place + 1 == len(steps)
    if any(later.analyte != chosen.analyte for later in steps[place + 1 :]):
        raise ValueError("Gran's lines of several acids or bases are drawn for the last endpoint only.")
    if place > 0 and steps[place - 1].analyte != chosen.analyte and not steps[place - 1].is_jump:
        raise ValueError(
            f"{steps[place - 1].analyte.capitalize()} and {chosen.analyte} are titrated together; Gran's lines need "
            "one of them alone."
        )
    analyte = next(item for item in system.analytes if item.name == chosen.analyte)
    alone, protons = len(system.analytes) == 1, chosen.proton
    begin = 0.0 if alone else _begin(curve, system, near=near, after=after)
    base = 0.0 if alone else max(near - protons * (near - begin), 0.0)
    scatter = noise_of(curve) / (1.0 if curve.quantity == "pH" else nernst(system.temperature))
    return Plot(curve, system, analyte, protons, is_last, near, base, scatter)


def _last_jump(steps: tuple[Step, ...]) -> int:
    return max((k for k, step in enumerate(steps) if step.is_jump), default=len(steps) - 1)


def _begin(curve: Curve, system: System, *, near: float, after: float | None) -> float:
    """Where the analyte of this endpoint begins to be titrated [mL]: the endpoint before it, or the first drop."""
    if after is not None:
        if not 0 <= after < near:
            raise ValueError(f"The endpoint before is at {after:g} mL; 0 to {near:g} mL is expected.")
        return after
    if len(system.analytes) == 1:
        return 0.0
    return max((jump for jump in endpoints_near(curve, noise=noise_of(curve)) if jump < 0.9 * near), default=0.0)


def _other(curve: Curve, system: System, *, near: float, after: float | None) -> list[Side]:
    begin = _begin(curve, system, near=near, after=after)
    sides = (_before(curve, system, near, begin), _after(curve, system, near, begin))
    return [side for side in sides if side is not None]


def _before(curve: Curve, system: System, near: float, begin: float) -> Side | None:
    """The line of the analyte that is left: as such, or beside its product (redox)."""
    use = (curve.volume > begin + 0.25 * (near - begin)) & (curve.volume < begin + 0.93 * (near - begin))
    v = curve.volume[use]
    electrons = system.analytes[-1].electrons if system.kind == "redox" else 1
    left = _grown(curve, system, use, sign=_sign_of_analyte(system) * electrons)
    if left is None:
        return None
    return _line(v, (v - begin) * left if system.kind == "redox" else (system.sample_volume + v) * left)


def _after(curve: Curve, system: System, near: float, begin: float) -> Side | None:
    """The line of the titrant in excess: as such, or beside its product (redox, complex)."""
    use = (curve.volume > near + 0.05 * (near - begin)) & (curve.volume < near + 0.6 * (near - begin))
    v = curve.volume[use]
    is_ratio = system.kind in ("redox", "complex")
    electrons = system.titrant_electrons if system.kind == "redox" else 1
    excess = _grown(curve, system, use, sign=-_sign_of_analyte(system) * electrons)
    return None if excess is None else _line(v, excess if is_ratio else (system.sample_volume + v) * excess)


def _sign_of_analyte(system: System) -> int:
    """1 where the logarithm that the electrode follows grows with the analyte that is left, -1 where it falls."""
    return -1 if system.titrant in ("silver", "oxidant") else 1


def _grown(curve: Curve, system: System, use: npt.NDArray[np.bool_], *, sign: int) -> FloatArray | None:
    """Ten to the power of the reading in decades; None for too few points or readings that no solution gives."""
    if np.count_nonzero(use) < LEAST:
        return None
    unit = nernst(system.temperature)
    if system.kind == "complex":
        unit /= max(abs(system.analytes[0].charge), 1)
    decades = sign * (curve.reading[use] - curve.reading[use].mean()) / unit
    return None if np.ptp(decades) > MOST_DECADES else np.asarray(10**decades)


def _line(v: FloatArray, g: FloatArray) -> Side | None:
    """Where the line through the points ends: the volume as a line of g, so that its error is that of g."""
    found = weighted_line(g, v, sd=np.hypot(RELATIVE_SD * g * float(np.ptp(v) / max(np.ptp(g), 1e-300)), 1e-3))
    return None if found is None else (found[0], found[2])
