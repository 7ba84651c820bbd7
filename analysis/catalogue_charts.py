"""Named calculations: control limits, run rules, charts with memory, run lengths and capability."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from analysis.calculation import Calculation, Field, Inputs, optional
from analysis.capability import capability, capability_from
from analysis.control import individuals_limits, subgroup_limits
from analysis.control_constants import chart_constants
from analysis.ewma_cusum import cusum, ewma
from analysis.rule_run_length import rules_run_length
from analysis.run_length import (
    cusum_interval_for,
    cusum_run_length,
    ewma_run_length,
    ewma_width_for,
    shewhart_run_length,
    siegmund_run_length,
)
from analysis.run_rules import OTHER_RULES, RULES, signals

VALUES = Field("values", "any", "the points, in order")
TARGET = Field("target", "unit of the values", "target or centre line")
SIGMA = Field("sigma", "unit of the values", "standard deviation of single points")
SHIFT = optional("shift", "sigma", "shift of the mean, 0 when left out")
SHIFTS = Field("shifts", "sigma", "shifts of the mean")


def _excluded(inputs: Inputs) -> dict[int, str]:
    return {int(place) - 1: reason for place, reason in inputs.get("excluded", {}).items()}


def _individuals(inputs: Inputs) -> dict[str, Any]:
    return asdict(individuals_limits(inputs["values"], excluded=_excluded(inputs)))


def _subgroups(inputs: Inputs) -> dict[str, Any]:
    found = subgroup_limits(inputs["subgroups"], spread=inputs["spread"], excluded=_excluded(inputs))
    first = {"mean_limits_first": found.mean_limits[0], "spread_limits_first": found.spread_limits[0]}
    return {**asdict(found), **first, "spread_centre_first": found.spread_centres[0]}


def _rules(inputs: Inputs) -> dict[str, list[int]]:
    names = inputs.get("rules") or list(RULES)
    found = signals(inputs["values"], centre=inputs["target"], sigma=inputs["sigma"], rules=names)
    return {name: [place + 1 for place in places] for name, places in found.items()}


def _first_signals(inputs: Inputs) -> dict[str, Any]:
    found = _rules(inputs)
    return {"rules": list(found), "first": [places[0] for places in found.values()]}


def _ewma(inputs: Inputs) -> dict[str, Any]:
    found = ewma(
        inputs["values"], target=inputs["target"], sigma=inputs["sigma"], weight=inputs["weight"],
        width=inputs["width"], is_steady=bool(inputs.get("is_steady", False)),
    )  # fmt: skip
    return {
        "z": found.z.tolist(), "lower": found.lower.tolist(), "upper": found.upper.tolist(),
        "signals": [place + 1 for place in found.signals],
        "first_signal": found.signals[0] + 1 if found.signals else None,
    }  # fmt: skip


def _cusum(inputs: Inputs) -> dict[str, Any]:
    found = cusum(
        inputs["values"], target=inputs["target"], sigma=inputs["sigma"], reference=inputs["reference"],
        interval=inputs["interval"], head_start=inputs.get("head_start", 0.0),
    )  # fmt: skip
    signals_at = [place + 1 for place in found.signals]
    return {"upper": found.upper.tolist(), "lower": found.lower.tolist(), "signals": signals_at}


def _ewma_lengths(inputs: Inputs) -> list[float]:
    weight, width = inputs["weight"], inputs["width"]
    return [ewma_run_length(weight=weight, width=width, shift=shift) for shift in inputs["shifts"]]


def _cusum_lengths(inputs: Inputs) -> list[float]:
    settings = {"reference": inputs["reference"], "interval": inputs["interval"]}
    sides, start = int(inputs.get("sides", 2)), inputs.get("head_start", 0.0)
    return [cusum_run_length(**settings, shift=shift, sides=sides, head_start=start) for shift in inputs["shifts"]]


def _capability(inputs: Inputs) -> dict[str, Any]:
    found = capability(
        inputs.get("values", []), lower=inputs.get("lower"), upper=inputs.get("upper"),
        subgroups=inputs.get("subgroups"), level=inputs.get("level", 0.95),
    )  # fmt: skip
    return asdict(found)


def _capability_from(inputs: Inputs) -> dict[str, Any]:
    sd, n = inputs["sd"], int(inputs["n"])
    found = capability_from(
        mean=inputs["mean"], sigma_within=sd, sigma_overall=sd, n=n, freedom_within=n - 1,
        lower=inputs.get("lower"), upper=inputs.get("upper"), level=inputs.get("level", 0.95),
    )  # fmt: skip
    return asdict(found)


LIMITS = (
    optional("lower", "unit of the values", "lower limit"),
    optional("upper", "unit of the values", "upper limit"),
)
LEVEL = optional("level", "", "confidence level, 0.95 when left out")
EXCLUDED = optional("excluded", "", "place (from 1) and reason of every point left out")
WEIGHT, WIDTH = Field("weight", "", "lambda"), Field("width", "sigma of the average", "L")
REFERENCE, INTERVAL = Field("reference", "sigma", "k"), Field("interval", "sigma", "h")
HEAD_START = optional("head_start", "sigma", "first value of the sums")

CHARTS = (
    Calculation(
        "chart_constants", "Constants of control charts for subgroups of n values",
        (Field("n", "", "values per subgroup"),), "A2, A3, c4, B3, B4, d2, d3, D3, D4",
        lambda inputs: asdict(chart_constants(int(inputs["n"]))),
    ),
    Calculation(
        "individuals_limits", "Limits of single values from their moving range", (VALUES, EXCLUDED),
        "centre, sigma, mean_moving_range, lower, upper, moving_range_upper [unit of the values]",
        _individuals,
    ),
    Calculation(
        "subgroup_limits", "Limits of an X-bar chart with ranges or standard deviations",
        (Field("subgroups", "any", "a list per subgroup"), Field("spread", "", "range or sd"), EXCLUDED),
        "centre, sigma, mean_limits, spread_limits, and those of the first subgroup", _subgroups,
    ),
    Calculation(
        "run_rules", "The points that break each run rule",
        (VALUES, TARGET, SIGMA, optional("rules", "", f"names among: {'; '.join([*RULES, *OTHER_RULES])}")),
        "for each rule broken, the places from 1", _rules,
    ),
    Calculation(
        "first_signals", "The run rules that are broken and where each is broken first",
        (VALUES, TARGET, SIGMA, optional("rules", "", "names; the eight usual ones when left out")),
        "rules, first (places from 1)", _first_signals,
    ),
    Calculation(
        "ewma", "Exponentially weighted moving average with its limits",
        (VALUES, TARGET, SIGMA, WEIGHT, WIDTH, optional("is_steady", "", "true for limits of a long series")),
        "z, lower, upper [unit of the values], signals (places from 1)", _ewma,
    ),
    Calculation(
        "cusum", "Tabular cumulative sum on both sides",
        (VALUES, TARGET, SIGMA, REFERENCE, INTERVAL, HEAD_START),
        "upper, lower [sigma], signals (places from 1)", _cusum,
    ),
    Calculation(
        "shewhart_run_length", "Average run length of single points with limits",
        (SHIFT, optional("width", "sigma", "half width of the limits, 3 when left out")), "points",
        lambda inputs: shewhart_run_length(shift=inputs.get("shift", 0.0), width=inputs.get("width", 3.0)),
    ),
    Calculation(
        "rules_run_length", "Average run length under several run rules together",
        (Field("rules", "", "names of rules that look at zones"), SHIFT), "points",
        lambda inputs: rules_run_length(inputs["rules"], shift=inputs.get("shift", 0.0)),
    ),
    Calculation(
        "ewma_run_lengths", "Average run lengths of an EWMA chart with steady limits",
        (WEIGHT, WIDTH, SHIFTS), "points",
        _ewma_lengths,
    ),
    Calculation(
        "cusum_run_lengths", "Average run lengths of a tabular CUSUM",
        (
            REFERENCE, INTERVAL, SHIFTS, optional("sides", "", "1 or 2, 2 when left out"),
            HEAD_START,
        ),
        "points", _cusum_lengths,
    ),
    Calculation(
        "siegmund_run_length", "Siegmund's approximation for one side of a CUSUM",
        (REFERENCE, INTERVAL, SHIFT), "points",
        lambda inputs: siegmund_run_length(
            reference=inputs["reference"], interval=inputs["interval"], shift=inputs.get("shift", 0.0)
        ),
    ),
    Calculation(
        "ewma_width", "Width L of an EWMA chart for a wanted average run length",
        (Field("run_length", "points", "wanted average run length"), WEIGHT), "L",
        lambda inputs: ewma_width_for(inputs["run_length"], weight=inputs["weight"]),
    ),
    Calculation(
        "cusum_interval", "Decision interval h of a CUSUM for a wanted average run length",
        (Field("run_length", "points", "wanted average run length"), REFERENCE), "h",
        lambda inputs: cusum_interval_for(inputs["run_length"], reference=inputs["reference"]),
    ),
    Calculation(
        "capability", "Capability of values or subgroups against limits, with confidence intervals",
        (
            optional("values", "any", "single values, in order"),
            optional("subgroups", "any", "a list per subgroup"),
            *LIMITS, LEVEL,
        ),
        "n, mean, sigma_within, sigma_overall, cp, cpk, pp, ppk, off_centre, expected_outside", _capability,
    ),
    Calculation(
        "capability_of_summary", "Capability from a mean and a standard deviation",
        (
            Field("mean", "any", "mean"), Field("sd", "unit of the mean", "standard deviation"),
            Field("n", "", "number of values"), *LIMITS, LEVEL,
        ),
        "cp, cpk, pp, ppk, off_centre, expected_outside", _capability_from,
    ),
)  # fmt: skip
