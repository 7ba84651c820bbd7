"""Value, uncertainty and budget of a determination: every physical input once, scatter once."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

from analysis import model
from analysis.replicates import Spread, spread
from analysis.titration_inputs import Titration
from analysis.titration_reading import titre_inputs
from analysis.uncertainty import BudgetLine, Input, Propagated, from_budget, merged, propagate

Inputs = Mapping[str, Any]


def all_inputs(
    inputs: Inputs,
    inside: Sequence[Titration],
    titrations: Sequence[Titration],
    blank: float | None,
    *,
    kind: str,
) -> list[Input]:
    others = model.run_inputs(inputs) if kind == "run" else model.standardization_inputs(inputs)
    return [*others, *titre_inputs(inputs, inside, titrations, blank)]


def value_of(inputs: Inputs, item: Titration, blank: float | None, *, kind: str) -> float:
    """The value of one titration by itself, every input at its estimate."""
    return value_at_estimates(_model(inputs, item, kind=kind), all_inputs(inputs, [item], [], blank, kind=kind))


def value_at_estimates(value: model.Model, named: Sequence[Input]) -> float:
    """A model with every named input at its estimate, and no scatter."""
    return value({each.name: complex(each.value) for each in named} | {"repeatability": 1}).real


def propagated(
    inputs: Inputs,
    inside: Sequence[Titration],
    titrations: Sequence[Titration],
    blank: float | None,
    *,
    kind: str,
) -> Propagated:
    """Value, uncertainty and budget; a solution's line is opened into the physical inputs it rests on."""
    return combined(*measurement(inputs, inside, titrations, blank, kind=kind), inputs)


def measurement(
    inputs: Inputs,
    inside: Sequence[Titration],
    titrations: Sequence[Titration],
    blank: float | None,
    *,
    kind: str,
) -> tuple[model.Model, list[Input]]:
    """The mean of the titrations that count as a model, and its every input, their own scatter last."""
    mean = model.mean_model([_model(inputs, item, kind=kind) for item in inside])
    alone = spread([value_of(inputs, item, blank, kind=kind) for item in inside])
    return mean, [*all_inputs(inputs, inside, titrations, blank, kind=kind), repeatability(alone)]


def combined(mean: model.Model, named: Sequence[Input], inputs: Inputs) -> Propagated:
    """The law of propagation over named inputs, scatter counted once, solutions opened."""
    whole = _without_the_smaller(propagate(mean, named))
    opened = [line for each in whole.budget for line in _opened(each, inputs)]
    used = [line for line in merged(opened) if line.u > 0 or line.contribution]
    return from_budget(whole.value, sorted(used, key=lambda line: -abs(line.contribution)))


def _model(inputs: Inputs, item: Titration, *, kind: str) -> model.Model:
    return (model.run_value if kind == "run" else model.standardization_value)(inputs, item)


def _without_the_smaller(whole: Propagated) -> Propagated:
    """Scatter of the titrations contains the scatter of reading: the larger of the two counts, not both."""
    lines = {line.key: line for line in whole.budget}
    smaller = min(("reading", "repeatability"), key=lambda key: abs(lines[key].contribution))
    return from_budget(whole.value, [line for line in whole.budget if line.key != smaller])


def repeatability(alone: Spread) -> Input:
    """Type A: the standard deviation of the mean of the titrations that count, as a factor of the result."""
    relative = (alone.sd or 0.0) / math.sqrt(alone.n) / abs(alone.mean) if alone.mean else 0.0
    return Input(
        "repeatability",
        "repeatability",
        f"repeatability of {alone.n} titrations",
        1.0,
        relative,
        "",
        "t",
        "A",
        float(max(alone.n - 1, 1)),
    )


def _opened(line: BudgetLine, inputs: Inputs) -> list[BudgetLine]:
    """A solution's concentration as the inputs of its standardization, each with its sign; the rest as one line."""
    parts = solution_parts(line.key, inputs)
    if not parts:
        return [line]
    return [
        BudgetLine(
            key, label, line.value, line.unit, abs(u), "normal", "B", line.sensitivity, line.sensitivity * u, 0.0, dof
        )
        for key, label, u, dof in parts
    ]


def solution_parts(key: str, inputs: Inputs) -> list[tuple[str, str, float, float]]:
    """What a concentration rests on: key, label, signed contribution [mol/L], degrees of freedom; the rest as one."""
    solution = next((item for item in _solutions(inputs) if key == f"solution:{item['lot']}"), None)
    listed = (solution or {}).get("components") or []
    if solution is None or not listed:
        return []
    parts = [
        (part["key"], part["label"], float(part["u"]), float(part.get("degrees_of_freedom") or math.inf))
        for part in listed
    ]
    u = float(solution["u"])
    rest = math.sqrt(max(u**2 - sum(each**2 for _, _, each, _ in parts), 0.0))
    if rest > 1e-3 * u:
        parts.append((key, f"rest of lot {solution['lot']}", rest, math.inf))
    return parts


def _solutions(inputs: Inputs) -> list[Inputs]:
    standard = inputs.get("standard") or {}
    found = [
        inputs.get("titrant"),
        inputs.get("excess"),
        standard if standard.get("basis") == "titrant" else None,
    ]
    return [item for item in found if item]
