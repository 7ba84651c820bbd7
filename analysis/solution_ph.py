"""The pH of a solution of acids, bases and strong electrolytes at equilibrium, by its charge balance alone.

Constants are used as they are given, without activity coefficients: for textbook cases and for a second
opinion. The fit of curves has its own model with activities.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from scipy import optimize

PKW = 14.0


@dataclass(frozen=True, slots=True)
class Species:
    """A weak acid with its bases.

    Attributes
    ----------
    concentration : float
        All forms together [mol/L].
    pKa : tuple of float
        In order.
    charge : int
        Of the fully protonated form.
    """

    concentration: float
    pKa: tuple[float, ...]
    charge: int = 0


def solution_ph(species: Sequence[Species], *, strong: float, pKw: float = PKW) -> float:
    """pH at which the charges balance.

    Parameters
    ----------
    species : sequence of Species
    strong : float
        Charge of the ions that take no part, cations less anions [mol/L]: sodium counts plus, chloride minus.
    pKw : float
        Ion product of water.

    Raises
    ------
    ValueError
        When a concentration is negative, a number is not finite, or pKa are out of order.
    """
    _check(species, strong, pKw)

    def balance(ph: float) -> float:
        water = math.pow(10.0, -ph) - math.pow(10.0, ph - pKw)
        return strong + water + math.fsum(each.concentration * mean_charge(each, ph) for each in species)

    return float(optimize.brentq(balance, -4.0, pKw + 4.0, xtol=1e-13, rtol=1e-14))


def mean_charge(species: Species, ph: float) -> float:
    """Mean charge of all forms of a weak acid at a pH."""
    logs, total = [0.0], 0.0
    for pKa in species.pKa:
        total += math.log(10) * (ph - pKa)
        logs.append(total)
    highest = max(logs)
    weights = [math.exp(value - highest) for value in logs]
    lost = math.fsum(step * weight for step, weight in enumerate(weights)) / math.fsum(weights)
    return species.charge - lost


def titrated_ph(
    species: Sequence[Species],
    *,
    strong: float,
    sample_volume: float,
    titrant_volume: float,
    titrant_concentration: float,
    titrant_charge: int = 1,
    pKw: float = PKW,
) -> float:
    """pH after adding a strong titrant to a sample.

    Parameters
    ----------
    species, strong
        The sample before titration, as for ``solution_ph``.
    sample_volume, titrant_volume : float
        [mL]
    titrant_concentration : float
        [mol/L]
    titrant_charge : int
        1 for a strong base, -1 for a strong acid.
    """
    whole = sample_volume + titrant_volume
    if not (sample_volume > 0 and titrant_volume >= 0):
        raise ValueError(
            f"Volumes are {sample_volume} and {titrant_volume} mL; "
            "a sample above 0 and titrant not below 0 are expected."
        )
    share, added = sample_volume / whole, titrant_charge * titrant_concentration * titrant_volume / whole
    diluted = [Species(each.concentration * share, each.pKa, each.charge) for each in species]
    return solution_ph(diluted, strong=strong * share + added, pKw=pKw)


def _check(species: Sequence[Species], strong: float, pKw: float) -> None:
    for name, number in (("Strong charge", strong), ("pKw", pKw)):
        if not math.isfinite(number):
            raise ValueError(f"{name} is {number}; a finite number is expected.")
    for place, each in enumerate(species, start=1):
        if not (each.concentration >= 0 and math.isfinite(each.concentration)):
            raise ValueError(f"Concentration {place} is {each.concentration} mol/L; a number not below 0 is expected.")
        if list(each.pKa) != sorted(each.pKa) or not all(math.isfinite(pKa) for pKa in each.pKa):
            raise ValueError(
                f"pKa of species {place} are {list(each.pKa)}; finite numbers in rising order are expected."
            )
