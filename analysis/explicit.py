"""Balances of precipitation, redox and complexometric titrations, in the same form as the acid-base one.

Each is explicit in the volume: V = V(x), so that a curve of the model needs no root finding, and a fit none
either.

References
----------
de Levie, Aqueous Acid-Base Equilibria and Titrations (Oxford 1999) and J. Chem. Educ. 70 (1993) 209-217.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from analysis.activity import LN_10, nernst
from analysis.balance import Balance, Parameter, PriorOf
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
NERNST = nernst(25.0)  # mV
CORNER = 0.1  # mL over which the corner is rounded where a halide begins to precipitate, as coprecipitation does


class Precipitation:
    """Silver halides; x is pAg for a silver titrant and pX for a halide titrant.

    F = sum max(0, E_i - Ks_i / (a c) W) + a W / c - V, a the activity of the titrant's ion, W = V0 + V. The
    least soluble halide is taken as present from the start, so that the first reading is defined. A halide
    that has not begun to precipitate stands with nothing, its corner rounded.
    """

    def __init__(self, system: System, *, prior: PriorOf) -> None:
        self.system, self.count = system, len(system.analytes)
        sd = prior("pKs")
        self.parameters = (
            tuple(Parameter(f"pKs of {item.name}", "pKs", sd) for item in system.analytes) if sd is not None else ()
        )
        self.limits = (-1.0, 25.0)
        self.least = max(range(self.count), key=lambda k: system.analytes[k].pKs or 0.0)

    def medium(self, x: FloatArray, volume: FloatArray, theta: FloatArray) -> None:
        """None: the formal constants of the medium are used."""

    def balance(self, x: FloatArray, volume: FloatArray, theta: FloatArray, medium: None) -> Balance:
        """F and its derivatives by x, volume and parameters."""
        c, whole = self.system.titrant_concentration, volume + self.system.sample_volume
        free = np.exp(-LN_10 * x) / c
        value, by_x, by_volume = free * whole - volume, free * whole, free - 1.0
        columns: list[FloatArray] = []
        constants: list[FloatArray] = []
        for k, item in enumerate(self.system.analytes):
            pKs = float(item.pKs or 0.0) + (theta[:, self.count + k, None] if self.parameters else 0.0)
            halide = np.exp(-LN_10 * (pKs - x)) / c
            solid = theta[:, k, None] - halide * whole
            if k == self.least:
                there, present = np.ones_like(solid), solid
            else:
                root = np.hypot(solid, CORNER)
                there, present = 0.5 * (1.0 + solid / root), 0.5 * (solid + root)
            value += present
            by_x += there * halide * whole
            by_volume -= there * halide
            columns.append(there)
            constants.append(LN_10 * there * halide * whole)
        return Balance(value, -LN_10 * by_x, by_volume, columns + (constants if self.parameters else []))


class Redox:
    """Electron transfer; x is the potential over the Nernst slope, turned round for a reducing titrant.

    F = V r(x) - sum E_i a_i(x): the share r of the titrant that has reacted, the share a_i of each analyte.
    """

    def __init__(self, system: System, *, prior: PriorOf) -> None:
        self.system, self.count = system, len(system.analytes)
        self.slope = nernst(system.temperature)
        self.turn = 1.0 if system.titrant == "oxidant" else -1.0
        sd = prior("potential")
        names = [item.name for item in system.analytes] + ["the titrant"]
        self.parameters = (
            tuple(Parameter(f"potential of {name}", "potential", sd) for name in names) if sd is not None else ()
        )
        potentials = [self.turn * float(item.potential or 0.0) / self.slope for item in system.analytes]
        self.potentials = [*potentials, self.turn * float(system.titrant_potential or 0.0) / self.slope]
        self.limits = (min(self.potentials) - 12.0, max(self.potentials) + 12.0)

    def medium(self, x: FloatArray, volume: FloatArray, theta: FloatArray) -> None:
        """None: the formal potentials of the medium are used."""

    def balance(self, x: FloatArray, volume: FloatArray, theta: FloatArray, medium: None) -> Balance:
        """F and its derivatives by x, volume and parameters."""
        system = self.system
        reacted = 1.0 / (1.0 + np.exp(LN_10 * system.titrant_electrons * (x - self._potential(self.count, theta))))
        change = LN_10 * system.titrant_electrons * volume * reacted * (1 - reacted)
        value, by_x = volume * reacted, -change
        columns: list[FloatArray] = []
        constants: list[FloatArray] = []
        for k, item in enumerate(system.analytes):
            share = 1.0 / (1.0 + np.exp(-LN_10 * item.electrons * (x - self._potential(k, theta))))
            moved = LN_10 * item.electrons * theta[:, k, None] * share * (1 - share)
            value -= theta[:, k, None] * share
            by_x -= moved
            columns.append(-share)
            constants.append(moved)
        return Balance(value, by_x, reacted, columns + ([*constants, change] if self.parameters else []))

    def _potential(self, k: int, theta: FloatArray) -> FloatArray | float:
        return self.potentials[k] + (theta[:, self.count + k, None] if self.parameters else 0.0)


class Complex:
    """A metal ion and a ligand 1:1 with a conditional constant K; x is pM.

    F = V - (E - [M] W / c) (1 + 1 / (K [M])).
    """

    def __init__(self, system: System, *, prior: PriorOf) -> None:
        self.system, self.count = system, 1
        sd = prior("log_K")
        self.parameters = (Parameter(f"log K of {system.analytes[0].name}", "log_K", sd),) if sd is not None else ()
        self.log_K = float(system.analytes[0].log_K or 0.0)
        self.limits = (-1.0, self.log_K + 8.0)

    def medium(self, x: FloatArray, volume: FloatArray, theta: FloatArray) -> None:
        """None: the conditional constant holds for the medium."""

    def balance(self, x: FloatArray, volume: FloatArray, theta: FloatArray, medium: None) -> Balance:
        """F and its derivatives by x, volume and parameters."""
        c, whole = self.system.titrant_concentration, volume + self.system.sample_volume
        metal = np.exp(-LN_10 * x)
        log_K = self.log_K + (theta[:, 1, None] if self.parameters else 0.0)
        ratio = np.exp(LN_10 * (x - log_K))
        bound = theta[:, 0, None] - metal * whole / c
        by_x = -LN_10 * (metal * whole / c * (1 + ratio) + bound * ratio)
        columns = [-(1 + ratio), LN_10 * bound * ratio]
        return Balance(
            volume - bound * (1 + ratio),
            by_x,
            1 + metal / c * (1 + ratio),
            columns[: 1 + len(self.parameters)],
        )


def conditional_constant(log_K: float, *, pH: float, pKa: tuple[float, ...], log_alpha_metal: float = 0.0) -> float:
    """Logarithm of the conditional constant of a complex at a pH.

    Parameters
    ----------
    log_K : float
        Logarithm of the constant with the fully deprotonated ligand.
    pH : float
    pKa : tuple of float
        Of the ligand, most acidic first.
    log_alpha_metal : float
        log10 of the whole of the metal that is not complexed over its free ion (side reactions), 0 without.
    """
    weights = [1.0]
    for value in sorted(pKa):
        weights.append(weights[-1] * 10.0 ** (pH - value))
    return float(log_K + np.log10(weights[-1] / sum(weights)) - log_alpha_metal)
