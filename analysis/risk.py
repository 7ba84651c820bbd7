"""Risks of decisions with a guard band: of one result, and of a process whose results are judged by a rule.

References
----------
JCGM 106:2012, clauses 8 and 9; ILAC-G8:09/2019, table 1; EURACHEM/CITAC, Use of uncertainty information in
compliance assessment, 2nd edition (2021), annex A.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import numpy.typing as npt
from scipy import special

from analysis.control_constants import legendre

FloatArray = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Risks:
    """What a decision rule does to a process.

    Attributes
    ----------
    consumer : float
        Probability that an item does not conform and is accepted.
    producer : float
        Probability that an item conforms and is rejected.
    nonconforming : float
        Probability that an item does not conform at all.
    accepted : float
        Probability that an item is accepted.
    """

    consumer: float
    producer: float
    nonconforming: float
    accepted: float


def specific_risk(*, guard: float, standard_uncertainty: float) -> float:
    """Probability of a wrong acceptance for a result exactly at the acceptance limit, one limit being near.

    Parameters
    ----------
    guard : float
        Width of the guard band [unit of the result].
    standard_uncertainty : float
        [unit of the result]
    """
    _positive(standard_uncertainty, name="Standard uncertainty")
    return float(special.ndtr(-guard / standard_uncertainty))


def guard_band_for(risk: float, *, standard_uncertainty: float) -> float:
    """Width of the guard band for a wanted risk of a wrong acceptance, one limit being near."""
    if not 0 < risk <= 0.5:
        raise ValueError(f"Risk is {risk}; a number above 0, at most 0.5, is expected.")
    _positive(standard_uncertainty, name="Standard uncertainty")
    return float(-special.ndtri(risk) * standard_uncertainty)


def acceptance_limits(*, lower: float | None, upper: float | None, guard: float) -> tuple[float | None, float | None]:
    """Limits of acceptance a guard band inside the limits; ValueError when nothing would be accepted."""
    low = None if lower is None else lower + guard
    high = None if upper is None else upper - guard
    if low is not None and high is not None and low > high:
        raise ValueError(f"Guard band is {guard}; twice that is more than the limits {lower} to {upper} are apart.")
    return low, high


def process_risks(
    *,
    mean: float,
    sd: float,
    standard_uncertainty: float,
    lower: float | None,
    upper: float | None,
    guard: float = 0.0,
) -> Risks:
    """Consumer's and producer's risk of a normal process judged by measurements with a normal error.

    Parameters
    ----------
    mean, sd : float
        Of the true values of the process [unit].
    standard_uncertainty : float
        Of one measurement [unit].
    lower, upper : float or None
        Limits of the specification [unit].
    guard : float
        Width of the guard band [unit]; negative for relaxed acceptance.

    Raises
    ------
    ValueError
        When no limit is given, limits are out of order, or a spread is not above zero.

    References
    ----------
    JCGM 106:2012, equations 20 and 22.
    """
    _positive(sd, name="Standard deviation of the process")
    _positive(standard_uncertainty, name="Standard uncertainty")
    if not math.isfinite(mean) or (lower is None and upper is None):
        raise ValueError(
            f"Mean is {mean}, limits {lower} and {upper}; a finite mean and at least one limit are expected."
        )
    if lower is not None and upper is not None and lower >= upper:
        raise ValueError(f"Lower limit is {lower} and upper limit {upper}; the lower must be below the upper.")
    accept_low, accept_high = acceptance_limits(lower=lower, upper=upper, guard=guard)
    low, high = _open(lower, -1), _open(upper, 1)
    edges = (_open(accept_low, -1), _open(accept_high, 1))
    below = _mass(-math.inf, low, mean, sd, standard_uncertainty, edges, is_accepted=True)
    above = _mass(high, math.inf, mean, sd, standard_uncertainty, edges, is_accepted=True)
    producer = _mass(low, high, mean, sd, standard_uncertainty, edges, is_accepted=False)
    inside = float(special.ndtr((high - mean) / sd) - special.ndtr((low - mean) / sd))
    outside = float(special.ndtr((low - mean) / sd) + special.ndtr((mean - high) / sd))
    return Risks(below + above, producer, outside, inside - producer + below + above)


def _mass(
    start: float,
    end: float,
    mean: float,
    sd: float,
    u: float,
    edges: tuple[float, float],
    *,
    is_accepted: bool,
) -> float:
    """Probability of a true value between start and end whose measurement is accepted, or is rejected."""
    first, last = max(start, mean - 10 * sd), min(end, mean + 10 * sd)
    if first >= last:
        return 0.0
    cuts = {first, last} | {edge + step * u for edge in edges for step in (-8, 0, 8) if first < edge + step * u < last}
    places = sorted(cuts)
    nodes, weights = legendre(80)
    total = 0.0
    for left, right in pairwise(places):
        x = (left + right) / 2 + (right - left) / 2 * nodes
        chance = _chance(x, u, edges, is_accepted=is_accepted)
        density = np.exp(-0.5 * ((x - mean) / sd) ** 2) / (sd * math.sqrt(2 * math.pi))
        total += (right - left) / 2 * float(weights @ (density * chance))
    return total


def _chance(x: FloatArray, u: float, edges: tuple[float, float], *, is_accepted: bool) -> FloatArray:
    low, high = (edges[0] - x) / u, (edges[1] - x) / u
    if is_accepted:
        return np.asarray(special.ndtr(high) - special.ndtr(low))
    return np.asarray(special.ndtr(low) + special.ndtr(-high))


def _open(limit: float | None, sign: int) -> float:
    return sign * math.inf if limit is None else limit


def _positive(value: float, *, name: str) -> None:
    if not (value > 0 and math.isfinite(value)):
        raise ValueError(f"{name} is {value}; a finite number above 0 is expected.")
