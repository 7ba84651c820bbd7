"""Several results from the endpoints of one titration: mixed acids, carbonate and hydrogen carbonate, alkalinity.

References
----------
Standard Methods for the Examination of Water and Wastewater, 2320 B (alkalinity relationships); Harris, Quantitative
Chemical Analysis (titration of mixtures); JCGM 100:2008.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

from analysis import model
from analysis.alkalinity import alkalinity_shares, check_alkalinity
from analysis.determination_budget import combined, repeatability, value_at_estimates
from analysis.replicates import spread
from analysis.titration_inputs import Titration, choice
from analysis.titration_reading import titre_inputs
from analysis.uncertainty import Input, Propagated

Inputs = Mapping[str, Any]
FIXED = {"first": (1.0, 0.0), "second": (0.0, 1.0), "second less first": (-1.0, 1.0),
         "second less twice first": (-2.0, 1.0)}  # fmt: skip
ALKALINITY = ("hydroxide", "carbonate", "hydrogen carbonate")
TAKES = (*FIXED, *ALKALINITY)


@dataclass(frozen=True, slots=True)
class Part:
    """One further result, with its value in each titration [method's unit] by the titration's number."""

    name: str
    takes: str
    formula: str
    whole: Propagated
    values: dict[int, float]


@dataclass(frozen=True, slots=True)
class PartModel:
    """How one further result follows from its named inputs; ``inputs`` are the run's, with the part's substance."""

    name: str
    takes: str
    formula: str
    inputs: Inputs
    mean: model.Model
    named: list[Input]
    values: dict[int, float]


def parts_of(
    inputs: Inputs, inside: Sequence[Titration], titrations: Sequence[Titration], blank: float | None
) -> list[Part]:
    """Every further result of a run, from the titrations that count.

    Each takes a titrant volume a V1 + b V2 from the two endpoints; for the kinds of alkalinity a and b follow from
    which kinds the mean volumes say there are. The blank is that of the last endpoint.

    Raises
    ------
    ValueError
        When a rule is not known or a titration has not both endpoints.
    """
    return [
        Part(
            model_.name, model_.takes, model_.formula, combined(model_.mean, model_.named, model_.inputs), model_.values
        )
        for model_ in models_of_parts(inputs, inside, titrations, blank)
    ]


def models_of_parts(
    inputs: Inputs, inside: Sequence[Titration], titrations: Sequence[Titration], blank: float | None
) -> list[PartModel]:
    """The measurement model of every further result, with its named inputs; ValueError as ``parts_of``."""
    wanted = inputs["method"].get("parts") or []
    if not wanted:
        return []
    for item in inside:
        if len(item.ends) < 2:
            raise ValueError(
                f"Titration {item.number} has {len(item.ends)} endpoint; {', '.join(part['name'] for part in wanted)} "
                "need the first and the second."
            )
    first = sum(item.ends[0][0] for item in inside) / len(inside)
    last = sum(item.ends[1][0] for item in inside) / len(inside) - (blank or 0.0)
    return [_part(inputs, part, inside, titrations, blank, weights=_weights(part, first, last)) for part in wanted]


def _weights(part: Inputs, first: float, last: float) -> tuple[float, float]:
    """How many times the first and the last volume a part takes."""
    takes = choice(part["takes"], TAKES, name=f"{part['name']} takes")
    if takes in FIXED:
        return FIXED[takes]
    check_alkalinity(first, max(last, first))
    return alkalinity_shares(first, last)[ALKALINITY.index(takes)]


def _part(
    inputs: Inputs, part: Inputs, inside: Sequence[Titration], titrations: Sequence[Titration], blank: float | None,
    *, weights: tuple[float, float],
) -> PartModel:  # fmt: skip
    own = _inputs_of(inputs, part)
    taken = [_taken(item, weights) for item in inside]
    others = model.run_inputs(own)
    models = [model.run_value(own, item) for item in taken]
    alone = {
        item.number: value_at_estimates(value, [*others, *_volumes(own, [item], [], blank, weights)])
        for item, value in zip(taken, models, strict=True)
    }
    named = [*others, *_volumes(own, taken, titrations, blank, weights), repeatability(spread(list(alone.values())))]
    return PartModel(part["name"], part["takes"], part["formula"], own, model.mean_model(models), named, alone)


def _inputs_of(inputs: Inputs, part: Inputs) -> dict[str, Any]:
    method = {**inputs["method"], "ratio": part["ratio"]}
    if method.get("equivalent_formula"):
        method["equivalent_formula"] = part["formula"]
    substance = {"name": part["name"], "formula": part["formula"], "molar_mass": part["molar_mass"], "u": part["u"]}
    return {**inputs, "method": method, "substance": substance}


def _taken(item: Titration, weights: tuple[float, float]) -> Titration:
    (first, first_u), (last, last_u) = item.ends[:2]
    volume = weights[0] * first + weights[1] * last
    return replace(item, titre=volume, titre_u=math.hypot(weights[0] * first_u, weights[1] * last_u))


def _volumes(
    inputs: Inputs, taken: Sequence[Titration], titrations: Sequence[Titration], blank: float | None,
    weights: tuple[float, float],
) -> list[Input]:  # fmt: skip
    """The inputs of the volume that is taken: the burette's error at an endpoint taken off is another one."""
    first, last = weights
    found = {item.name: item for item in titre_inputs(inputs, taken, titrations, blank)}
    volume, bias, none = found["volume"], found["bias"], found["blank"]
    added, off = max(first, last, 0.0), max(-first, -last, 0.0)
    label = f"{volume.label} at the endpoint taken off"
    found["volume"] = replace(volume, u=added * volume.u)
    found["other_end"] = replace(volume, name="other_end", key="other_end", label=label, u=off * volume.u)
    found["bias"] = replace(bias, value=(first + last) * bias.value, u=abs(first + last) * bias.u)
    found["blank"] = replace(none, value=last * none.value, u=abs(last) * none.u)
    return list(found.values())
