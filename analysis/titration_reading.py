"""Titrations of a determination as read, and the inputs that come with their titres."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

from analysis.curve_titre import curve_titre
from analysis.titration_inputs import Titration, burette_titre, number, optional
from analysis.uncertainty import Input

Inputs = Mapping[str, Any]
SQRT_12, SQRT_6 = math.sqrt(12), math.sqrt(6)


def read_titrations(inputs: Inputs) -> list[Titration]:
    """Every titration and blank, with its titre in mL from readings or from its recorded curve."""
    lines = [(line, True) for line in inputs.get("blanks") or []]
    lines += [(line, False) for line in inputs.get("replicates") or []]
    return [_titration(line, inputs, is_blank=is_blank) for line, is_blank in lines]


def blank_of(titrations: Sequence[Titration]) -> float | None:
    """Mean titre of the accepted blanks [mL], or None when there is none."""
    blanks = [item.titre for item in titrations if item.is_blank and not item.is_excluded and item.titre is not None]
    return sum(blanks) / len(blanks) if blanks else None


def titre_inputs(
    inputs: Inputs, inside: Sequence[Titration], titrations: Sequence[Titration], blank: float | None
) -> list[Input]:
    """The inputs of the titres that count: burette, reading or endpoint, blank and indicator.

    The burette's tolerance is one physical shift of the delivered volume, triangular (QUAM:2012.P1, A2); it is the
    same in every titre, and in the standardization where the same burette was used. Each reading is rounded to the
    burette's resolution, rectangular, two readings a titre (common practice). Overshoot of an indicator is
    subtracted only where no blank does.
    """
    burette, method = inputs["burette"], inputs["method"]
    tolerance = number(burette["tolerance"], name="Tolerance of the burette")
    bias = optional(method.get("indicator_bias_mL"), name="Indicator bias") or 0.0
    bias_u = optional(method.get("indicator_u_mL"), name="u of the indicator") or 0.0
    random = math.sqrt(sum(item.titre_u**2 for item in inside)) / len(inside) if inside else 0.0
    blanks = [item for item in titrations if item.is_blank and not item.is_excluded and item.titre is not None]
    blank_u = math.sqrt(sum(item.titre_u**2 for item in blanks)) / len(blanks) if blanks else 0.0
    from_curve = any(item.endpoint for item in inside)
    label = "endpoint of the curve" if from_curve else "reading the burette"
    return [
        Input(
            "volume",
            burette["key"],
            f"burette {burette['identifier']}",
            0.0,
            tolerance / SQRT_6,
            "mL",
            "triangular",
        ),
        Input("reading", "reading", label, 0.0, random, "mL", "normal" if from_curve else "rectangular"),
        Input("blank", "blank", "blank", blank or 0.0, blank_u, "mL", "rectangular"),
        Input(
            "bias",
            "indicator",
            "indicator past equivalence",
            0.0 if blank is not None else bias,
            bias_u,
            "mL",
        ),
    ]


def _titration(line: Inputs, inputs: Inputs, *, is_blank: bool) -> Titration:
    where = f"titration {line['number']}"
    amount = optional(line.get("amount"), name=f"Amount of {where}")
    if amount is not None and amount <= 0:
        raise ValueError(f"Amount of {where} is {line['amount']}; a number above 0 is expected.")
    endpoint: dict[str, Any] | None = None
    resolution = number(inputs["burette"]["resolution"], name="Resolution of the burette")
    titre_u = resolution / SQRT_12 * math.sqrt(2)
    if line.get("curve"):
        endpoint = curve_titre(line["curve"], settings=inputs["method"].get("curve") or {}, where=where)
        titre, titre_u = endpoint["volume"], endpoint["u"]
    else:
        titre = burette_titre(line, inputs["burette"])
    return Titration(
        number=int(line["number"]), is_blank=is_blank, is_excluded=bool(line.get("excluded")), amount=amount,
        titre=titre, titre_u=titre_u, temperature=optional(line.get("temperature"), name=f"Temperature of {where}"),
        endpoint=endpoint,
    )  # fmt: skip
