"""Whether the chemistry of a rule can be fitted at all."""

from __future__ import annotations

from typing import Any

from analysis.system import System


def objections_to_chemistry(system: dict[str, Any]) -> list[str]:
    """What the model says against it, before a titration needs it."""
    try:
        System.from_json({**system, "titrant_concentration": 0.1, "sample_volume": 50})
    except ValueError as problem:
        return [f"Chemistry for the model: {problem}"]
    return []
