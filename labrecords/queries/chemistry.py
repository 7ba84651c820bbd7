"""What analysis knows that a rule may name, whether its chemistry can be fitted, and its result told in its unit."""

from __future__ import annotations

from typing import Any

from analysis.determination_parts import TAKES as TAKES
from analysis.endpoint import FAMILIES as FAMILIES
from analysis.system import System
from analysis.unit import factor


def objections_to_chemistry(system: Any) -> list[str]:
    """What the model says against it, before a titration needs it."""
    if not isinstance(system, dict):
        return [
            f"Chemistry for the model is {str(system)[:40]!r}; an object with kind, titrant and analytes is expected."
        ]
    try:
        System.from_json({**system, "titrant_concentration": 0.1, "sample_volume": 50})
    except ValueError as problem:
        return [f"Chemistry for the model: {problem}"]
    return []


def objections_to_unit(unit: str, *, quantity: str, formula: str) -> list[str]:
    """A result has a unit of its quantity; an equivalent also mg of the substance it is expressed as per g."""
    try:
        factor(quantity, unit, equivalent=formula if quantity == "titrant_equivalent" else None)
    except ValueError as problem:
        return [str(problem)]
    return []
