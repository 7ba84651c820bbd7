"""The outputs of a determination as plain data."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

from analysis.conformity import verdict
from analysis.determination_parts import Part
from analysis.outliers import dixon, grubbs
from analysis.titration_inputs import Titration
from analysis.uncertainty import BudgetLine, Propagated, coverage_factor

Inputs = Mapping[str, Any]


def titration_output(item: Titration) -> dict[str, Any]:
    """One titration, its value and its net titre still to come."""
    return {
        "number": item.number, "blank": item.is_blank, "excluded": item.is_excluded, "titre": item.titre, "net": None,
        "value": None, "in_set": False, "endpoint": item.endpoint,
    }  # fmt: skip


def part_output(part: Part, inputs: Inputs) -> dict[str, Any]:
    """One further result with its budget."""
    whole, k = part.whole, factor_of(part.whole, inputs)
    return {
        "name": part.name, "takes": part.takes, "formula": part.formula, "value": whole.value, "u": whole.u, "k": k,
        "U": k * whole.u, "unit": unit_of(inputs), "degrees_of_freedom": finite(whole.degrees_of_freedom),
        "budget": [line_output(line) for line in whole.budget],
        "values": [{"number": number, "value": value} for number, value in part.values.items()],
    }  # fmt: skip


def below_zero(part: Part) -> str:
    """The sentence for a part that is clearly negative, or nothing."""
    if part.whole.value >= -2 * part.whole.u or part.whole.value == 0:
        return ""
    return f"{part.name.capitalize()} is below zero: the endpoints do not fit what the method takes the sample for."


def factor_of(whole: Propagated, inputs: Inputs) -> float:
    """The coverage factor by the method's rule."""
    return coverage_factor(max(whole.degrees_of_freedom, 1.0), rule=inputs["method"].get("coverage", "k2"))


def finite(value: float) -> float | None:
    """A number, or None for infinite degrees of freedom."""
    return None if math.isinf(value) else value


def verdict_output(limits: Inputs, whole: Propagated, expanded: float) -> dict[str, Any]:
    """The comparison with the limits."""
    found = verdict(
        whole.value, standard_uncertainty=whole.u, expanded=expanded, lower=limits["lower"], upper=limits["upper"],
        rounding=limits["rounding"], rule=limits["rule"], guard_factor=limits["guard_factor"],
        **{str(limits.get("digits", "places")): int(limits["places"])},
    )  # fmt: skip
    return {
        "outcome": found.outcome, "rounded": str(found.rounded), "lower": limits["lower"], "upper": limits["upper"],
        "guard": found.guard, "probability": found.probability, "sentence": found.sentence,
    }  # fmt: skip


def value_with_all(titrations: Sequence[Titration], values: Mapping[int, float]) -> float | None:
    """The mean with the excluded titrations counted, or None where there are none."""
    if not any(item.is_excluded for item in titrations if not item.is_blank):
        return None
    return sum(values.values()) / len(values)


def outlier_tests(values: Sequence[float]) -> list[dict[str, Any]]:
    """Dixon and Grubbs on the values that are not excluded; they inform."""
    if len(values) < 3 or max(values) == min(values):
        return []
    kept = ("test", "suspect", "statistic", "critical", "alpha", "sides")
    said = [(test, {key: getattr(test, key) for key in kept}) for test in (grubbs(values), dixon(values))]
    return [line | {"beyond": test.is_beyond, "sentence": test.sentence} for test, line in said]


def advice(whole: Propagated) -> str:
    """What would reduce the uncertainty most."""
    if not whole.budget or whole.u == 0:
        return ""
    main = whole.budget[0]
    without = math.sqrt(max(whole.u**2 - main.contribution**2, 0.0))
    return (
        f"Most comes from {main.label}, {main.share:.0%} of the variance; "
        f"without it u would be {without:.2g} instead of {whole.u:.2g}."
    )


def line_output(line: BudgetLine) -> dict[str, Any]:
    """One line of a budget."""
    dof = line.degrees_of_freedom
    return {
        "key": line.key, "label": line.label, "value": line.value, "unit": line.unit, "u": line.u,
        "distribution": line.distribution, "type": line.kind, "sensitivity": line.sensitivity,
        "contribution": line.contribution, "share": line.share, "degrees_of_freedom": None if math.isinf(dof) else dof,
    }  # fmt: skip


def unit_of(inputs: Inputs) -> str:
    """The unit of the result."""
    return str(inputs["method"].get("unit", "mol/L"))
