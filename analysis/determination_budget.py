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


def propagated(
    inputs: Inputs,
    inside: Sequence[Titration],
    titrations: Sequence[Titration],
    blank: float | None,
    *,
    kind: str,
) -> Propagated:
    """Value, uncertainty and budget; a solution's line is opened into the physical inputs it rests on."""
    make = model.run_value if kind == "run" else model.standardization_value
    models = [make(inputs, item) for item in inside]
    alone = [
        model(
            {each.name: complex(each.value) for each in all_inputs(inputs, [item], [], blank, kind=kind)}
            | {"repeatability": 1}
        ).real
        for model, item in zip(models, inside, strict=True)
    ]
    named = [*all_inputs(inputs, inside, titrations, blank, kind=kind), _repeatability(spread(alone))]
    whole = _without_the_smaller(propagate(model.mean_model(models), named))
    opened = [line for each in whole.budget for line in _opened(each, inputs)]
    used = [line for line in merged(opened) if line.u > 0 or line.contribution]
    return from_budget(whole.value, sorted(used, key=lambda line: -abs(line.contribution)))


def _without_the_smaller(whole: Propagated) -> Propagated:
    """Scatter of the titrations contains the scatter of reading: the larger of the two counts, not both."""
    lines = {line.key: line for line in whole.budget}
    smaller = min(("reading", "repeatability"), key=lambda key: abs(lines[key].contribution))
    return from_budget(whole.value, [line for line in whole.budget if line.key != smaller])


def _repeatability(alone: Spread) -> Input:
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
    solution = next((item for item in _solutions(inputs) if line.key == f"solution:{item['lot']}"), None)
    parts = (solution or {}).get("components") or []
    if solution is None or not parts:
        return [line]
    lines = [
        BudgetLine(
            part["key"], part["label"], line.value, line.unit, abs(float(part["u"])), "normal", "B", line.sensitivity,
            line.sensitivity * float(part["u"]), 0.0, float(part.get("degrees_of_freedom") or math.inf),
        )
        for part in parts
    ]  # fmt: skip
    known = sum(float(part["u"]) ** 2 for part in parts)
    rest = math.sqrt(max(line.u**2 - known, 0.0))
    if rest > 1e-3 * line.u:
        lines.append(
            BudgetLine(
                line.key,
                line.label,
                line.value,
                line.unit,
                rest,
                "normal",
                "B",
                line.sensitivity,
                line.sensitivity * rest,
                0.0,
                math.inf,
            )
        )
    return lines


def _solutions(inputs: Inputs) -> list[Inputs]:
    standard = inputs.get("standard") or {}
    found = [
        inputs.get("titrant"),
        inputs.get("excess"),
        standard if standard.get("basis") == "titrant" else None,
    ]
    return [item for item in found if item]
