"""Named calculations: rounding, conformity, guard bands and risks."""

from __future__ import annotations

from dataclasses import asdict
from decimal import Decimal
from typing import Any

from scipy import special

from analysis.calculation import Calculation, Field, Inputs, optional
from analysis.conformity import probability_within, round_places, round_significant, verdict
from analysis.risk import acceptance_limits, guard_band_for, process_risks, specific_risk

ROUNDING = Field("rounding", "", "half_up or half_even")
LOWER = optional("lower", "unit of the value", "lower limit")
UPPER = optional("upper", "unit of the value", "upper limit")
U = Field("standard_uncertainty", "unit of the value", "standard uncertainty u")


def _rounded(inputs: Inputs) -> str:
    if (inputs.get("places") is None) == (inputs.get("figures") is None):
        raise ValueError("rounding: expected either places or figures.")
    value = Decimal(str(inputs["value"]))
    if inputs.get("places") is not None:
        return str(round_places(value, places=int(inputs["places"]), rounding=inputs["rounding"]))
    return str(round_significant(value, figures=int(inputs["figures"]), rounding=inputs["rounding"]))


def _verdict(inputs: Inputs) -> dict[str, Any]:
    found = verdict(
        float(inputs["value"]), standard_uncertainty=float(inputs.get("standard_uncertainty", 0.0)),
        expanded=float(inputs.get("expanded", 0.0)), lower=inputs.get("lower"), upper=inputs.get("upper"),
        places=_count(inputs.get("places")), figures=_count(inputs.get("figures")),
        rounding=inputs["rounding"], rule=inputs["rule"],
        guard_factor=str(inputs.get("guard_factor", "1")),
    )  # fmt: skip
    return {
        "outcome": found.outcome, "rounded": str(found.rounded), "guard": found.guard,
        "probability": found.probability, "sentence": found.sentence,
    }  # fmt: skip


def _count(value: Any) -> int | None:
    return None if value is None else int(value)


def _probability(inputs: Inputs) -> dict[str, float]:
    value, u = inputs["value"], inputs["standard_uncertainty"]
    lower, upper = inputs.get("lower"), inputs.get("upper")
    inside = probability_within(value, standard_uncertainty=u, lower=lower, upper=upper)
    below = 0.0 if lower is None else probability_within(value, standard_uncertainty=u, lower=None, upper=lower)
    above = 0.0 if upper is None else probability_within(value, standard_uncertainty=u, lower=upper, upper=None)
    return {"inside": inside, "below": below, "above": above}


def _guard_band(inputs: Inputs) -> dict[str, float | None]:
    guard = guard_band_for(inputs["risk"], standard_uncertainty=inputs["standard_uncertainty"])
    low, high = acceptance_limits(lower=inputs.get("lower"), upper=inputs.get("upper"), guard=guard)
    return {"guard": guard, "lower": low, "upper": high}


def _risks(inputs: Inputs) -> dict[str, float]:
    return asdict(
        process_risks(
            mean=inputs["mean"], sd=inputs["sd"], standard_uncertainty=inputs["standard_uncertainty"],
            lower=inputs.get("lower"), upper=inputs.get("upper"), guard=inputs.get("guard", 0.0),
        )
    )  # fmt: skip


CONFORMITY = (
    Calculation(
        "rounding", "Round a decimal number by a rule",
        (
            Field("value", "any", "the number, as text so that its digits are kept"), ROUNDING,
            optional("places", "", "decimals to keep"),
            optional("figures", "", "significant figures to keep"),
        ),
        "the rounded number as text", _rounded,
    ),
    Calculation(
        "conformity", "Compare a result with limits by simple acceptance or with a guard band",
        (
            Field("value", "any", "the result, not rounded"),
            optional("places", "", "decimals of the limits"), optional("figures", "", "or significant figures"),
            ROUNDING, Field("rule", "", "simple or guard"),
            optional("lower", "unit of the value", "lower limit, as text"),
            optional("upper", "unit of the value", "upper limit, as text"),
            optional("standard_uncertainty", "unit of the value", "standard uncertainty u"),
            optional("expanded", "unit of the value", "expanded uncertainty U"),
            optional("guard_factor", "", "r of the guard band r U, as text"),
        ),
        "outcome, rounded, guard [unit of the value], probability, sentence", _verdict,
    ),
    Calculation(
        "probability_of_conformity",
        "Probability that the true value lies within, below and above the limits",
        (Field("value", "any", "the result"), U, LOWER, UPPER), "inside, below, above", _probability,
    ),
    Calculation(
        "conformity_quantile",
        "Distance from a limit, in standard uncertainties, for a probability of conformity",
        (Field("probability", "", "probability of conformity"),), "z",
        lambda inputs: float(special.ndtri(inputs["probability"])),
    ),
    Calculation(
        "guard_band", "Width of the guard band for a wanted risk, and the limits of acceptance",
        (Field("risk", "", "largest risk of a wrong acceptance"), U, LOWER, UPPER),
        "guard, lower, upper [unit of the value]", _guard_band,
    ),
    Calculation(
        "specific_risk", "Risk of a wrong acceptance for a result at the limit of acceptance",
        (Field("guard", "any", "width of the guard band"), U), "probability",
        lambda inputs: specific_risk(**inputs),
    ),
    Calculation(
        "process_risks", "Consumer's and producer's risk of a process judged with a guard band",
        (
            Field("mean", "any", "mean of the true values"),
            Field("sd", "unit of the mean", "their standard deviation"),
            U, LOWER, UPPER, optional("guard", "unit of the mean", "width of the guard band"),
        ),
        "consumer, producer, nonconforming, accepted", _risks,
    ),
)  # fmt: skip
