"""Titration curves with known truth: what a burette and an electrode would record.

The explicit model is solved for the reading at each volume; offset, slope and scatter of the electrode are then
added with a seeded generator. Used by the tests and by the demo laboratory.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable

import numpy as np
import numpy.typing as npt
from scipy import optimize

from analysis.explicit import NERNST, PKW, acid_base_volume, ionic_strength, silver_halide_volume
from analysis.system import System

FloatArray = npt.NDArray[np.float64]


def simulate_acid_base(
    system: System, *, amounts: FloatArray, volumes: FloatArray, carbonate: float = 0.0
) -> FloatArray:
    """pH at each volume [mL] for amounts [mmol] of the analytes, by root finding on the explicit model."""
    def volume_at(pH: float, strength: FloatArray | None) -> float:
        found = acid_base_volume(np.array([pH]), amounts, system, carbonate=carbonate, ionic_strength=strength)
        return float(found[0])

    strongest = float(np.log10(system.titrant_concentration)) - 1e-4  # the titrant itself is never reached
    shift = 0.1 if system.activity else 0.0
    low, high = (0.2, PKW + strongest - shift) if system.titrant == "base" else (-strongest + shift, 13.8)
    strengths = ionic_strength(system, volume=volumes, amounts=amounts)
    found = []
    for volume, strength in zip(volumes, strengths, strict=True):
        given = np.array([strength]) if system.activity else None
        found.append(_inverted(lambda pH, given=given: volume_at(pH, given), [volume], low=low, high=high)[0])
    return np.array(found)


def simulate_silver(
    system: System, *, amount: float, volumes: FloatArray, standard: float = 550.0, pKs: float = 9.752
) -> FloatArray:
    """Potential [mV] of a silver electrode at each volume [mL] for an amount [mmol] of halide."""

    def volume_at(potential: float) -> float:
        found = silver_halide_volume(np.array([potential]), amount, system, standard=standard, slope=NERNST, pKs=pKs)
        return float(found[0])

    middle = standard - NERNST * pKs / 2
    strongest = standard + NERNST * (float(np.log10(system.titrant_concentration)) - 1e-4)
    return _inverted(volume_at, volumes, low=middle - 290.0, high=strongest)


def recorded(
    reading: FloatArray, *, generator: np.random.Generator, noise: float, offset: float = 0.0, slope: float = 1.0, centre: float = 7.0
) -> FloatArray:
    """A reading as an electrode gives it: offset and slope about a centre, and normal scatter."""
    return centre + slope * (reading - centre) + offset + generator.normal(0.0, noise, reading.size)


def grid(*, end: float, near: float, coarse: float = 0.5, fine: float = 0.1, width: float = 0.8) -> FloatArray:
    """Volumes [mL] as a titration is recorded: coarse steps, finer ones about the endpoint."""
    outside = np.arange(0.0, end + coarse / 2, coarse)
    inside = np.arange(max(near - width, 0.0), near + width + fine / 2, fine)
    outside = outside[(outside < inside[0] - fine / 2) | (outside > inside[-1] + fine / 2)]
    return np.round(np.sort(np.concatenate([outside, inside])), 3)


def _inverted(volume_at: Callable[[float], float], volumes: Iterable[float], *, low: float, high: float) -> FloatArray:
    first, last = volume_at(low), volume_at(high)
    found = []
    for volume in volumes:
        bounded = min(max(volume, min(first, last) + 1e-9), max(first, last) - 1e-9)
        found.append(optimize.brentq(lambda reading: volume_at(reading) - bounded, low, high, xtol=1e-10))
    return np.array(found)
