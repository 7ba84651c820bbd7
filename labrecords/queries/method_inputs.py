"""The method part of a calculation's inputs: a recipe, or a titrant's rule, as plain data."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from labrecords.models import Run, Standardization


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
        "indicator_bias_mL": str(version.indicator_bias) if version.endpoint == "indicator" else None,
        "indicator_u_mL": str(version.indicator_u) if version.endpoint == "indicator" else None,
        "curve": _curve_settings(run),
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
        "indicator_bias_mL": str(titrant.indicator_bias),
        "indicator_u_mL": str(titrant.indicator_u),
        "curve": None,
    }


def _curve_settings(run: Run) -> dict[str, Any] | None:
    version = run.method_version
    if version.endpoint != "curve":
        return None
    system = dict(version.system) if version.system else None
    if system is not None:
        calculation = run.standardization.calculation
        system["titrant_concentration"] = calculation.value if calculation else float(version.titrant.nominal)
        system["sample_volume"] = float(version.initial_volume or 50)
    return {
        "quantity": version.curve_quantity,
        "deciding": version.deciding_family,
        "checking": version.checking_family or None,
        "fixed_reading": as_text(version.fixed_reading),
        "first_fixed_reading": as_text(version.first_fixed_reading),
        "expected": version.endpoints_expected,
        "chosen": version.endpoint_chosen,
        "agreement_limit": str(version.agreement_limit),
        "system": system,
    }


def as_text(value: Decimal | None) -> str | None:
    """The digits of a number as read, or None."""
    return None if value is None else str(value)
