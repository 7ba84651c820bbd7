"""Explicit models: the volume of titrant at which a reading is reached.

For acid-base systems the charge balance is solved for the volume at a given pH; for silver halides the mass balance
at a given potential. Both are one formula, so a fit needs no root finding.

References
----------
de Levie, J. Chem. Educ. 70 (1993) 209-217 (the progress of a titration as an explicit function of pH);
Davies, Ion Association (1962): log g = -A z^2 (sqrt(I)/(1+sqrt(I)) - 0.3 I).
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from analysis.system import Analyte, System

FloatArray = npt.NDArray[np.float64]
PKW = 13.995  # 25 degC, Harned and Owen
CARBONIC = Analyte(name="carbonate", pKa=(6.352, 10.329), charge=0)
DAVIES_A = 0.509
NERNST = 59.16  # mV at 25 degC


def log_gamma(ionic_strength: FloatArray, charge: float = 1.0) -> FloatArray:
    """log10 of the activity coefficient of an ion of a charge, after Davies (good to about 0.5 mol/L)."""
    root = np.sqrt(ionic_strength)
    return np.asarray(-DAVIES_A * charge**2 * (root / (1 + root) - 0.3 * ionic_strength))


def mean_charge(pH: FloatArray, analyte: Analyte, *, log_gamma_1: FloatArray | float = 0.0, shift: float = 0.0) -> FloatArray:
    """Mean charge of an analyte with its pKa corrected for activity and by ``shift``.

    The step from charge z to z - 1 has the mixed constant pKa + (1 - 2 z) log g1. A strong acid, which has no pKa,
    has lost its proton.
    """
    if not analyte.pKa:
        return np.full_like(pH, analyte.charge - 1.0)
    rows = [pH - (pKa + shift + (1 - 2 * (analyte.charge - k)) * log_gamma_1) for k, pKa in enumerate(analyte.pKa)]
    logs = np.concatenate([np.zeros((1, *pH.shape)), np.cumsum(rows, axis=0) * np.log(10)])
    weights = np.exp(logs - logs.max(axis=0))
    lost = (weights * np.arange(len(analyte.pKa) + 1)[:, None]).sum(axis=0) / weights.sum(axis=0)
    return np.asarray(analyte.charge - lost)


def analyte_charge(pH: FloatArray, analyte: Analyte, system: System, *, log_gamma_1: FloatArray | float = 0.0, shift: float = 0.0) -> FloatArray:
    """Mean charge of an analyte with its counter-ions, per mol.

    An acid comes with the counter-ions of its fully protonated form; a base, titrated with acid, as the salt of its
    fully deprotonated form; a strong base counts its cation.
    """
    if system.titrant == "acid" and not analyte.pKa:
        return np.ones_like(pH)
    counter = -analyte.charge if system.titrant == "base" else len(analyte.pKa) - analyte.charge
    return mean_charge(pH, analyte, log_gamma_1=log_gamma_1, shift=shift) + counter


def acid_base_volume(
    pH: FloatArray, amounts: FloatArray, system: System, *, shifts: FloatArray | None = None, carbonate: float = 0.0,
    ionic_strength: FloatArray | None = None,
) -> FloatArray:  # fmt: skip
    """Volume [mL] of titrant at which a pH is reached.

    V = -[sum n (q + s) + V0 D] / [t c + D + c_CO2 q_CO2], with D = [H+] - [OH-].

    Parameters
    ----------
    pH : array
        On the activity scale.
    amounts : array
        Amount of each analyte [mmol].
    system : System
    shifts : array, optional
        Correction of the pKa values of each analyte.
    carbonate : float
        Carbonate in a base titrant [mol/L].
    ionic_strength : array, optional
        [mol/L] at each point; without it concentrations stand for activities.
    """
    gamma = log_gamma(ionic_strength) if ionic_strength is not None else np.zeros_like(pH)
    excess = 10 ** (-pH - gamma) - 10 ** (pH - PKW - gamma)
    sign = 1.0 if system.titrant == "base" else -1.0
    charge = np.zeros_like(pH)
    for place, analyte in enumerate(system.analytes):
        shift = 0.0 if shifts is None else float(shifts[place])
        charge += amounts[place] * analyte_charge(pH, analyte, system, log_gamma_1=gamma, shift=shift)
    dissolved = carbonate * mean_charge(pH, CARBONIC, log_gamma_1=gamma) if carbonate else 0.0
    return np.asarray(
        -(charge + system.sample_volume * excess) / (sign * system.titrant_concentration + excess + dissolved)
    )


def silver_halide_volume(
    potential: FloatArray, amount: float, system: System, *, standard: float, slope: float, pKs: float
) -> FloatArray:
    """Volume [mL] of silver titrant at which a silver electrode reads a potential [mV].

    [Ag] = 10^((E - E0)/S); V = [n + V0 ([Ag] - Ks/[Ag])] / [c - ([Ag] - Ks/[Ag])] (mass balance of silver and halide).
    """
    silver = 10 ** ((potential - standard) / slope)
    excess = silver - 10 ** (-pKs) / silver
    return np.asarray((amount + system.sample_volume * excess) / (system.titrant_concentration - excess))


def ionic_strength(system: System, *, volume: FloatArray, amounts: FloatArray) -> FloatArray:
    """Ionic strength [mol/L] along a titration, from the salt that is there: titrant's ions, or the sample's own.

    The titrant's ion, the strong acids and the cations of salts titrated with acid are counted, monovalent.
    """
    own = sum(
        amount * (1.0 if not analyte.pKa else (len(analyte.pKa) if system.titrant == "acid" else 0.0))
        for amount, analyte in zip(amounts, system.analytes, strict=True)
    )
    whole = system.sample_volume + volume
    return np.maximum(np.maximum(system.titrant_concentration * volume, own) / whole, 1e-6)


def equivalents(analyte: Analyte, system: System, *, step: int | None = None) -> int:
    """Protons an analyte gives (to a base titrant) or takes (from an acid) up to an endpoint; one for a strong one."""
    whole = len(analyte.pKa) or 1
    return whole if step is None else min(step, whole)
