"""Endpoints of a recorded curve by every family that applies; one decides, an independent one checks."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve
from analysis.derivative import (
    derivative_parabola,
    first_derivative,
    inverse_square_parabola,
    local_polynomial,
    second_derivative_zero,
)  # fmt: skip
from analysis.detection import LEAST_RISE, endpoints_near
from analysis.endpoint_flags import direction_of, flags_of_curve, flags_of_direction, flags_of_endpoints
from analysis.endpoint_rule import STOICHIOMETRIC, CurveSettings, Endpoint, begins_beyond
from analysis.equilibrium import Fit, fit_equilibrium
from analysis.fixed import fixed_reading
from analysis.gran import gran_endpoints
from analysis.noise import noise_of
from analysis.segments import crossing

FloatArray = npt.NDArray[np.float64]
FAMILIES = ("model", "gran", "derivative", "parabola", "polynomial", "segments", "fixed")
STRAIGHT = ("conductivity", "temperature", "absorbance")


@dataclass(frozen=True, slots=True)
class CurveEvaluation:
    """A curve with all that was found on it; ``agreement`` is in combined standard uncertainties."""

    curve: Curve
    settings: CurveSettings
    endpoints: dict[str, tuple[Endpoint, ...]]
    decided: Endpoint
    checked: Endpoint | None
    agreement: float | None
    needs_person: bool
    flags: tuple[str, ...]
    derivative: tuple[FloatArray, FloatArray]
    model: tuple[FloatArray, FloatArray] | None
    residuals: FloatArray | None
    direction: str = ""


def evaluate_curve(curve: Curve, *, settings: CurveSettings) -> CurveEvaluation:
    """Find the endpoints of a curve by every family, decide by one and check by another.

    Raises
    ------
    ValueError
        When the deciding family finds no endpoint; the sentence says why.
    """
    _check(settings)
    noise = noise_of(curve)
    flags = flags_of_curve(curve)
    near = _near(curve, settings, noise=noise)
    found, problems, fit = _all_families(curve, settings, near, noise=noise)
    if settings.deciding not in found:
        raise ValueError(
            problems.get(settings.deciding, f"The family {settings.deciding} finds no endpoint on this curve.")
        )
    decided = _chosen(found[settings.deciding], settings)
    checked = _nearest(found.get(settings.checking or "", ()), decided)
    agreement = _agreement(decided, checked)
    flags += flags_of_endpoints(curve, settings, near, decided, checked, agreement, fit, problems)
    against = flags_of_direction(curve, settings)
    flags += against
    needs = (
        bool(against)
        or (agreement is not None and agreement > settings.agreement_limit)
        or _is_doubtful(settings, near, fit, checked)
    )
    model = (curve.volume, fit.fitted) if fit else None
    return CurveEvaluation(
        curve, settings, found, decided, checked, agreement, needs, tuple(flags), first_derivative(curve), model,
        fit.residuals if fit else None, direction_of(curve),
    )  # fmt: skip


def _check(settings: CurveSettings) -> None:
    for name in (settings.deciding, settings.checking):
        if name is not None and name not in FAMILIES:
            raise ValueError(f"Family is {name!r}; expected one of {', '.join(FAMILIES)}.")
    if "fixed" in (settings.deciding, settings.checking) and settings.fixed_reading is None:
        raise ValueError("The family fixed needs a reading, such as pH 8.2.")
    if settings.first_fixed_reading is not None and settings.first_fixed_reading == settings.fixed_reading:
        raise ValueError(f"Both fixed readings are {settings.fixed_reading:g}; two different ones are expected.")
    for name, value in (("Expected endpoints", settings.expected), ("Chosen endpoint", settings.chosen)):
        if value < 1:
            raise ValueError(f"{name} is {value}; 1 or more is expected.")


def _near(curve: Curve, settings: CurveSettings, *, noise: float) -> list[float]:
    """Where the jumps are; ValueError when there is none and the deciding family needs one."""
    if curve.quantity in STRAIGHT:
        return []
    near = endpoints_near(curve, noise=noise)
    if near or settings.deciding == "fixed":
        return near
    rise, least = float(np.ptp(curve.reading)), LEAST_RISE[curve.quantity]
    if rise < least:
        raise ValueError(
            f"No endpoint found: the reading changes by only {rise:.2g} {curve.quantity} over "
            f"{curve.volume[-1] - curve.volume[0]:g} mL (needs {least:g})."
        )
    raise ValueError("No endpoint found: there is no jump, or the curve stops before it or begins in it.")


def _all_families(
    curve: Curve, settings: CurveSettings, near: list[float], *, noise: float
) -> tuple[dict[str, tuple[Endpoint, ...]], dict[str, str], Fit | None]:
    found: dict[str, tuple[Endpoint, ...]] = {}
    problems: dict[str, str] = {}
    fit: Fit | None = None
    slopes: dict[str, Callable[..., tuple[float, float]]] = {
        "derivative": second_derivative_zero, "parabola": inverse_square_parabola, "polynomial": local_polynomial,
    }  # fmt: skip
    for family, function in slopes.items():
        if near:
            found[family] = tuple(_endpoint(curve, *function(curve, near=place), family) for place in near)
    for family in ("model", "gran", "segments", "fixed"):
        try:
            ends, fitted = _one_family(family, curve, settings, near, noise=noise)
        except ValueError as problem:
            problems[family] = str(problem)
            continue
        fit = fitted or fit
        if ends:
            found[family] = ends
    return found, problems, fit


def _one_family(
    family: str, curve: Curve, settings: CurveSettings, near: list[float], *, noise: float
) -> tuple[tuple[Endpoint, ...], Fit | None]:
    system = settings.system
    if family == "segments" and curve.quantity in STRAIGHT:
        return (_endpoint(curve, *crossing(curve), family),), None
    if family == "fixed" and settings.fixed_reading is not None:
        return _fixed(curve, settings, noise=noise), None
    if family == "gran" and system and near:
        return tuple(_endpoint(curve, *end, family) for end in gran_endpoints(curve, system=system, jumps=near)), None
    if family == "model" and system and near:
        fit = fit_equilibrium(curve, system=system, guess=near[-1])
        pairs = zip(fit.endpoints, fit.endpoint_us, strict=True)
        return tuple(_endpoint(curve, volume, u, family, fit.degrees_of_freedom) for volume, u in pairs), fit
    return (), None


def _fixed(curve: Curve, settings: CurveSettings, *, noise: float) -> tuple[Endpoint, ...]:
    """The fixed endpoint, after the first of two where there are two.

    A curve that begins beyond the first of them has nothing to titrate there: that endpoint is where it begins.
    """
    assert settings.fixed_reading is not None
    last = _endpoint(curve, *fixed_reading(curve, reading=settings.fixed_reading, noise=noise), "fixed")
    first = settings.first_fixed_reading
    if first is None:
        return (last,)
    if begins_beyond(curve, settings):
        return (_endpoint(curve, float(curve.volume[0]), 0.0, "fixed"), last)
    return (_endpoint(curve, *fixed_reading(curve, reading=first, noise=noise), "fixed"), last)


def _endpoint(curve: Curve, volume: float, u: float, family: str, dof: float = math.inf) -> Endpoint:
    reading = float(np.interp(volume, curve.volume, curve.reading))
    kind = "equivalence point" if family in STOICHIOMETRIC else "endpoint"
    return Endpoint(float(volume), float(u), family, kind, reading, dof)


def _chosen(ends: tuple[Endpoint, ...], settings: CurveSettings) -> Endpoint:
    if settings.chosen > len(ends):
        raise ValueError(
            f"Endpoint {settings.chosen} is wanted and {len(ends)} found by the family {settings.deciding}."
        )
    return ends[settings.chosen - 1]


def _nearest(ends: tuple[Endpoint, ...], decided: Endpoint) -> Endpoint | None:
    return min(ends, key=lambda end: abs(end.volume - decided.volume)) if ends else None


def _agreement(decided: Endpoint, checked: Endpoint | None) -> float | None:
    if checked is None:
        return None
    combined = math.hypot(decided.standard_uncertainty, checked.standard_uncertainty)
    return abs(decided.volume - checked.volume) / combined if combined else math.inf


def _is_doubtful(settings: CurveSettings, near: list[float], fit: Fit | None, checked: Endpoint | None) -> bool:
    wrong_count = bool(near) and len(near) != settings.expected
    bad_model = settings.deciding == "model" and fit is not None and bool(fit.flags)
    return wrong_count or bad_model or (settings.checking is not None and checked is None)


__all__ = [
    "FAMILIES",
    "CurveEvaluation",
    "CurveSettings",
    "Endpoint",
    "derivative_parabola",
    "evaluate_curve",
]
