"""Canonical inputs of determinations as plain data, for the tests of the arithmetic; the values are invented."""

from __future__ import annotations

from typing import Any

Data = dict[str, Any]


def line(number: int, end: str | None, *, amount: str | None, start: str | None = "0.00", **more: Any) -> Data:
    """One titration as it was read."""
    return {
        "number": number, "amount": amount, "start": start, "end": end, "temperature": None, "curve": None,
        "excluded": False, **more,
    }  # fmt: skip


def lines(ends: list[str | None], *, amount: str | None, first: int = 1) -> list[Data]:
    """Titrations from zero, one for each end reading."""
    return [line(first + place, end, amount=amount) for place, end in enumerate(ends)]


def method(**more: Any) -> Data:
    """A method version: direct, one to one, g/L, three titrations within 0.20 mL that all count."""
    return {
        "titration": "direct", "ratio": "1", "quantity": "mass_concentration", "unit": "g/L", "basis": "as_is",
        "loss_percent": None, "loss_u": None, "policy": "all", "limit": "0.20", "limit_kind": "range_mL",
        "replicates_needed": 3, "places": 2, "coverage": "k2", "indicator_bias_mL": None, "indicator_u_mL": None,
        "curve": None, "equivalent_formula": None, **more,
    }  # fmt: skip


def solution(lot: str, concentration: str, u: str = "0.0001", *, components: list[Data] | None = None) -> Data:
    """A titrant's lot with its concentration [mol/L]."""
    return {
        "lot": lot, "concentration": concentration, "u": u, "degrees_of_freedom": None,
        "components": components or [],
    }  # fmt: skip


def substance(formula: str, molar_mass: str, u: str = "0.001") -> Data:
    """What a result is expressed as."""
    return {"name": formula, "formula": formula, "molar_mass": molar_mass, "u": u}


def by_volume(u: str = "0.01") -> Data:
    """A sample taken with a pipette."""
    return {
        "by": "volume", "unit": "mL", "u": u, "key": "pipette:P-1", "label": "pipette P-1", "buoyancy_density": None,
    }  # fmt: skip


def by_mass(u: str = "0.0001") -> Data:
    """A sample weighed on a balance."""
    return {
        "by": "mass", "unit": "g", "u": u, "key": "balance:L-1", "label": "balance L-1", "buoyancy_density": None,
    }  # fmt: skip


def burette(tolerance: str = "0.05") -> Data:
    """A burette of 50 mL read to 0.05 mL."""
    return {
        "key": "burette:B-1", "identifier": "B-1", "nominal": "50", "resolution": "0.05", "tolerance": tolerance,
        "table": [], "temperature_reference": "20",
    }  # fmt: skip


def run(replicates: list[Data], **more: Any) -> Data:
    """The inputs of a run; what is not given is acetic acid in a volume by sodium hydroxide 0.1 mol/L."""
    return {
        "kind": "run", "engine": "1.0.0", "method": method(), "substance": substance("C2H4O2", "60.052"),
        "titrant": solution("N1", "0.1"), "excess": None, "temperature_correction": False, "dilutions": [],
        "specification": None, "burette": burette(), "sample": by_volume(), "replicates": replicates, "blanks": [],
        **more,
    }  # fmt: skip


def standardization(replicates: list[Data], *, standard: Data, sample: Data, **more: Any) -> Data:
    """The inputs of a standardization of a titrant of 0.1 mol/L."""
    return {
        "kind": "standardization", "engine": "1.0.0", "nominal": "0.1", "window": {"low": "0.095", "high": "0.105"},
        "method": {
            "ratio": "1", "policy": "all", "limit": "0.5", "limit_kind": "rsd_percent", "replicates_needed": 3,
            "coverage": "k2", "indicator_bias_mL": None, "indicator_u_mL": None, "curve": None,
        },
        "standard": standard, "temperature_correction": False, "burette": burette(), "sample": sample,
        "replicates": replicates, "blanks": [], **more,
    }  # fmt: skip


def primary(**more: Any) -> Data:
    """Potassium hydrogen phthalate with its certificate."""
    return {
        "basis": "mass", "key": "standard:KHP-1", "label": "purity of KHP-1", "purity": "0.9998",
        "purity_u": "0.0002", "formula": "C8H5KO4", "molar_mass": "204.222", "molar_mass_u": "0.004", **more,
    }  # fmt: skip
