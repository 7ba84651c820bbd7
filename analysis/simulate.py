"""Titration curves with known truth: what a burette and an electrode would record.

The explicit model is solved for the reading at each volume; offset, slope and scatter of the electrode are then
added with a seeded generator. Used by the tests and by the demo laboratory.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import numpy.typing as npt

from analysis.explicit import NERNST, PKW, acid_base_volume, ionic_strength, silver_halide_volume
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
HALVINGS = 50


def simulate_acid_base(
    system: System, *, amounts: FloatArray, volumes: FloatArray, carbonate: float = 0.0
) -> FloatArray:
    """pH at each volume [mL] for amounts [mmol] of the analytes, by bisection on the explicit model."""
    strength = ionic_strength(system, volume=volumes, amounts=amounts) if system.activity else None

    def volume_at(pH: FloatArray) -> FloatArray:
        return acid_base_volume(pH, amounts, system, carbonate=carbonate, ionic_strength=strength)

    strongest = float(np.log10(system.titrant_concentration)) - 1e-4  # the titrant itself is never reached
    shift = 0.1 if system.activity else 0.0
    low, high = (0.2, PKW + strongest - shift) if system.titrant == "base" else (-strongest + shift, 13.8)
    return _inverted(volume_at, volumes, low=low, high=high)


def simulate_silver(
    system: System, *, amount: float, volumes: FloatArray, standard: float = 550.0, pKs: float = 9.752
) -> FloatArray:
    """Potential [mV] of a silver electrode at each volume [mL] for an amount [mmol] of halide."""

    def volume_at(potential: FloatArray) -> FloatArray:
        return silver_halide_volume(potential, amount, system, standard=standard, slope=NERNST, pKs=pKs)

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


def _inverted(volume_at: Callable[[FloatArray], FloatArray], volumes: FloatArray, *, low: float, high: float) -> FloatArray:
    """The reading at each volume: bisection of all at once, V being monotone in the reading."""
    below, above = np.full(volumes.shape, low), np.full(volumes.shape, high)
    rising = volume_at(above) > volume_at(below)
    for _ in range(HALVINGS):
        middle = (below + above) / 2
        is_short = (volume_at(middle) < volumes) == rising
        below, above = np.where(is_short, middle, below), np.where(is_short, above, middle)
    return np.asarray((below + above) / 2)
