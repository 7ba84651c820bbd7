"""Named calculations: uncertainty budgets of a formula, coverage factors, half-widths."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from analysis.calculation import Calculation, Field, Inputs, optional
from analysis.covariance import mean_covariance, propagate_together
from analysis.formula import parse_model
from analysis.monte_carlo import monte_carlo
from analysis.together import Result, use_together
from analysis.uncertainty import Input, coverage_factor, propagate

DIVISORS = {"rectangular": math.sqrt(3), "triangular": math.sqrt(6), "normal": 1.0, "u_shaped": math.sqrt(2)}


def standard_uncertainty(part: Mapping[str, Any]) -> float:
    """u of one source: given as u, or as a half-width with its distribution, times a factor and a number of
    times.

    Raises
    ------
    ValueError
        When neither is given or the distribution is not known.
    """
    if part.get("u") is not None:
        return float(part["u"])
    if part.get("half_width") is None:
        raise ValueError("A source of uncertainty has neither u nor half_width; one of them is expected.")
    shape = part.get("distribution", "rectangular")
    if shape not in DIVISORS:
        raise ValueError(f"Distribution is {shape!r}; expected one of {', '.join(DIVISORS)}.")
    width = float(part["half_width"]) * float(part.get("sensitivity", 1.0))
    return width / DIVISORS[shape] * math.sqrt(int(part.get("times", 1)))


def _input(name: str, data: Mapping[str, Any]) -> Input:
    parts = data.get("parts")
    u = math.hypot(*(standard_uncertainty(part) for part in parts)) if parts else standard_uncertainty(data)
    freedom = data.get("degrees_of_freedom")
    return Input(
        name, data.get("key", name), name, float(data["value"]), u, data.get("unit", ""),
        distribution=_distribution(data), degrees_of_freedom=math.inf if freedom is None else float(freedom),
    )  # fmt: skip


def _distribution(data: Mapping[str, Any]) -> str:
    """The shape that draws take: that of a single half-width, normal for anything put together."""
    if data.get("parts") or data.get("u") is not None:
        return str(data.get("distribution", "normal"))
    return str(data.get("distribution", "rectangular"))


def _monte_carlo(inputs: Inputs) -> dict[str, Any]:
    sources = [_input(name, data) for name, data in inputs["inputs"].items()]
    settings = {key: inputs[key] for key in ("level", "digits", "most_draws", "seed") if inputs.get(key) is not None}
    found = monte_carlo(parse_model(inputs["formula"]), sources, **settings)
    return {
        "value": found.value, "u": found.u, "interval": list(found.interval),
        "shortest": list(found.shortest),
        "draws": found.draws, "is_stable": found.is_stable,
    }  # fmt: skip


def _together(inputs: Inputs) -> dict[str, Any]:
    """Several results of means that were read together."""
    names, rows = list(inputs["readings"]), list(inputs["readings"].values())
    covariance = mean_covariance(rows)
    u = [math.sqrt(covariance[i][i]) for i in range(len(rows))]
    sources = [Input(n, n, n, sum(r) / len(r), s, "") for n, r, s in zip(names, rows, u, strict=True)]
    pairs = [(i, j) for i in range(len(rows)) for j in range(i + 1, len(rows))]
    r_in = {(names[i], names[j]): float(covariance[i][j]) / (u[i] * u[j]) for i, j in pairs}
    found = propagate_together([parse_model(text) for text in inputs["formulas"]], sources, correlations=r_in)
    count = len(inputs["formulas"])
    return {
        "values": found.values.tolist(), "u": found.u.tolist(), "input_correlations": list(r_in.values()),
        "correlations": [float(found.correlation[i, j]) for i in range(count) for j in range(i + 1, count)],
    }  # fmt: skip


def _budget(inputs: Inputs) -> dict[str, Any]:
    sources = [_input(name, data) for name, data in inputs["inputs"].items()]
    found = propagate(parse_model(inputs["formula"]), sources)
    rule, level = inputs.get("coverage", "k2"), float(inputs.get("level", 0.95))
    k = coverage_factor(found.degrees_of_freedom, rule=rule, level=level)
    return {
        "value": found.value, "u": found.u,
        "relative_percent": 100 * found.u / abs(found.value) if found.value else None,
        "degrees_of_freedom": None if math.isinf(found.degrees_of_freedom) else found.degrees_of_freedom,
        "k": k, "U": k * found.u, "inputs_u": {source.name: source.u for source in sources},
        "contributions": {line.label: abs(line.contribution) for line in found.budget},
        "shares": {line.label: line.share for line in found.budget},
    }  # fmt: skip


def _combined(inputs: Inputs) -> float:
    return math.hypot(*(standard_uncertainty(part) for part in inputs["parts"]))


def _results_together(inputs: Inputs) -> dict[str, Any]:
    unit = str(inputs.get("unit", ""))
    found = use_together(
        [Result(str(item["name"]), float(item["value"]), unit, item["contributions"]) for item in inputs["results"]]
    )
    weighted, count = found.weighted, len(found.results)
    return {
        "mean": found.mean.value, "u": found.mean.u, "u_if_independent": found.mean.u_if_independent,
        "weighted_mean": weighted.value if weighted else None, "weighted_u": weighted.u if weighted else None,
        "zeta": [item.zeta for item in found.differences], "probability": found.probability,
        "correlations": [float(found.correlation[i, j]) for i in range(count) for j in range(i + 1, count)],
    }  # fmt: skip


def _coverage(inputs: Inputs) -> list[float]:
    freedom = inputs.get("degrees_of_freedom")
    known = math.inf if freedom is None else float(freedom)
    return [coverage_factor(known, rule="effective", level=level) for level in inputs["levels"]]


SOURCES = Field(
    "inputs", "", "by name: value with u, or half_width and distribution (rectangular, triangular, normal, "
    "u_shaped) with times and sensitivity, or parts (a list of these); degrees_of_freedom; key"
)  # fmt: skip

BUDGETS = (
    Calculation(
        "monte_carlo", "Distribution of a formula of named inputs by Monte Carlo",
        (
            Field("formula", "", "such as 1000*m*P/(M*V)"), SOURCES,
            optional("level", "", "0.95 when left out"),
            optional("digits", "", "digits of u that must stand still, 2 when left out"),
            optional("most_draws", "", "2000000 when left out"), optional("seed", "", "1 when left out"),
        ),
        "value, u, interval, shortest, draws, is_stable", _monte_carlo,
    ),
    Calculation(
        "correlated_results", "Several formulas of means that were read together, with their correlations",
        (
            Field("formulas", "", "a list of formulas"),
            Field("readings", "any", "by name: readings, as many of each, in the order they were read"),
        ),
        "values, u, input_correlations, correlations (pairs in order)", _together,
    ),
    Calculation(
        "results_together", "Results that share inputs: their mean, differences and correlation",
        (
            Field("results", "one unit", "a list of name, value and contributions (signed u by the input's key)"),
            optional("unit", "", "of the results"),
        ),
        "mean, u, u_if_independent, weighted_mean, weighted_u, zeta (pairs in order), correlations, probability",
        _results_together,
    ),
    Calculation(
        "uncertainty_budget", "Value and uncertainty of a formula of named inputs",
        (
            Field("formula", "", "such as 1000*m*P/(M*V)"),
            SOURCES,
            optional("coverage", "", "k2 (when left out) or effective"),
            optional("level", "", "0.95 when left out"),
        ),
        "value, u, relative_percent, degrees_of_freedom, k, U, inputs_u, contributions, shares", _budget,
    ),
    Calculation(
        "combined_uncertainty", "Standard uncertainty of several independent sources",
        (Field("parts", "one unit", "a list of u, or half_width with distribution, times and sensitivity"),),
        "unit of the parts", _combined,
    ),
    Calculation(
        "coverage_factor", "Student's factor for degrees of freedom and levels",
        (Field("levels", "", "probabilities"), optional("degrees_of_freedom", "", "infinite when left out")),
        "one factor per level", _coverage,
    ),
)  # fmt: skip
