"""Named calculations: molar masses, results and titrant concentrations, amounts and uncertainty budgets."""

from __future__ import annotations

import math
from typing import Any

from analysis.amount import (
    amount_by_back_titration,
    amount_by_difference,
    amount_direct,
    ratio_of,
    titrant_by_mass,
    titrant_by_titrant,
)
from analysis.calculation import Calculation, Field, Inputs, optional
from analysis.catalogue_budget import BUDGETS
from analysis.determination import compute
from analysis.substance import molar_mass

RATIO = optional("ratio", "mol/mol", "stoichiometric ratio as text, such as 1/2; 1 when left out")
CONCENTRATION = Field("concentration", "mol/L", "titrant")


def _real(value: complex) -> float:
    return float(value.real)


def _ratio(inputs: Inputs) -> float:
    return ratio_of(str(inputs.get("ratio", "1")))


def _molar_mass(inputs: Inputs) -> dict[str, float]:
    weights = inputs.get("weights")
    if weights is None:
        found = molar_mass(inputs["formula"])
    else:
        found = molar_mass(inputs["formula"], weights={key: (value, u) for key, (value, u) in weights.items()})
    return {"value": found.value, "standard_uncertainty": found.standard_uncertainty}


def _titrant_equivalent(inputs: Inputs) -> float:
    """Milligrams of a substance that 1 mL of titrant stands for."""
    mass = inputs["molar_mass"] if "molar_mass" in inputs else molar_mass(inputs["formula"]).value
    return _real(amount_direct(concentration=inputs["concentration"], net=1.0, ratio=_ratio(inputs)) * mass * 1000)


def _by_mass(inputs: Inputs) -> float:
    value = titrant_by_mass(
        mass=inputs["mass"], buoyancy=inputs.get("buoyancy", 1.0), purity=inputs["purity"],
        ratio=_ratio(inputs),
        molar_mass=inputs["molar_mass"], volume=inputs["volume"],
    )  # fmt: skip
    return _real(value)


def _by_titrant(inputs: Inputs) -> float:
    value = titrant_by_titrant(
        concentration=inputs["concentration"],
        aliquot=inputs["aliquot"],
        ratio=_ratio(inputs),
        volume=inputs["volume"],
    )
    return _real(value)


def _amount(inputs: Inputs) -> float:
    ratio, kind = _ratio(inputs), inputs.get("titration", "direct")
    if kind == "direct":
        return _real(amount_direct(concentration=inputs["concentration"], net=inputs["volume"], ratio=ratio))
    if kind == "blank_difference":
        return _real(
            amount_by_difference(
                concentration=inputs["concentration"],
                blank=inputs["blank"],
                titre=inputs["volume"],
                ratio=ratio,
            )
        )
    if kind == "back":
        return _real(
            amount_by_back_titration(
                excess=inputs["excess"], excess_volume=inputs["excess_volume"],
                concentration=inputs["concentration"],
                net=inputs["volume"], ratio=ratio,
            )
        )  # fmt: skip
    raise ValueError(f"Titration is {kind!r}; expected direct, blank_difference or back.")


def _content(inputs: Inputs) -> float:
    """Mass of a substance per volume or mass of sample, in a chosen multiple."""
    sample = float(inputs["sample"])
    if not (sample > 0 and math.isfinite(sample)):
        raise ValueError(f"Sample is {sample}; a finite number above 0 is expected.")
    amount = _amount(inputs_without(inputs, "molar_mass", "sample", "factor"))
    return float(amount * inputs["molar_mass"] / sample * inputs["factor"])


def inputs_without(inputs: Inputs, *names: str) -> dict[str, Any]:
    """The inputs less some of them."""
    return {key: value for key, value in inputs.items() if key not in names}


VOLUME = Field("volume", "mL", "net titre")
AMOUNT_FIELDS = (
    CONCENTRATION, VOLUME, RATIO,
    optional("titration", "", "direct (when left out), blank_difference or back"),
    optional("blank", "mL", "titre of the blank, for blank_difference"),
    optional("excess", "mol/L", "solution in excess, for back"),
    optional("excess_volume", "mL", "its volume"),
)  # fmt: skip

AMOUNTS = (
    Calculation(
        "molar_mass", "Molar mass of a formula with its standard uncertainty",
        (
            Field("formula", "", "such as C8H5KO4 or Na2S2O3.5H2O"),
            optional("weights", "g/mol", "value and half-width by element, in place of the own table"),
        ),
        "value, standard_uncertainty [g/mol]", _molar_mass,
    ),
    Calculation(
        "titrant_equivalent", "Mass of a substance that 1 mL of titrant stands for",
        (
            CONCENTRATION, RATIO, optional("formula", "", "of the substance"),
            optional("molar_mass", "g/mol", "instead of the formula"),
        ),
        "mg", _titrant_equivalent,
    ),
    Calculation(
        "titrant_by_mass", "Concentration of a titrant from a weighed standard",
        (
            Field("mass", "g", "standard weighed"), Field("purity", "", "mass fraction"),
            Field("molar_mass", "g/mol", "of the standard"), VOLUME, RATIO,
            optional("buoyancy", "", "buoyancy factor"),
        ),
        "mol/L", _by_mass,
    ),
    Calculation(
        "titrant_by_titrant", "Concentration of a titrant from a standardized one",
        (CONCENTRATION, Field("aliquot", "mL", "volume of the standardized titrant"), VOLUME, RATIO),
        "mol/L", _by_titrant,
    ),
    Calculation("amount", "Amount of analyte in the titrated portion", AMOUNT_FIELDS, "mol", _amount),
    Calculation(
        "content", "Content of a sample: amount times molar mass, over the sample, times a factor",
        (
            *AMOUNT_FIELDS, Field("molar_mass", "g/mol", "of the substance it is expressed as"),
            Field("sample", "mL or g", "portion titrated"),
            Field("factor", "", "such as 1000 for g/L from g/mL"),
        ),
        "unit of the factor", _content,
    ),
    Calculation(
        "result_of_run", "Result of a run with budget and verdict, from its canonical inputs",
        (Field("inputs", "", "the inputs stored with a calculation of kind run"),),
        "value, u, k, U, budget, statistics, outlier_tests, verdict",
        lambda inputs: compute({**inputs["inputs"], "kind": "run"}),
    ),
    Calculation(
        "titrant_concentration", "Concentration of a titrant lot with budget, from its canonical inputs",
        (Field("inputs", "", "the inputs stored with a calculation of kind standardization"),),
        "value [mol/L], u, k, U, factor, budget, statistics",
        lambda inputs: compute({**inputs["inputs"], "kind": "standardization"}),
    ),
    *BUDGETS,
)  # fmt: skip
