"""Densities of water and of air, for weighing and for volumes.

References
----------
Tanaka, Girard, Davis, Peuto, Bignell,
Metrologia 38 (2001) 301-309 (water, air-free, 0 to 40 degC); OIML R 111-1:2004,
E.3 (air, approximate formula, relative uncertainty 2e-4).
"""

from __future__ import annotations

import math

WARMEST = 100.0  # [degC]; checked to 40, beyond it the equation is still good to 0.01 %


def water_density(temperature: float) -> float:
    """Density of air-free water [kg/m3] at a temperature [degC], 0 to 100.

    Raises
    ------
    ValueError
        When the temperature is outside this range.
    """
    t = _within(temperature, low=0.0, high=WARMEST)
    return 999.97495 * (1 - (t - 3.983035) ** 2 * (t + 301.797) / (522528.9 * (t + 69.34881)))


def water_expansion(temperature: float) -> float:
    """Volume expansion of water [1/K] at a temperature [degC]: -(d rho / d t) / rho."""
    t = _within(temperature, low=0.0, high=WARMEST)
    away, above, scale = t - 3.983035, t + 301.797, 522528.9 * (t + 69.34881)
    share = away**2 * above / scale
    slope = share * (2 / away + 1 / above - 1 / (t + 69.34881)) if away else 0.0
    return slope / (1 - share)


def air_density(*, temperature: float = 20.0, pressure: float = 1013.25, humidity: float = 50.0) -> float:
    """Density of air [kg/m3] at a temperature [degC], pressure [hPa] and relative humidity [%].

    Raises
    ------
    ValueError
        When an input is outside the range of a laboratory.
    """
    t = _within(temperature, low=0.0, high=50.0)
    if not 500 <= pressure <= 1200:
        raise ValueError(f"Pressure is {pressure} hPa; 500 to 1200 is expected.")
    if not 0 <= humidity <= 100:
        raise ValueError(f"Humidity is {humidity} %; 0 to 100 is expected.")
    return (0.34848 * pressure - 0.009 * humidity * math.exp(0.061 * t)) / (273.15 + t)


def _within(temperature: float, *, low: float, high: float) -> float:
    if not low <= temperature <= high:
        raise ValueError(f"Temperature is {temperature} degC; {low:g} to {high:g} is expected.")
    return temperature
