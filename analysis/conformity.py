"""Rounding to a limit, decision rules, and the probability of conformity.

References
----------
JCGM 106:2012 (conformity assessment); ASTM E29 and the general notices of pharmacopoeias (rounding to the
limit's places before comparison); ILAC-G8:09/2019 (guard bands).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, ROUND_HALF_UP, Decimal, InvalidOperation

from scipy import special

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
    lower_acceptance, upper_acceptance
        The limits a guard band further in; the limits themselves for simple acceptance.
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
    lower_acceptance: Decimal | None
    upper_acceptance: Decimal | None
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
    rounded = number.quantize(Decimal(1).scaleb(number.adjusted() - figures + 1), rounding=ROUNDINGS[rounding])
    if rounded.adjusted() == number.adjusted():
        return rounded
    return rounded.quantize(Decimal(1).scaleb(rounded.adjusted() - figures + 1))  # 9.995 became 10.00: 10.0


def probability_within(value: float, *, standard_uncertainty: float, lower: float | None, upper: float | None) -> float:
    """Probability that the true value lies within the limits, for a normal distribution about the result.

    References
    ----------
    JCGM 106:2012, equations 16 to 18 (a uniform prior).
    """
    if not (standard_uncertainty >= 0 and math.isfinite(standard_uncertainty)):
        raise ValueError(f"Standard uncertainty is {standard_uncertainty}; a finite number not below 0 is expected.")
    if not math.isfinite(value):
        raise ValueError(f"Value is {value}; a finite number is expected.")
    low, high = -math.inf if lower is None else lower, math.inf if upper is None else upper
    if standard_uncertainty == 0:
        return 1.0 if low <= value <= high else 0.0
    above, below = (high - value) / standard_uncertainty, (low - value) / standard_uncertainty
    if below > 0:  # both tails are on the far side: subtract the small ones, so that no digit is lost
        above, below = -below, -above
    return float(special.ndtr(above) - special.ndtr(below))


def verdict(
    value: float,
    *,
    standard_uncertainty: float,
    expanded: float,
    lower: str | None,
    upper: str | None,
    rounding: str,
    rule: str,
    places: int | None = None,
    figures: int | None = None,
    guard_factor: str = "1",
) -> Verdict:
    """Compare a result with limits by simple acceptance or with a guard band.

    Simple acceptance rounds the value to the limit's places and compares. With a guard band g = factor * U
    the value conforms only g inside the limits; between the guard band and the limit it is inconclusive;
    outside the limit, after rounding, it does not conform.

    Parameters
    ----------
    value, standard_uncertainty, expanded : float
        The result, unrounded, with u and U [unit of the result].
    lower, upper : str or None
        Limits as they were typed [unit of the result].
    places, figures : int
        Decimals, or else significant figures, to which the result is rounded for the comparison.
    rounding, rule : str
        half_up or half_even; simple or guard.
    guard_factor : str
        r of g = r U.

    Raises
    ------
    ValueError
        When there is no limit, the limits are out of order, or a rule is not known.

    References
    ----------
    JCGM 106:2012, clause 8; ILAC-G8:09/2019, clause 4.2.
    """
    low, high = _limits(lower, upper)
    if rule not in ("simple", "guard"):
        raise ValueError(f"Rule is {rule!r}; expected simple or guard.")
    rounded = _rounded(value, places=places, figures=figures, rounding=rounding)
    guard = _guard(expanded, guard_factor) if rule == "guard" else Decimal(0)
    accept = (None if low is None else low + guard, None if high is None else high - guard)
    outcome = _outcome(Decimal(repr(float(value))), rounded, (low, high), accept, guard=guard)
    probability = probability_within(
        value, standard_uncertainty=standard_uncertainty, lower=_float(low), upper=_float(high)
    )
    sentence = _sentence(outcome, rounded, (low, high), accept, guard=guard)
    return Verdict(outcome, value, rounded, low, high, *accept, float(guard), probability, sentence)


def _rounded(value: float, *, places: int | None, figures: int | None, rounding: str) -> Decimal:
    if places is not None and figures is None:
        return round_places(value, places=places, rounding=rounding)
    if figures is not None and places is None:
        return round_significant(value, figures=figures, rounding=rounding)
    raise ValueError(f"Rounding is to {places} decimals and {figures} significant figures; one of the two is expected.")


Pair = tuple[Decimal | None, Decimal | None]


def _outcome(value: Decimal, rounded: Decimal, limits: Pair, accept: Pair, *, guard: Decimal) -> str:
    low, high = limits
    if (low is not None and rounded < low) or (high is not None and rounded > high):
        return "does_not_conform"
    if guard == 0:
        return "conforms"
    is_near = (accept[0] is not None and value < accept[0]) or (accept[1] is not None and value > accept[1])
    return "inconclusive" if is_near else "conforms"


def _sentence(outcome: str, rounded: Decimal, limits: Pair, accept: Pair, *, guard: Decimal) -> str:
    low, high = limits
    if outcome == "does_not_conform":
        side = f"below the lower limit {low}" if low is not None and rounded < low else f"above the upper limit {high}"
        return f"{rounded} after rounding is {side}."
    if outcome == "inconclusive":
        narrow = accept[0] is not None and accept[1] is not None and accept[0] > accept[1]
        never = " The guard bands of both limits meet: no result can conform with this uncertainty." if narrow else ""
        band = f"within the guard band of {float(guard):.2g}"
        return f"{rounded} after rounding is inside the limits but {band}.{never}"
    beside = " and outside the guard band" if guard else ""
    return f"{rounded} after rounding is within {_words(low, high)}{beside}."


def _words(low: Decimal | None, high: Decimal | None) -> str:
    if low is None:
        return f"the upper limit {high}"
    return f"the lower limit {low}" if high is None else f"the limits {low} to {high}"


def _guard(expanded: float, factor: str) -> Decimal:
    if not (expanded >= 0 and math.isfinite(expanded)):
        raise ValueError(f"Expanded uncertainty is {expanded}; a finite number not below 0 is expected.")
    times = _limit(factor, name="Guard factor")
    assert times is not None
    if times < 0:
        raise ValueError(f"Guard factor is {factor}; a number not below 0 is expected.")
    return times * Decimal(repr(float(expanded)))


def _limits(lower: str | None, upper: str | None) -> Pair:
    low, high = _limit(lower, name="Lower limit"), _limit(upper, name="Upper limit")
    if low is None and high is None:
        raise ValueError("Lower and upper limit are both empty; at least one is expected.")
    if low is not None and high is not None and low >= high:
        raise ValueError(f"Lower limit is {low} and upper limit {high}; the lower must be below the upper.")
    return low, high


def _limit(text: str | None, *, name: str) -> Decimal | None:
    if text is None:
        return None
    try:
        number = Decimal(text)
    except InvalidOperation as problem:
        raise ValueError(f"{name} is {text!r}; a decimal number is expected.") from problem
    if not number.is_finite():
        raise ValueError(f"{name} is {text}; a finite number is expected.")
    return number


def _float(limit: Decimal | None) -> float | None:
    return None if limit is None else float(limit)
