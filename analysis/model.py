"""The measurement models of a run and of a standardization, as functions of named inputs."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from typing import Any

from analysis import amount, unit
from analysis.titration_inputs import Titration, choice, number, positive
from analysis.uncertainty import Input

Model = Callable[[Mapping[str, complex]], complex]
Values = Mapping[str, complex]
SQRT_3 = math.sqrt(3)


def run_value(inputs: Mapping[str, Any], titration: Titration) -> Model:
    """The result of one titration of a run [method's unit] as a function of the named inputs.

    Names: c, blank, bias, volume (a shift of every titre, mL), other_end (the same of an endpoint that is taken off),
    temperature (a shift, K), drift (a shift, uL/min), amount (a shift of the sample amount), air (density, kg/m3),
    excess, excess_volume, flask i, aliquot i, molar_mass, loss, repeatability (a factor).
    """
    method = inputs["method"]
    kind = choice(method["titration"], ("direct", "blank_difference", "back"), name="Titration")
    ratio, basis = amount.ratio_of(method["ratio"]), method.get("basis", "as_is")
    scale = result_scale(inputs)
    dilutions = len(inputs.get("dilutions") or [])
    taken = float(titration.amount or 0.0)
    apparent = buoyancy_of(inputs["sample"])

    def value(v: Values) -> complex:
        shifted = titre_of(titration, v)
        if kind == "blank_difference":
            n = amount.amount_by_difference(concentration=v["c"], blank=v["blank"], titre=shifted, ratio=ratio)
        elif kind == "back":
            n = amount.amount_by_back_titration(
                excess=v["excess"], excess_volume=v["excess_volume"], concentration=v["c"], net=shifted - v["blank"],
                ratio=ratio,
            )  # fmt: skip
        else:
            n = amount.amount_direct(concentration=v["c"], net=shifted - v["blank"], ratio=ratio)
        steps = [(v[f"flask {i}"], v[f"aliquot {i}"]) for i in range(1, dilutions + 1)]
        whole = (
            n
            * amount.dilution(steps)
            / ((taken + v["amount"]) * apparent(v))
            * v["molar_mass"] ** scale.molar
            * scale.factor
        )
        return amount.dry_basis(whole, loss_percent=v["loss"]) if basis != "as_is" else whole

    return value


class Scale:
    """How mol per unit of sample becomes the result's unit: a factor, and whether the molar mass enters."""

    __slots__ = ("factor", "molar")

    def __init__(self, factor: float, molar: int) -> None:
        self.factor, self.molar = factor, molar


def result_scale(inputs: Mapping[str, Any]) -> Scale:
    """The scale of a run's quantity and unit; ValueError when the unit does not fit, or the sample is in another."""
    method, sample = inputs["method"], inputs["sample"]
    quantity, equivalent = method["quantity"], method.get("equivalent_formula")
    factor = unit.factor(quantity, method["unit"], equivalent=equivalent)
    needs = "volume" if quantity.endswith("concentration") else "mass"
    if sample["by"] != needs:
        raise ValueError(
            f"{quantity.replace('_', ' ').capitalize()} needs a sample by {needs}; it is by {sample['by']}."
        )
    if sample["unit"] != {"volume": "mL", "mass": "g"}[needs]:
        raise ValueError(f"Sample unit is {sample['unit']!r}; mL for a volume, g for a mass.")
    if quantity == "amount_concentration":
        return Scale(1000 * factor, 0)
    if quantity == "mass_concentration":
        return Scale(1000 * factor, 1)
    if quantity == "mass_fraction":
        return Scale(factor, 1)
    by_mass = method["unit"].startswith("mg ")  # mg KOH/g
    return Scale(1000 * factor, 1 if by_mass else 0)


def standardization_value(inputs: Mapping[str, Any], titration: Titration) -> Model:
    """The concentration [mol/L] from one titration of a standardization.

    Names: mass or aliquot shift (amount), air, purity, molar_mass, c_standard, blank, bias, volume, other_end,
    temperature, drift, repeatability.
    """
    standard, ratio = inputs["standard"], amount.ratio_of(inputs["method"]["ratio"])
    taken = float(titration.amount or 0.0)
    apparent = buoyancy_of(standard)
    by_mass = choice(standard["basis"], ("mass", "titrant"), name="Basis") == "mass"

    def value(v: Values) -> complex:
        net = titre_of(titration, v) - v["blank"]
        if by_mass:
            return amount.titrant_by_mass(
                mass=taken + v["amount"], buoyancy=apparent(v), purity=v["purity"], ratio=ratio,
                molar_mass=v["molar_mass"], volume=net,
            )  # fmt: skip
        return amount.titrant_by_titrant(
            concentration=v["c_standard"], aliquot=taken + v["amount"], ratio=ratio, volume=net
        )

    return value


def titre_of(titration: Titration, v: Values) -> complex:
    """The titre [mL] with the shifts that its inputs may have, before the blank."""
    titre = float(titration.titre or 0.0) * (1 - titration.expansion * v["temperature"])
    titre -= v["drift"] * titration.minutes / 1000
    return titre + v["volume"] - v["other_end"] + v["reading"] - v["bias"]


def buoyancy_of(weighed: Mapping[str, Any]) -> Model:
    """True mass over apparent mass as a function of the density of air; 1 where it is not corrected."""
    density = (weighed.get("buoyancy") or {}).get("density")
    if density is None:
        return lambda _: 1.0
    heavy = 1000 * positive(density, name="Density")
    return lambda v: amount.buoyancy(air=v["air"], density=heavy)


def _air(weighed: Mapping[str, Any]) -> list[Input]:
    """The density of the air of a weighing [kg/m3]; a room is within 0.05 of 1.2 (common practice)."""
    settings = weighed.get("buoyancy") or {}
    if not settings:
        return []
    air = positive(settings.get("air", "1.2"), name="Density of air")
    within = number(settings.get("within", "0.05"), name="Density of air within")
    return [Input("air", "air", "density of the air", air, within / SQRT_3, "kg/m3", "rectangular")]


def mean_model(models: Sequence[Model]) -> Model:
    """The mean of the titrations that count, times the repeatability factor."""
    return lambda v: sum(model(v) for model in models) / len(models) * v["repeatability"]


def run_inputs(inputs: Mapping[str, Any]) -> list[Input]:
    """The inputs of a run that are no titre: concentrations, glassware, balance, molar mass, loss."""
    method, substance, sample = inputs["method"], inputs["substance"], inputs["sample"]
    found = [
        _solution(inputs["titrant"], name="c"),
        Input(
            "amount", sample["key"], sample["label"], 0.0, number(sample["u"], name="u of the sample"), sample["unit"]
        ),
        _molar_mass(substance["formula"], substance["molar_mass"], substance["u"]),
        Input(
            "loss",
            "loss",
            "loss on drying",
            _loss(method.get("loss_percent")),
            number(method.get("loss_u") or 0, name="u of the loss"),
            "%",
        ),
    ]
    found += _air(sample)
    return [*found, *_excess_inputs(inputs.get("excess")), *_dilution_inputs(inputs.get("dilutions") or [])]


def _loss(value: Any) -> float:
    loss = number(value or 0, name="Loss on drying")
    if not 0 <= loss < 100:
        raise ValueError(f"Loss on drying is {value} %; 0 to less than 100 is expected.")
    return loss


def _excess_inputs(excess: Mapping[str, Any] | None) -> list[Input]:
    if not excess:
        return []
    volume = positive(excess["volume"], name="Excess volume")
    u = number(excess["volume_u"], name="u of the excess volume")
    return [
        _solution(excess, name="excess"),
        Input("excess_volume", excess["key"], _spoken(excess["key"]), volume, u, "mL"),
    ]


def _dilution_inputs(steps: Sequence[Mapping[str, Any]]) -> list[Input]:
    found = []
    for place, step in enumerate(steps, start=1):
        for part in ("flask", "aliquot"):
            key, volume = step[f"{part}_key"], positive(step[part], name=f"{part.capitalize()} {place}")
            u = number(step[f"{part}_u"], name=f"u of {part} {place}")
            found.append(Input(f"{part} {place}", key, _spoken(key), volume, u, "mL", "triangular"))
    return found


def standardization_inputs(inputs: Mapping[str, Any]) -> list[Input]:
    """The inputs of a standardization that are no titre."""
    standard, sample = inputs["standard"], inputs["sample"]
    found = [
        Input(
            "amount",
            sample["key"],
            sample["label"],
            0.0,
            number(sample["u"], name="u of the amount"),
            sample["unit"],
        )
    ]
    if standard["basis"] == "titrant":
        return [*found, _solution(standard, name="c_standard")]
    purity = positive(standard["purity"], name="Purity")
    if purity > 1.01:
        raise ValueError(f"Purity is {standard['purity']}; a mass fraction from 0 to 1 is expected, not a percentage.")
    return [
        *found,
        *_air(standard),
        Input(
            "purity",
            standard["key"],
            standard["label"],
            purity,
            number(standard["purity_u"], name="u of the purity"),
            "g/g",
        ),
        _molar_mass(standard["formula"], standard["molar_mass"], standard["molar_mass_u"]),
    ]


def _solution(solution: Mapping[str, Any], *, name: str) -> Input:
    lot = solution["lot"]
    return Input(
        name, f"solution:{lot}", f"concentration of lot {lot}",
        positive(solution["concentration"], name=f"Concentration of lot {lot}"),
        number(solution["u"], name=f"u of lot {lot}"), "mol/L",
    )  # fmt: skip


def _molar_mass(formula: str, value: Any, u: Any) -> Input:
    mass = positive(value, name="Molar mass")
    return Input(
        "molar_mass",
        f"molar_mass:{formula}",
        f"molar mass of {formula}",
        mass,
        number(u, name="u of the molar mass"),
        "g/mol",
        "rectangular",
    )


def _spoken(key: str) -> str:
    return key.replace(":", " ")
