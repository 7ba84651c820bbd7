"""Rounding to a limit, decision rules, and the probability of conformity.

References
----------
JCGM 106:2012 (conformity assessment); ASTM E29 and the general notices of pharmacopoeias (rounding to the limit's
places before comparison); ILAC-G8:09/2019 (guard bands).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, ROUND_HALF_UP, Decimal

from scipy import stats

ROUNDINGS = {"half_up": ROUND_HALF_UP, "half_even": ROUND_HALF_EVEN}


@dataclass(frozen=True, slots=True)
class Verdict:
    """A result compared with limits, with all that the comparison used.

    Attributes
    ----------
    outcome : str
        conforms, does_not_conform or inconclusive.
    value, rounded, lower, upper
        The unrounded value, the rounded one and the limits.
    guard : float
        Width of the guard band [unit of the value]; 0 for simple acceptance.
    probability : float
        Probability that the true value lies within the limits.
    sentence : str
        The verdict in words.
    """

    outcome: str
    value: float
    rounded: Decimal
    lower: Decimal | None
    upper: Decimal | None
    guard: float
    probability: float
    sentence: str


def round_places(value: float | Decimal, *, places: int, rounding: str) -> Decimal:
    """Round to a number of decimals on decimals, half up (away from zero) or half to even.

    A float is taken as its shortest decimal form, so that 97.95 is 97.95 and not a little less.

    Raises
    ------
    ValueError
        When the value is not finite, the rule is not known, or places is below 0.
    """
    if rounding not in ROUNDINGS:
        raise ValueError(f"Rounding is {rounding!r}; expected half_up or half_even.")
    if places < 0:
        raise ValueError(f"Places is {places}; 0 or more are expected.")
    number = value if isinstance(value, Decimal) else Decimal(repr(float(value)))
    if not number.is_finite():
        raise ValueError(f"Value is {value}; a finite number is expected.")
    return number.quantize(Decimal(1).scaleb(-places), rounding=ROUNDINGS[rounding])


def round_significant(value: float | Decimal, *, figures: int, rounding: str) -> Decimal:
    """Round to significant figures on decimals; zero stays zero."""
    if figures < 1:
        raise ValueError(f"Figures is {figures}; 1 or more are expected.")
    number = value if isinstance(value, Decimal) else Decimal(repr(float(value)))
    if number == 0:
        return Decimal(0)
    if not number.is_finite() or rounding not in ROUNDINGS:
        raise ValueError(f"Value is {value} and rounding {rounding!r}; a finite number, half_up or half_even expected.")
    return number.quantize(Decimal(1).scaleb(number.adjusted() - figures + 1), rounding=ROUNDINGS[rounding])


def probability_within(
    value: float, *, standard_uncertainty: float, lower: float | None, upper: float | None
) -> float:
    """Probability that the true value lies within the limits, for a normal distribution about the result.

    References
    ----------
    JCGM 106:2012, equations 16 to 18 (a uniform prior).
    """
    if not standard_uncertainty >= 0:
        raise ValueError(f"Standard uncertainty is {standard_uncertainty}; a number not below 0 is expected.")
    low, high = -math.inf if lower is None else lower, math.inf if upper is None else upper
    if standard_uncertainty == 0:
        return 1.0 if low <= value <= high else 0.0
    below_high = stats.norm.cdf((high - value) / standard_uncertainty)
    return float(below_high - stats.norm.cdf((low - value) / standard_uncertainty))


def verdict(
    value: float,
    *,
    standard_uncertainty: float,
    expanded: float,
    lower: str | None,
    upper: str | None,
    places: int,
    rounding: str,
    rule: str,
    guard_factor: str = "1",
) -> Verdict:
    """Compare a result with limits by simple acceptance or with a guard band.

    Simple acceptance rounds the value to the limit's places and compares. With a guard band g = factor * U the value
    conforms only g inside the limits; between the guard band and the limit it is inconclusive; outside the limit,
    after rounding, it does not conform.

    Raises
    ------
    ValueError
        When there is no limit, the limits are out of order, or a rule is not known.
    """
    low, high = _limit(lower), _limit(upper)
    if low is None and high is None:
        raise ValueError("Lower and upper limit are both empty; at least one is expected.")
    if low is not None and high is not None and low >= high:
        raise ValueError(f"Lower limit is {low} and upper limit {high}; the lower must be below the upper.")
    if rule not in ("simple", "guard"):
        raise ValueError(f"Rule is {rule!r}; expected simple or guard.")
    rounded = round_places(value, places=places, rounding=rounding)
    guard = float(guard_factor) * expanded if rule == "guard" else 0.0
    outcome = _outcome(value, rounded, low, high, guard=guard)
    probability = probability_within(
        value, standard_uncertainty=standard_uncertainty, lower=_float(low), upper=_float(high)
    )
    return Verdict(outcome, value, rounded, low, high, guard, probability, _sentence(outcome, rounded, low, high, guard))


def _outcome(value: float, rounded: Decimal, low: Decimal | None, high: Decimal | None, *, guard: float) -> str:
    if (low is not None and rounded < low) or (high is not None and rounded > high):
        return "does_not_conform"
    near_low = low is not None and guard > 0 and value < float(low) + guard
    near_high = high is not None and guard > 0 and value > float(high) - guard
    return "inconclusive" if near_low or near_high else "conforms"


def _sentence(outcome: str, rounded: Decimal, low: Decimal | None, high: Decimal | None, guard: float) -> str:
    if outcome == "does_not_conform":
        side = f"below the lower limit {low}" if low is not None and rounded < low else f"above the upper limit {high}"
        return f"{rounded} after rounding is {side}."
    if outcome == "inconclusive":
        return f"{rounded} after rounding is inside the limits but within the guard band of {guard:.2g}."
    return f"{rounded} after rounding is within {_words(low, high)}{' and outside the guard band' if guard else ''}."


def _words(low: Decimal | None, high: Decimal | None) -> str:
    if low is None:
        return f"the upper limit {high}"
    return f"the lower limit {low}" if high is None else f"the limits {low} to {high}"


def _limit(text: str | None) -> Decimal | None:
    return None if text is None else Decimal(text)


def _float(limit: Decimal | None) -> float | None:
    return None if limit is None else float(limit)
