"""Gran's linearization: straight lines before and after the equivalence point.

References
----------
Gran, Analyst 77 (1952) 661-671.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from analysis.activity import nernst
from analysis.curve import Curve
from analysis.detection import endpoints_near
from analysis.equivalence import equivalence_steps
from analysis.gran_acid_base import LEAST, Plot, Side, Sides, sides_of, unknowns_of
from analysis.line import weighted_line
from analysis.noise import noise_of
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
MOST_DECADES = 18  # as wide as pH
RELATIVE_SD = 0.01  # of a point of a line: 0.25 mV; where they scatter more, that counts
BEYOND_LAST = 0.86  # steps; of these the line after uses seven tenths


def gran_endpoints(curve: Curve, *, system: System, jumps: Sequence[float]) -> tuple[tuple[float, float], ...]:
    """``gran`` at each of the jumps that were found on a curve [mL], where they are those of the system.

    Where another number was found, the last of them alone is the last of the system.
    """
    expected = [place for place, step in enumerate(equivalence_steps(system)) if step.is_jump]
    if len(jumps) != len(expected):
        return (gran(curve, system=system, near=jumps[-1], jumps=jumps),)
    pairs = zip(jumps, expected, strict=True)
    return tuple(gran(curve, system=system, near=near, step=place, jumps=jumps) for near, place in pairs)


def gran(
    curve: Curve, *, system: System, near: float, step: int | None = None, jumps: Sequence[float] | None = None
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
    jumps : sequence of float, optional
        All endpoints of the curve [mL], needed where there are several analytes; found on the curve otherwise.

    Raises
    ------
    ValueError
        When the chemistry has no line for this endpoint, neither side has four usable points, or the lines end
        outside the curve.
    """
    if not 0 < near < np.inf:
        raise ValueError(f"The endpoint is sought near {near:g} mL; more than 0 mL is expected.")
    place = _place(system, step)
    if len(system.analytes) == 1:
        jumps = [near]
    elif jumps is None:
        jumps = endpoints_near(curve, noise=noise_of(curve))
    if system.kind == "acid_base":
        volume, u = _acid_base(curve, system=system, place=place, near=near, jumps=jumps)
    else:
        volume, u = _combined(_other(curve, system=system, place=place, near=near, jumps=jumps))
    if not curve.volume[0] <= volume <= curve.volume[-1]:
        raise ValueError(
            f"Gran's lines end at {volume:g} mL, outside the curve ({curve.volume[0]:g} to {curve.volume[-1]:g} mL)."
        )
    return volume, u


def _place(system: System, step: int | None) -> int:
    steps = equivalence_steps(system)
    if step is None:
        return max((k for k, each in enumerate(steps) if each.is_jump), default=len(steps) - 1)
    if not 0 <= step < len(steps):
        raise ValueError(f"Step is {step}; 0 to {len(steps) - 1} is expected.")
    if not steps[step].is_jump:
        raise ValueError(
            f"The curve does not jump at step {steps[step].proton} of {steps[step].analyte}; Gran's lines need a jump."
        )
    return step


def _combined(sides: Sides, *, moved: Sequence[Sides] = ()) -> Side:
    """Mean of both sides, weighted by the inverse of their covariance, and its standard uncertainty.

    What is moved moves both sides at once; where they differ by more than all of it, that counts.

    References
    ----------
    JCGM 102:2011, 7.1 (least squares with covariance); Birge, Phys. Rev. 40 (1932) 207-227.
    """
    known = [k for k, side in enumerate(sides) if side is not None]
    if not known:
        raise ValueError("Gran's lines need four usable points before or after the endpoint.")
    at = np.array([_pair(sides, k)[0] for k in known])
    covariance = np.diag([_pair(sides, k)[1] ** 2 for k in known])
    for other in moved:
        away = np.array([_pair(other, k)[0] - _pair(sides, k)[0] if other[k] is not None else 0.0 for k in known])
        covariance += np.outer(away, away)
    if at.size == 1:
        return float(at[0]), math.sqrt(float(covariance[0, 0]))
    (first, both), (_, second) = covariance
    apart = max(float(first + second - 2 * both), 1e-300)
    share = min(max(float(second - both) / apart, 0.0), 1.0)
    weights = np.array([share, 1.0 - share])
    ratio = max(float(at[0] - at[1]) ** 2 / apart, 1.0)
    return float(weights @ at), math.sqrt(float(weights @ covariance @ weights) * ratio)


