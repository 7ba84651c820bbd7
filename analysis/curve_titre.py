"""The titre of a recorded curve, with everything the analyst is told about it, as plain data."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from analysis.curve import clean_curve
from analysis.endpoint import CurveEvaluation, CurveSettings, Endpoint, evaluate_curve
from analysis.system import System


def curve_titre(curve: Mapping[str, Any], *, settings: Mapping[str, Any], where: str) -> dict[str, Any]:
    """Endpoint of a curve by the method's families; ValueError with the sentence, naming the titration."""
    try:
        cleaned = clean_curve(
            [float(value) for value in curve["volume"]], [float(value) for value in curve["reading"]],
            quantity=str(settings["quantity"]),
        )  # fmt: skip
        found = evaluate_curve(cleaned, settings=_settings(settings))
    except ValueError as problem:
        raise ValueError(f"Curve of {where}: {problem}") from problem
    return _output(found)


def _settings(settings: Mapping[str, Any]) -> CurveSettings:
    system, fixed, first = settings.get("system"), settings.get("fixed_reading"), settings.get("first_fixed_reading")
    return CurveSettings(
        deciding=str(settings["deciding"]), checking=settings.get("checking"),
        fixed_reading=None if fixed is None else float(fixed),
        first_fixed_reading=None if first is None else float(first), expected=int(settings.get("expected", 1)),
        chosen=int(settings.get("chosen", 1)), system=System.from_json(system) if system else None,
        agreement_limit=float(settings.get("agreement_limit", 3)),
    )  # fmt: skip


def _output(found: CurveEvaluation) -> dict[str, Any]:
    model, residuals = found.model, found.residuals
    return {
        **_endpoint(found.decided),
        "family": found.decided.family,
        "kind": found.decided.kind,
        "direction": found.direction,
        "checked": _endpoint(found.checked) | {"family": found.checked.family} if found.checked else None,
        "agreement": found.agreement,
        "needs_person": found.needs_person,
        "flags": [*found.curve.notes, *found.flags],
        "all": {family: [_endpoint(end) for end in ends] for family, ends in found.endpoints.items()},
        "derivative": [part.tolist() for part in found.derivative],
        "model": [part.tolist() for part in model] if model else None,
        "residuals": residuals.tolist() if residuals is not None else None,
    }


def _endpoint(end: Endpoint) -> dict[str, float]:
    return {"volume": float(end.volume), "u": float(end.standard_uncertainty)}
