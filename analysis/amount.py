"""From titres to concentrations and contents: the formulas of titrimetry.

Every function also takes complex numbers, so that derivatives can be taken by a complex step.
Volumes are in mL, masses in g, concentrations in mol/L, molar masses in g/mol.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

Number = complex


def ratio_of(text: str) -> float:
    """A stoichiometric ratio typed as a number or a fraction; ValueError when it is neither or not above zero."""
    try:
        value = Fraction(text)
    except (ValueError, ZeroDivisionError) as problem:
        raise ValueError(f"Ratio is {text!r}; a number or a fraction such as 1/2 is expected.") from problem
    if value <= 0:
        raise ValueError(f"Ratio is {text}; a number above 0 is expected.")
    return float(value)


def titrant_by_mass(
    *, mass: Number, buoyancy: Number, purity: Number, ratio: float, molar_mass: Number, volume: Number
) -> Number:
    """Concentration of a titrant [mol/L] from a weighed primary standard: c = 1000 m b P r / (M V).

    References
    ----------
    QUAM:2012.P1, example A2, equation for c(NaOH) with r = 1 and b = 1.
    """
    return 1000 * mass * buoyancy * purity * ratio / (molar_mass * volume)


def titrant_by_titrant(*, concentration: Number, aliquot: Number, ratio: float, volume: Number) -> Number:
    """Concentration of a titrant [mol/L] from a standardized one: c = c_s V_s r / V (QUAM:2012.P1, example A3)."""
    return concentration * aliquot * ratio / volume


def amount_direct(*, concentration: Number, net: Number, ratio: float) -> Number:
    """Amount of analyte [mol] by direct titration: n = c V ratio."""
    return concentration * net * ratio / 1000


def amount_by_difference(*, concentration: Number, blank: Number, titre: Number, ratio: float) -> Number:
    """Amount of analyte [mol] by blank difference: n = c (V_blank - V) ratio."""
    return concentration * (blank - titre) * ratio / 1000


def amount_by_back_titration(
    *, excess: Number, excess_volume: Number, concentration: Number, net: Number, ratio: float
) -> Number:
    """Amount of analyte [mol] by back titration: n = (c_excess V_excess - c V) ratio."""
    return (excess * excess_volume - concentration * net) * ratio / 1000


def buoyancy(*, air: Number, density: float, weights: float = 8000.0) -> Number:
    """True mass over apparent mass: (1 - air/weights) / (1 - air/density), densities in kg/m3."""
    return (1 - air / weights) / (1 - air / density)


def dilution(steps: Sequence[tuple[Number, Number]]) -> Number:
    """The factor of a chain of dilutions, each (flask, aliquot) [mL]: the product of flask over aliquot."""
    whole: Number = 1
    for flask, aliquot in steps:
        whole = whole * flask / aliquot
    return whole


def dry_basis(content: Number, *, loss_percent: Number) -> Number:
    """A content on the dried or anhydrous basis: content / (1 - loss / 100)."""
    return content / (1 - loss_percent / 100)