def _pair(sides: Sides, place: int) -> Side:
    side = sides[place]
    return (math.nan, math.nan) if side is None else side


def _acid_base(curve: Curve, *, system: System, place: int, near: float, jumps: Sequence[float]) -> Side:
    plot = _plot(curve, system=system, place=place, near=near, jumps=jumps)
    sides = sides_of(plot)
    for _ in range(2):  # with a better idea of where the step ends
        volume, u = _combined(sides)
        if not plot.begin < volume <= curve.volume[-1] or abs(volume - plot.near) < u:
            break
        plot = _plot(curve, system=system, place=place, near=volume, jumps=jumps)
        sides = sides_of(plot)
    return _combined(sides, moved=[sides_of(other) for other in unknowns_of(plot)])


def _plot(curve: Curve, *, system: System, place: int, near: float, jumps: Sequence[float]) -> Plot:
    steps = equivalence_steps(system)
    one = _equivalents(system, place=place, near=near, jumps=jumps)
    sizes = {item.name: size for item, size in zip(system.analytes, one, strict=True)}
    is_last = place + 1 == len(steps)
    size = sizes[steps[place].analyte]
    beyond = near + (BEYOND_LAST * size if is_last else sizes[steps[place + 1].analyte])
    scatter = noise_of(curve) / (1.0 if curve.quantity == "pH" else nernst(system.temperature))
    return Plot(curve, system, steps[place], is_last, near, near - size, beyond, one, scatter)


def _equivalents(system: System, *, place: int, near: float, jumps: Sequence[float]) -> tuple[float, ...]:
    """One proton of each analyte [mL of titrant], from where the jumps are."""
    steps = equivalence_steps(system)
    if len(system.analytes) == 1:
        return (near / steps[place].share[0],)
    expected = [k for k, step in enumerate(steps) if step.is_jump or k == place]
    if len(jumps) != len(expected):
        raise ValueError(f"Endpoints found on the curve: {len(jumps)}; the chemistry has {len(expected)}.")
    at = [near if k == place else jump for k, jump in zip(expected, jumps, strict=True)]
    shares = np.array([steps[k].share for k in expected])
    if np.linalg.matrix_rank(shares) < len(system.analytes):
        names = " and ".join(item.name for item in system.analytes)
        raise ValueError(f"{names[0].upper()}{names[1:]} are titrated together; Gran's lines need one of them alone.")
    found = np.linalg.lstsq(shares, np.array(at), rcond=None)[0]
    if found.min() <= 0:
        raise ValueError(f"The endpoints at {', '.join(f'{v:g}' for v in at)} mL are not those of the chemistry.")
    return tuple(map(float, found))


def _other(curve: Curve, *, system: System, place: int, near: float, jumps: Sequence[float]) -> Sides:
    """The line of the analyte that is left and, after the last endpoint, that of the titrant in excess."""
    begin = max((jump for jump in jumps if jump < 0.9 * near), default=0.0)
    name = equivalence_steps(system)[place].analyte
    electrons = next(item.electrons for item in system.analytes if item.name == name) if system.kind == "redox" else 1
    is_last = place + 1 == len(equivalence_steps(system))
    after = _after(curve, system, near, begin) if is_last else None
    return _before(curve, system, near, begin, electrons=electrons), after


def _before(curve: Curve, system: System, near: float, begin: float, *, electrons: int) -> Side | None:
    """The line of the analyte that is left: as such, or beside its product (redox)."""
    use = (curve.volume > begin + 0.25 * (near - begin)) & (curve.volume < begin + 0.93 * (near - begin))
    v = curve.volume[use]
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
