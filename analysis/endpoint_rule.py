"""What a method says about its curves, and what an endpoint is."""

from __future__ import annotations

from dataclasses import dataclass

from analysis.curve import Curve
from analysis.system import System

STOICHIOMETRIC = ("model", "gran", "segments")


@dataclass(frozen=True, slots=True)
class Endpoint:
    """One endpoint: its volume [mL], standard uncertainty [mL], the family that found it, and what it is."""

    volume: float
    standard_uncertainty: float
    family: str
    kind: str
    reading: float | None
    degrees_of_freedom: float


@dataclass(frozen=True, slots=True)
class CurveSettings:
    """What a method version says about its curves."""

    deciding: str
    checking: str | None = None
    fixed_reading: float | None = None
    first_fixed_reading: float | None = None
    expected: int = 1
    chosen: int = 1
    system: System | None = None
    agreement_limit: float = 3.0
    temperature: float = 25.0


def begins_beyond(curve: Curve, settings: CurveSettings) -> bool:
    """Whether a curve begins past the first of two fixed readings, on the way to the second."""
    first, last = settings.first_fixed_reading, settings.fixed_reading
    return first is not None and last is not None and (curve.reading[0] - first) * (last - first) > 0
