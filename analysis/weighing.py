"""Corrections of weighings and of volumes: buoyancy, and the temperature of glass and solution.

References
----------
Harris, Quantitative Chemical Analysis (buoyancy); ISO 8655-6:2002, annex A,
and ISO/TR 20461 (factor Z); ISO 4787
(expansion of glass); QUAM:2012.P1, A1.4 (expansion of solutions); EN 14104 (ethanolic alkali).
"""

from __future__ import annotations

import math

from analysis.amount import buoyancy
from analysis.water import air_density, water_density

AIR, WEIGHTS = 1.2, 8000.0  # conventional densities [kg/m3]
GLASS = {"borosilicate": 9.9e-6, "soda lime": 27e-6}  # expansion [1/K], ISO 4787
SOLUTIONS = {"ethanolic alkali": 1.1e-3}  # expansion [1/K], EN 14104


def buoyancy_factor(density: float, *, air: float = AIR, weights: float = WEIGHTS) -> float:
    """True mass over apparent mass: (1 - air/weights) / (1 - air/density), densities in kg/m3.

    Raises
    ------
    ValueError
        When a density is not above that of air.
    """
    for name, value in (("Density", density), ("Density of weights", weights)):
        if not (value > air >= 0 and math.isfinite(value)):
            raise ValueError(f"{name} is {value} kg/m3; a number above that of air, {air}, is expected.")
    return buoyancy(air=air, density=density, weights=weights).real


def z_factor(temperature: float, *, pressure: float = 1013.0, weights: float = WEIGHTS) -> float:
    """Volume of water per apparent mass [mL/g] at [degC] and [hPa], the air at 20 degC and 50 %."""
    air = air_density(pressure=pressure)
    return 1000 * (1 - air / weights) / (water_density(temperature) - air)


def volume_of_water(
    mass: float,
    *,
    temperature: float,
    pressure: float = 1013.0,
    glass: float = 9.9e-6,
    reference: float = 20.0,
) -> float:
    """Volume [mL] at the reference temperature of a vessel from its water: m Z (1 - g (t - t0)).

    Parameters
    ----------
    mass : float
        Apparent mass [g].
    temperature, reference : float
        Of the water, and of the vessel's marks [degC].
    pressure : float
        [hPa]
    glass : float
        Expansion of the vessel [1/K].
    """
    if not (mass > 0 and math.isfinite(mass)):
        raise ValueError(f"Mass is {mass} g; a finite number above 0 is expected.")
    return mass * z_factor(temperature, pressure=pressure) * (1 - glass * (temperature - reference))


def volume_at(
    volume: float,
    *,
    temperature: float,
    reference: float = 20.0,
    glass: float = 9.9e-6,
    liquid: float | None = None,
) -> float:
    """Volume [mL] at the reference temperature of a solution read off at another.

    Parameters
    ----------
    volume : float
        As read [mL].
    temperature, reference : float
        [degC]
    glass : float
        Expansion of the vessel [1/K]; 0 for none.
    liquid : float, optional
        Expansion of the solution [1/K]; when left out the solution expands as water does, by its densities.
    """
    if not math.isfinite(volume):
        raise ValueError(f"Volume is {volume} mL; a finite number is expected.")
    away = temperature - reference
    grown = 1 + glass * away
    if liquid is not None:
        return volume * (grown - liquid * away)
    return volume * (grown * (water_density(temperature) / water_density(reference)))
