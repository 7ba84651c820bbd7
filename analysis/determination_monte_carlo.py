"""A determination by Monte Carlo: the same model and inputs as its budget, drawn instead of linearized.

References
----------
JCGM 101:2008, clause 8 (validation of the GUM uncertainty framework by Monte Carlo).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from typing import Any

import numpy as np
import numpy.typing as npt

from analysis import model
from analysis.determination import compute
from analysis.determination_budget import measurement, solution_parts
from analysis.determination_parts import models_of_parts
from analysis.monte_carlo import monte_carlo
from analysis.titration_reading import blank_of, read_titrations
from analysis.uncertainty import Input, coverage_factor

FloatArray = npt.NDArray[np.float64]
Inputs = Mapping[str, Any]
MOST_DRAWS = 1_000_000
NORMAL_95 = 1.959964


def check_by_monte_carlo(
    inputs: Inputs, *, seed: int = 1, most_draws: int = MOST_DRAWS, progress: Callable[[int], None] | None = None
) -> dict[str, Any]:
    """Draw the inputs of a determination and compare value, u and interval with its budget.

    A solution's concentration is drawn from the physical inputs it rests on, so that what run and standardization
    share moves together. The budget, with Student's t for its effective degrees of
    freedom, is confirmed when the end points of both 95 % intervals differ by less than half
    a unit of the second digit of u (JCGM 101:2008, 8.1, for two significant digits).

    Parameters
    ----------
    inputs : mapping
        As for ``compute``; the determination must have a value.
    seed, most_draws, progress
        As for ``monte_carlo``.

    Raises
    ------
    ValueError
        When the determination has no value, or draws of it give no number.
    """
    outputs = compute(inputs)
    if outputs["value"] is None:
        raise ValueError("There is no result to check: " + " ".join(outputs["reasons"]))
    numbers = {line["number"] for line in outputs["titrations"] if line["in_set"]}
    titrations = read_titrations(inputs)
    inside = [item for item in titrations if not item.is_blank and item.number in numbers]
    kind, blank = inputs["kind"], blank_of(titrations)
    mean, named = measurement(inputs, inside, titrations, blank, kind=kind)
    how: dict[str, Any] = {"seed": seed, "most_draws": most_draws, "progress": progress}
    whole = _check(mean, named, inputs, outputs, **how)
    parts = models_of_parts(inputs, inside, titrations, blank) if outputs["parts"] else []
    whole["parts"] = [
        {"name": part.name, **_check(part.mean, part.named, part.inputs, result, **how)}
        for part, result in zip(parts, outputs["parts"], strict=True)
        if result["u"] > 0
    ]
    return whole


def _check(
    mean: model.Model, named: Sequence[Input], inputs: Inputs, outputs: Mapping[str, Any], *, seed: int,
    most_draws: int, progress: Callable[[int], None] | None,
) -> dict[str, Any]:  # fmt: skip
    counted = {line["key"] for line in outputs["budget"]}
    drawn, solutions = _opened(inputs, [_only_counted(item, counted) for item in named])

    def draws_of(values: Mapping[str, FloatArray]) -> FloatArray:
        whole: dict[str, Any] = dict(values)
        for name, (estimate, parts) in solutions.items():
            whole[name] = estimate + sum(values[part] for part in parts)
        return np.asarray(mean(whole), dtype=float)

    found = monte_carlo(draws_of, drawn, seed=seed, most_draws=most_draws, progress=progress)
    value, u = found.value, found.u
    if any(item.distribution == "t" and item.degrees_of_freedom < 3 and item.u for item in drawn):
        # Student's t has no standard deviation below three degrees of freedom, and no mean at one
        value, u = found.median, (found.interval[1] - found.interval[0]) / (2 * NORMAL_95)
    return _compared(outputs, value, u, found.interval, found.shortest, found.draws, found.is_stable)


def _only_counted(item: Input, counted: set[str]) -> Input:
    """Of the two kinds of scatter the smaller one is not in the budget; it is not drawn either."""
    if item.key not in ("reading", "repeatability") or item.key in counted:
        return item
    return Input(item.name, item.key, item.label, item.value, 0.0, item.unit, "normal", item.kind)


def _opened(inputs: Inputs, named: Sequence[Input]) -> tuple[list[Input], dict[str, tuple[float, list[str]]]]:
    drawn: list[Input] = []
    solutions: dict[str, tuple[float, list[str]]] = {}
    for item in named:
        parts = solution_parts(item.key, inputs)
        if not parts:
            drawn.append(item)
            continue
        names = []
        for place, (key, label, contribution, dof) in enumerate(parts):
            names.append(f"{item.name} part {place}")
            spread = "t" if math.isfinite(dof) else "normal"
            drawn.append(Input(names[-1], key, label, 0.0, contribution, item.unit, spread, "B", dof))
        solutions[item.name] = (item.value, names)
    return _with_distribution_of_the_run(drawn), solutions


def _with_distribution_of_the_run(drawn: Sequence[Input]) -> list[Input]:
    """An input that the run itself has is drawn by the run's distribution: it comes first of its key."""
    own = {item.key for item in drawn if " part " not in item.name}
    return sorted(drawn, key=lambda item: item.key in own and " part " in item.name)


def _compared(
    outputs: Mapping[str, Any],
    value: float,
    u: float,
    interval: tuple[float, float],
    shortest: tuple[float, float],
    draws: int,
    is_stable: bool,
) -> dict[str, Any]:
    dof = outputs["degrees_of_freedom"]
    k = coverage_factor(max(dof, 1.0) if dof else math.inf)
    by_budget = (outputs["value"] - k * outputs["u"], outputs["value"] + k * outputs["u"])
    tolerance = 0.5 * 10.0 ** (math.floor(math.log10(outputs["u"])) - 1) if outputs["u"] > 0 else 0.0
    largest = max(abs(interval[0] - by_budget[0]), abs(interval[1] - by_budget[1]))
    return {
        "value": value, "u": u, "interval": list(interval), "shortest": list(shortest), "draws": draws,
        "is_stable": is_stable, "budget_value": outputs["value"], "budget_u": outputs["u"],
        "budget_interval": list(by_budget), "largest_difference": largest, "tolerance": tolerance,
        "is_confirmed": largest <= tolerance, "unit": outputs["unit"],
        "sentence": _sentence(interval, by_budget, is_confirmed=largest <= tolerance),
    }  # fmt: skip


def _sentence(drawn: tuple[float, float], by_budget: tuple[float, float], *, is_confirmed: bool) -> str:
    if is_confirmed:
        return "The drawn 95 % interval agrees with the budget's within half a unit of the second digit of u."
    ratio = (drawn[1] - drawn[0]) / (by_budget[1] - by_budget[0])
    if ratio > 1:
        return (
            f"The drawn 95 % interval is {ratio:.2f} times as wide as the budget's: few replicates say little about "
            "their scatter, or an input is far from normal. More replicates help most."
        )
    return f"The drawn 95 % interval is {ratio:.2f} times as wide as the budget's, which is on the safe side."
