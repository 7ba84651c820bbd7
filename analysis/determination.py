"""The one entry point: canonical inputs of a run or a standardization to its official outputs.

The same function serves the preview of what is typed and the worker's calculation. It never drops a value by
itself: titrations outside the concordant set and excluded ones stay in the output.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

import analysis
from analysis.determination_budget import propagated, value_of
from analysis.determination_outputs import (
    advice,
    below_zero,
    factor_of,
    finite,
    line_output,
    outlier_tests,
    part_output,
    titration_output,
    unit_of,
    value_with_all,
    verdict_output,
)
from analysis.determination_parts import Part, parts_of
from analysis.replicate_choice import titrations_that_count
from analysis.replicates import spread
from analysis.titration_inputs import Titration, choice, optional, positive
from analysis.titration_reading import blank_of, read_titrations
from analysis.uncertainty import Propagated

Inputs = Mapping[str, Any]
NEEDED = {
    "temperature": "the volumes are corrected to 20 °C",
    "drift": "the titres are corrected for it",
    "duration": "the titres are corrected for drift",
}


def compute(inputs: Inputs) -> dict[str, Any]:
    """Outputs of a determination from its canonical inputs.

    Parameters
    ----------
    inputs : mapping
        Plain JSON data of kind "run" or "standardization"; numbers that were read are strings (DEVELOPERS.md lists
        every field). Readings that are still missing make a value of None with the reason.

    Returns
    -------
    dict
        Plain JSON data: titrations, statistics, value, u, degrees_of_freedom, k, U, unit, budget, flags, verdict.

    Raises
    ------
    ValueError
        With a sentence for the analyst that names the input and its value.

    References
    ----------
    QUAM:2012.P1 A2 and A3; JCGM 100:2008; JCGM 106:2012.
    """
    kind = choice(inputs.get("kind"), ("run", "standardization"), name="Kind")
    titrations = read_titrations(inputs)
    blank = blank_of(titrations)
    counted = [item for item in titrations if not item.is_blank and not item.is_excluded and item.is_complete]
    outputs = _frame(inputs, titrations, blank)
    if missing := _missing_beside(inputs, blank):
        return outputs | {"reasons": missing}
    values = _values(inputs, titrations, blank, kind=kind)
    _fill_titrations(outputs, values, blank)
    if not counted:
        return outputs | {"reasons": [*_unread(titrations), _missing(inputs, counted)]}
    inside, reasons, tie = titrations_that_count(inputs, counted, values, blank=blank)
    reasons += _unread(titrations) + _too_few_blanks(titrations)
    _mark_set(outputs, inside)
    parts, unsplit = _parts(inputs, inside, titrations, blank)
    reasons += unsplit
    whole = propagated(inputs, inside, titrations, blank, kind=kind)
    result = _result(
        inputs, whole, inside, counted, values, reasons=reasons, tie=tie, titrations=titrations, blank=blank
    )
    result["flags"] += [flag for part in parts if (flag := below_zero(part))]
    return outputs | result | {"parts": [part_output(part, inputs) for part in parts]}


def _frame(inputs: Inputs, titrations: Sequence[Titration], blank: float | None) -> dict[str, Any]:
    flags = [flag for item in titrations if item.endpoint for flag in item.endpoint["flags"]]
    return {
        "kind": inputs["kind"],
        "engine": analysis.VERSION,
        "titrations": [titration_output(item) for item in titrations],
        "blank": blank,
        "statistics": None,
        "outlier_tests": [],
        "acceptable": False,
        "reasons": [],
        "needs_person": any(item.endpoint and item.endpoint["needs_person"] for item in titrations),
        "flags": flags,
        "value": None,
        "u": None,
        "degrees_of_freedom": None,
        "k": None,
        "U": None,
        "unit": unit_of(inputs),
        "value_with_all": None,
        "budget": [],
        "advice": "",
        "factor": None,
        "verdict": None,
        "parts": [],
    }


def _parts(
    inputs: Inputs, inside: Sequence[Titration], titrations: Sequence[Titration], blank: float | None
) -> tuple[list[Part], list[str]]:
    """The further results, or why there are none yet."""
    try:
        return parts_of(inputs, inside, titrations, blank), []
    except ValueError as problem:
        return [], [str(problem)]


def _fill_titrations(outputs: dict[str, Any], values: Mapping[int, float], blank: float | None) -> None:
    for line in outputs["titrations"]:
        if line["titre"] is None or line["blank"]:
            continue
        line["net"] = line["titre"] - (blank or 0.0)
        line["value"] = values.get(line["number"])


def _mark_set(outputs: dict[str, Any], inside: Sequence[Titration]) -> None:
    numbers = {item.number for item in inside}
    for line in outputs["titrations"]:
        line["in_set"] = not line["blank"] and line["number"] in numbers


def _values(
    inputs: Inputs, titrations: Sequence[Titration], blank: float | None, *, kind: str
) -> dict[int, float]:  # fmt: skip
    """Value of every complete titration; an excluded one may give none, that can be why it is excluded."""
    found = {}
    for item in titrations:
        if item.is_blank or not item.is_complete:
            continue
        try:
            found[item.number] = _value_of(inputs, item, blank, kind=kind)
        except ValueError:
            if not item.is_excluded:
                raise
    return found


def _value_of(inputs: Inputs, item: Titration, blank: float | None, *, kind: str) -> float:
    try:
        value = value_of(inputs, item, blank, kind=kind)
    except ZeroDivisionError:
        value = math.inf
    if not math.isfinite(value):
        raise ValueError(
            f"Titration {item.number} gives no number: its net titre is 0 mL. Check its readings and the blank."
        )
    return value


def _result(
    inputs: Inputs, whole: Propagated, inside: Sequence[Titration], counted: Sequence[Titration],
    values: Mapping[int, float], *, reasons: list[str], tie: str, titrations: Sequence[Titration], blank: float | None,
) -> dict[str, Any]:  # fmt: skip
    k = factor_of(whole, inputs)
    counts = spread([values[item.number] for item in inside])
    titres = spread([float(item.titre or 0.0) for item in inside])
    flags = [flag for item in titrations if item.endpoint for flag in item.endpoint["flags"]] + ([tie] if tie else [])
    result: dict[str, Any] = {
        "value": whole.value,
        "u": whole.u,
        "degrees_of_freedom": finite(whole.degrees_of_freedom),
        "k": k,
        "U": k * whole.u,
        "budget": [line_output(line) for line in whole.budget],
        "advice": advice(whole),
        "acceptable": not reasons,
        "reasons": reasons,
        "flags": flags,
        "outlier_tests": outlier_tests([values[item.number] for item in counted]),
        "statistics": {
            "n": counts.n,
            "mean_titre": titres.mean,
            "mean": counts.mean,
            "sd": counts.sd,
            "rsd_percent": counts.rsd_percent,
            "range": titres.range,
        },
        "value_with_all": value_with_all(titrations, values),
    }
    if inputs["kind"] == "standardization":
        return result | _against_window(inputs, whole.value, flags)
    if inputs.get("specification"):
        result["verdict"] = verdict_output(inputs["specification"], whole, k * whole.u)
    return result


def _against_window(inputs: Inputs, value: float, flags: list[str]) -> dict[str, Any]:
    nominal, window = positive(inputs["nominal"], name="Nominal concentration"), inputs["window"]
    low, high = positive(window["low"], name="Window"), positive(window["high"], name="Window")
    outside = (
        []
        if low <= value <= high
        else [
            (
                f"{value:.5f} mol/L is outside the accepted {low:g} to "
                f"{high:g} mol/L. Adjust the solution or prepare a new lot."
            )
        ]
    )
    return {"factor": value / nominal, "flags": flags + outside}


def _missing_beside(inputs: Inputs, blank: float | None) -> list[str]:
    """What no result can do without, beside the titrations: the blank, and the loss of a result on the dry basis."""
    method, found = inputs["method"], []
    if blank is None and (method.get("titration") == "blank_difference" or inputs.get("blanks")):
        found.append("The blank is not complete. Titrate the blank, then the result follows.")
    is_dry = method.get("basis", "as_is") != "as_is"
    if is_dry and optional(method.get("loss_percent"), name="Loss on drying") is None:
        found.append("The loss on drying is not entered. Enter it, then the result follows.")
    return found


def _too_few_blanks(titrations: Sequence[Titration]) -> list[str]:
    blanks = [item for item in titrations if item.is_blank and not item.is_excluded]
    complete = sum(item.is_complete for item in blanks)
    if complete == len(blanks):
        return []
    return [f"{complete} of {len(blanks)} blanks are complete. Titrate the others."]


def _unread(titrations: Sequence[Titration]) -> list[str]:
    """What a correction needs beside the readings: the temperature of a volume, the drift and how long it took."""
    found = []
    for what, why in NEEDED.items():
        lacking = [
            item for item in titrations if what in item.lacks and item.titre is not None and not item.is_excluded
        ]
        names = ", ".join(f"{'blank' if item.is_blank else 'titration'} {item.number}" for item in lacking)
        if lacking:
            found.append(f"The {what} of {names} is not entered; {why}.")
    return found


def _missing(inputs: Inputs, counted: Sequence[Titration]) -> str:
    needed = int(inputs["method"]["replicates_needed"])
    return f"{len(counted)} of {needed} titrations are complete. Enter the amount and the readings of {needed}."
