"""The charge balance of an acid-base titration.

F(pH, V) = sum E_a (q_a + s_a) + t V + (V0 + V) D / c + (k_s V0 + k_t V) q_CO2 = 0        [mL of titrant]

E_a equivalents of an analyte per proton (its amount over c), q_a its mean charge, s_a the charge of its
counter-ions, t = +1 for a base titrant and -1 for an acid, c the titrant's concentration, D = [H+] - [OH-],
k_s and k_t carbonate in the sample and in the titrant as a fraction of c.

References
----------
de Levie, J. Chem. Educ. 70 (1993) 209-217: the progress of a titration as an explicit function of pH.
Harned and Davis, J. Am. Chem. Soc. 65 (1943) 2030 and Harned and Scholes, ibid. 63 (1941) 1706: carbonic
acid.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.activity import LN_10, davies_a, log_gamma, water_pK
from analysis.balance import Balance, Parameter, PriorOf
from analysis.protonation import fractions, protons_lost
from analysis.system import Analyte, System

FloatArray = npt.NDArray[np.float64]
CARBONIC = Analyte(name="carbonic acid", pKa=(6.352, 10.329), charge=0, lost=0)


@dataclass(frozen=True, slots=True)
class Medium:
    """1/g of a univalent ion at each point, and for each step of each acid the factor g^(2z - 1) of its
    constant.
    """

    inverse: FloatArray
    steps: tuple[tuple[FloatArray, ...], ...]
    carbonic: tuple[FloatArray, ...]


class AcidBase:
    """The balance for one system; ``prior`` says which parameters are fitted."""

    def __init__(self, system: System, *, prior: PriorOf) -> None:
        self.system = system
        self.sign = 1.0 if system.titrant == "base" else -1.0
        self.pKw, self.a = water_pK(system.temperature), davies_a(system.temperature)
        self.count = len(system.analytes)
        self.parameters, self.place = _parameters(system, prior)
        self.limits = (-2.0, 16.0)
        self.has_carbonate = system.carbonate > 0 or bool({"sample carbonate", "titrant carbonate"} & set(self.place))

    def medium(self, x: FloatArray, volume: FloatArray, theta: FloatArray) -> Medium | None:
        """Davies coefficients from the composition at these x, volumes and amounts."""
        if not self.system.activity:
            return None
        strength = np.full_like(x, 0.05)
        for _ in range(3):
            gamma = log_gamma(strength, a=self.a)
            strength = self._ionic_strength(x, volume, theta, 10.0**gamma)
        g = 10.0 ** log_gamma(strength, a=self.a)
        inverse = 1.0 / g
        powers = {-1: inverse, 1: g}
        steps = tuple(
            tuple(_power(2 * (item.charge - k) - 1, powers) for k in range(len(item.pKa)))
            for item in self.system.analytes
        )
        carbonic = (_power(-1, powers), _power(-3, powers)) if self.has_carbonate else ()
        return Medium(inverse, steps, carbonic)

    def balance(self, x: FloatArray, volume: FloatArray, theta: FloatArray, medium: Medium | None) -> Balance:
        """F and its derivatives by pH, volume and parameters."""
        system = self.system
        h = np.exp(-LN_10 * x)
        inverse_h = 1.0 / h
        acid = h * (1 / system.titrant_concentration)
        base = inverse_h * (10.0**-self.pKw / system.titrant_concentration)
        if medium is not None:
            acid *= medium.inverse
            base *= medium.inverse
        excess, whole = acid - base, volume + system.sample_volume
        value = whole * excess
        value += self.sign * volume
        by_x = whole * (acid + base)
        columns: list[FloatArray] = [excess] * (self.count + len(self.parameters))
        for place, item in enumerate(system.analytes):
            self._add_analyte(place, item, value, by_x, columns, inverse_h, theta, medium)
        by_volume = excess + self.sign
        if self.has_carbonate:
            by_volume = by_volume + self._add_carbonate(value, by_x, columns, inverse_h, volume, theta, medium)
        by_x *= -LN_10
        return Balance(value, by_x, by_volume, columns)

    def _add_analyte(
        self, place: int, item: Analyte, value: FloatArray, by_x: FloatArray, columns: list[FloatArray],
        inverse_h: FloatArray, theta: FloatArray, medium: Medium | None,
    ) -> None:  # fmt: skip
        amount = theta[:, place : place + 1]
        if not item.pKa:
            columns[place] = np.full_like(value, -self.sign)
            value -= self.sign * amount
            return
        lost, covariances = protons_lost(inverse_h, self._constants(place, item, theta, medium))
        charge = np.subtract(lost_at_start(item, self.system), lost)
        columns[place] = charge
        value += amount * charge
        for k, covariance in enumerate(covariances):
            part = amount * covariance
            by_x += part
            at = self.place.get(f"pKa {place} {k}")
            if at is not None:
                columns[at] = LN_10 * part

    def _constants(self, place: int, item: Analyte, theta: FloatArray, medium: Medium | None) -> list[FloatArray]:
        found = []
        for k, pKa in enumerate(item.pKa):
            at = self.place.get(f"pKa {place} {k}")
            constant = np.full((1, 1), 10.0**-pKa) if at is None else np.exp(-LN_10 * (pKa + theta[:, at : at + 1]))
            found.append(constant if medium is None else constant * medium.steps[place][k])
        return found

    def _add_carbonate(
        self, value: FloatArray, by_x: FloatArray, columns: list[FloatArray], inverse_h: FloatArray,
        volume: FloatArray, theta: FloatArray, medium: Medium | None,
    ) -> FloatArray:  # fmt: skip
        """Add the carbonate of sample and titrant; what it adds to dF/dV."""
        constants = [np.full((1, 1), 10.0**-pKa) for pKa in CARBONIC.pKa]
        if medium is not None:
            constants = [c * factor for c, factor in zip(constants, medium.carbonic, strict=True)]
        lost, covariances = protons_lost(inverse_h, constants)
        sample, titrant = self.place.get("sample carbonate"), self.place.get("titrant carbonate")
        of_titrant: FloatArray | float = self.system.carbonate
        equivalents: FloatArray = volume * of_titrant
        if sample is not None:
            equivalents = equivalents + theta[:, sample : sample + 1] * self.system.sample_volume
            columns[sample] = lost * -self.system.sample_volume
        if titrant is not None:
            share = theta[:, titrant : titrant + 1]
            equivalents, of_titrant = equivalents + share * volume, of_titrant + share
            columns[titrant] = -lost * volume
        value -= equivalents * lost
        by_x += equivalents * (covariances[0] + covariances[1])
        return np.asarray(-lost * of_titrant)

    def _ionic_strength(self, x: FloatArray, volume: FloatArray, theta: FloatArray, g: FloatArray) -> FloatArray:
        """Half the sum of c z^2 [mol/L]; counter-ions are univalent."""
        system = self.system
        inverse_h = 10.0**x
        charge = volume.copy()  # of the titrant's ion, then of everything else
        for place, item in enumerate(system.analytes):
            charge = charge + np.maximum(theta[:, place : place + 1], 0.0) * _squares(item, inverse_h, g, system)
        if system.carbonate:
            charge = charge + system.carbonate * volume * _squares(CARBONIC, inverse_h, g, system)
        whole = system.sample_volume + volume
        free = (1 / inverse_h + inverse_h * 10.0**-self.pKw) / g
        salt = 2 * system.background * system.sample_volume / whole
        return np.asarray(0.5 * (system.titrant_concentration * charge / whole + free + salt))


def _parameters(system: System, prior: PriorOf) -> tuple[tuple[Parameter, ...], dict[str, int]]:
    """The chemical parameters that are fitted, and the column of each."""
    found: list[tuple[str, Parameter]] = []
    of_pKa = prior("pKa")
    for place, item in enumerate(system.analytes):
        for k in range(len(item.pKa) if of_pKa is not None else 0):
            label = f"pKa {k + 1} of {item.name}" if len(item.pKa) > 1 else f"pKa of {item.name}"
            found.append((f"pKa {place} {k}", Parameter(label, "pKa", float(of_pKa or 0.0))))
    for group in ("sample carbonate", "titrant carbonate"):
        sd = prior(group)
        if sd is not None and may_have(group, system):
            found.append((group, Parameter(group, group, sd)))
    first = len(system.analytes)
    return tuple(item for _, item in found), {key: first + i for i, (key, _) in enumerate(found)}


def may_have(group: str, system: System) -> bool:
    """Carbonate beside the analyte: not in an acid titrant, and not where the analyte itself is carbonate."""
    if group == "titrant carbonate" and system.titrant == "acid":
        return False
    return all(min((abs(pKa - CARBONIC.pKa[0]) for pKa in item.pKa), default=9.0) > 0.3 for item in system.analytes)


def lost_at_start(item: Analyte, system: System) -> float:
    """Protons that an analyte has lost before the first drop."""
    if item.lost is not None:
        return float(item.lost)
    return 0.0 if system.titrant == "base" else float(len(item.pKa))


def _squares(item: Analyte, inverse_h: FloatArray, g: FloatArray, system: System) -> FloatArray | float:
    """Mean z^2 of an analyte and its univalent counter-ions, per amount."""
    if not item.pKa:
        return 1.0
    counter = abs(lost_at_start(item, system) - item.charge)
    states = fractions(inverse_h, [10.0**-pKa * g ** (2 * (item.charge - k) - 1) for k, pKa in enumerate(item.pKa)])
    whole: FloatArray | float = counter
    for k, state in enumerate(states):
        whole = whole + (item.charge - k) ** 2 * state
    return whole


def _power(exponent: int, powers: dict[int, FloatArray]) -> FloatArray:
    """g to an odd power, each worked out once."""
    if exponent not in powers:
        towards = 2 if exponent > 0 else -2
        unit = powers[1 if exponent > 0 else -1]
        powers[exponent] = _power(exponent - towards, powers) * unit * unit
    return powers[exponent]


def steps_of(item: Analyte, system: System) -> Sequence[float]:
    """pKa of the protons that are titrated, in the order of the titration; a strong acid or base has one of
    its own.
    """
    if not item.pKa:
        return (-1.0,) if system.titrant == "base" else (15.0,)
    start = int(lost_at_start(item, system))
    return item.pKa[start:] if system.titrant == "base" else item.pKa[:start][::-1]
