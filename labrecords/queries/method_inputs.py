"""The method part of a calculation's inputs: a recipe, or a titrant's rule, as plain data."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from labrecords.models import EndpointRule, Run, Standardization


def run_method(run: Run) -> dict[str, Any]:
    """The method part of a run's inputs."""
    version = run.method_version
    return {
        "titration": version.titration,
        "ratio": version.ratio,
        "quantity": version.quantity,
        "unit": version.unit,
        "basis": version.basis,
        "loss_percent": as_text(run.loss_percent),
        "loss_u": str(version.loss_u),
        "parts": version.parts,
        "policy": version.policy,
        "limit": str(version.limit),
        "limit_kind": version.limit_kind,
        "replicates_needed": version.replicates_needed,
        "places": version.places,
        "coverage": version.coverage,
        "indicator_key": f"indicator:{version.method.code}",
        **_indicator(version),
        "curve": _curve_settings(version, concentration=_concentration(run)),
        "equivalent_formula": version.expressed_as.formula if version.quantity == "titrant_equivalent" else None,
    }


def standardization_method(standardization: Standardization) -> dict[str, Any]:
    """The method part of a standardization's inputs, from the titrant's rule."""
    titrant = standardization.lot.titrant
    return {
        "titration": "direct",
        "ratio": titrant.ratio,
        "policy": titrant.policy,
        "limit": str(titrant.limit),
        "limit_kind": titrant.limit_kind,
        "replicates_needed": titrant.replicates_needed,
        "places": 5,
        "coverage": titrant.coverage,
        "indicator_key": f"indicator:{titrant.code}",
        **_indicator(titrant),
        "curve": _curve_settings(titrant, concentration=float(titrant.nominal)),
    }


def _indicator(rule: EndpointRule) -> dict[str, str | None]:
    """How far past equivalence the colour changes; a curve has no indicator."""
    is_seen = not rule.takes_curve
    return {
        "indicator_bias_mL": str(rule.indicator_bias) if is_seen else None,
        "indicator_u_mL": str(rule.indicator_u) if is_seen else None,
    }


def _concentration(run: Run) -> float:
    calculation = run.standardization.calculation
    nominal = run.method_version.titrant.nominal
    return calculation.value if calculation and calculation.value is not None else float(nominal)


def _curve_settings(rule: EndpointRule, *, concentration: float) -> dict[str, Any] | None:
    """How the curves are evaluated; the model takes the titrant's concentration [mol/L] as known."""
    if not rule.takes_curve:
        return None
    system = dict(rule.system) if rule.system else None
    if system is not None:
        system["titrant_concentration"] = concentration
        system["sample_volume"] = float(rule.initial_volume or 50)
    return {
        "quantity": rule.curve_quantity,
        "deciding": rule.deciding_family,
        "checking": rule.checking_family or None,
        "fixed_reading": as_text(rule.fixed_reading),
        "first_fixed_reading": as_text(rule.first_fixed_reading),
        "expected": rule.endpoints_expected,
        "chosen": rule.endpoint_chosen,
        "agreement_limit": str(rule.agreement_limit),
        "system": system,
    }


def as_text(value: Decimal | None) -> str | None:
    """The digits of a number as read, or None."""
    return None if value is None else str(value)
