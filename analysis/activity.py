"""Activity coefficients after Davies, and the constants of water and of electrodes against temperature.

References
----------
Davies, Ion Association (Butterworths 1962): log g = -A z^2 (sqrt(I) / (1 + sqrt(I)) - 0.3 I), to about 0.5
mol/L. Malmberg and Maryott, J. Res. NBS 56 (1956) 1: static permittivity of water.
Harned and Owen, The Physical Chemistry of Electrolytic Solutions (1958): ionization of water.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
LN_10 = math.log(10.0)
GAS, FARADAY = 8.31446261815324, 96485.33212  # J/(mol K), C/mol: SI 2019
DAVIES_A = 0.509  # at 25 degC, (mol/L)^-1/2
KELVIN = 273.15


def davies_a(temperature: float = 25.0) -> float:
    """The Debye-Hueckel constant A [(L/mol)^1/2] at a temperature [degC]: (eps T)^-3/2 from its value at 25
    degC.
    """
    at_25 = _permittivity(25.0) * (25.0 + KELVIN)
    return float(DAVIES_A * (at_25 / (_permittivity(temperature) * (temperature + KELVIN))) ** 1.5)


def log_gamma(ionic_strength: FloatArray, *, charge: float = 1.0, a: float = DAVIES_A) -> FloatArray:
    """log10 of the activity coefficient of an ion of a charge at an ionic strength [mol/L]."""
    root = np.sqrt(ionic_strength)
    return np.asarray(-a * charge**2 * (root / (1 + root) - 0.3 * ionic_strength))


def water_pK(temperature: float = 25.0) -> float:
    """pKw on the activity scale at a temperature [degC], 0 to 60."""
    kelvin = temperature + KELVIN
    return 4471.0 / kelvin + 0.01706 * kelvin - 6.0875


def nernst(temperature: float = 25.0) -> float:
    """Nernst slope [mV per decade] of a univalent ion at a temperature [degC]."""
    return 1000 * LN_10 * GAS * (temperature + KELVIN) / FARADAY


def _permittivity(t: float) -> float:
    return 87.740 - 0.40008 * t + 9.398e-4 * t**2 - 1.410e-6 * t**3
