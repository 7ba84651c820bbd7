"""The demo's six methods, its products with their limits, and its control samples."""

from __future__ import annotations

from datetime import date, timedelta
from decimal import Decimal as D
from typing import Any

from labrecords.management.demo.chemistry import ACETIC, CHLORIDE
from labrecords.management.demo.laboratory import (
    Laboratory,
    record_control,
    record_method_effective,
    record_product_effective,
)  # fmt: skip

PHENOLPHTHALEIN = {"endpoint": "indicator", "indicator": "phenolphthalein, first lasting pale pink",
                   "indicator_bias": D("0.02"), "indicator_u": D("0.01")}  # fmt: skip


CONCORDANT: dict[str, Any] = {
    "replicates_needed": 3,
    "policy": "concordance",
    "limit": D("0.10"),
    "limit_kind": "range_mL",
}
PAIR: dict[str, Any] = {"replicates_needed": 2, "policy": "all", "limit_kind": "rsd_percent"}
DIRECT: dict[str, Any] = {"titration": "direct", "coverage": "k2", "temperature_within": D(3)}
BY_VOLUME: dict[str, Any] = {"sample_by": "volume", "sample_unit": "mL"}
BY_MASS: dict[str, Any] = {
    "sample_by": "mass",
    "sample_unit": "g",
    "quantity": "mass_fraction",
    "unit": "%",
    "places": 2,
}


def record_methods(lab: Laboratory) -> None:
    """Each method as a recipe a bench could follow."""
    for record in (_vinegar, _vinegar_curve, _effluent, _brine, _descaler, _scale):
        record(lab)


def _vinegar(lab: Laboratory) -> None:
    record_method_effective(
        lab,
        "TA-VIN",
        "Titratable acidity",
        titrant=lab.titrants["NaOH-0.1"],
        expressed_as=lab.substances["acetic acid"],
        ratio="1",
        sample_amount=D("10"),
        dilutions=[{"flask": "100", "aliquot": "20"}],
        blanks_needed=1,
        quantity="mass_concentration",
        unit="g/100 mL",
        places=3,
        **DIRECT,
        **BY_VOLUME,
        **CONCORDANT,
        **PHENOLPHTHALEIN,
        instructions=(
            "Pipette 10 mL of vinegar into a 100 mL flask, fill to the mark, mix.\nTitrate "
            "20 mL with sodium hydroxide 0.1 mol/L to the first pale pink that lasts 30 s."
        ),
    )


def _vinegar_curve(lab: Laboratory) -> None:
    record_method_effective(
        lab,
        "TA-VIN-C",
        "Titratable acidity by curve",
        titrant=lab.titrants["NaOH-0.1"],
        expressed_as=lab.substances["acetic acid"],
        ratio="1",
        sample_amount=D("2"),
        quantity="mass_concentration",
        unit="g/100 mL",
        places=3,
        endpoint="curve",
        curve_quantity="pH",
        deciding_family="model",
        checking_family="gran",
        system=ACETIC,
        initial_volume=D("60"),
        limit=D("0.5"),
        **DIRECT,
        **BY_VOLUME,
        **PAIR,
        instructions=(
            "Pipette 2 mL of vinegar into 58 mL of water.\nRecord the pH against "
            "the volume of sodium hydroxide 0.1 mol/L to 1.5 times the endpoint."
        ),
    )


def _effluent(lab: Laboratory) -> None:
    record_method_effective(
        lab,
        "ALK-EFF",
        "Alkalinity to pH 8.3 and 4.5",
        titrant=lab.titrants["HCl-0.1"],
        expressed_as=lab.substances["calcium carbonate"],
        ratio="1/2",
        sample_amount=D("100"),
        quantity="mass_concentration",
        unit="mg/L",
        places=1,
        endpoint="curve",
        curve_quantity="pH",
        deciding_family="fixed",
        checking_family="derivative",
        first_fixed_reading=D("8.3"),
        fixed_reading=D("4.5"),
        endpoints_expected=2,
        endpoint_chosen=2,
        parts=[_kind(lab, kind) for kind in ("hydroxide", "carbonate", "hydrogen carbonate")],
        initial_volume=D("100"),
        limit=D("3"),
        agreement_limit=D("6"),
        **DIRECT,
        **BY_VOLUME,
        **PAIR,
        instructions=(
            "Pipette 100 mL of effluent, do not filter.\nRecord the pH "
            "while hydrochloric acid 0.1 mol/L is added, to below pH 3.5."
        ),
    )


def _kind(lab: Laboratory, kind: str) -> dict[str, str]:
    """One kind of alkalinity, expressed as calcium carbonate like the whole."""
    substance = lab.substances["calcium carbonate"]
    return {
        "name": kind, "takes": kind, "ratio": "1/2", "substance": substance.name, "formula": substance.formula,
        "molar_mass": repr(substance.molar_mass), "u": repr(substance.molar_mass_u),
    }  # fmt: skip


def _brine(lab: Laboratory) -> None:
    record_method_effective(
        lab,
        "CL-BRN",
        "Chloride as sodium chloride",
        titrant=lab.titrants["AgNO3-0.1"],
        expressed_as=lab.substances["sodium chloride"],
        ratio="1",
        sample_amount=D("5"),
        dilutions=[{"flask": "100", "aliquot": "10"}],
        quantity="mass_concentration",
        unit="g/L",
        places=2,
        endpoint="curve",
        curve_quantity="mV",
        deciding_family="model",
        checking_family="derivative",
        system=CHLORIDE,
        initial_volume=D("60"),
        limit=D("1"),
        **DIRECT,
        **BY_VOLUME,
        **PAIR,
        instructions=(
            "Pipette 5 mL of brine into a 100 mL flask, fill to the mark.\nTitrate 10 mL in 50 mL of "
            "water and 1 mL of dilute nitric acid with silver nitrate 0.1 mol/L; record the potential."
        ),
    )


def _descaler(lab: Laboratory) -> None:
    record_method_effective(
        lab,
        "CIT-DSC",
        "Citric acid in descaler powder",
        sample_density=D("1.665"),
        temperature_correction=True,
        titrant=lab.titrants["NaOH-0.1"],
        expressed_as=lab.substances["citric acid"],
        ratio="1/3",
        sample_amount=D("0.13"),
        limit=D("0.60"),
        replicates_needed=3,
        policy="all",
        limit_kind="rsd_percent",
        titration="direct",
        coverage="k2",
        temperature_within=D("0.5"),
        **BY_MASS,
        **PHENOLPHTHALEIN,
        instructions=(
            "Weigh 0.13 g of powder, dissolve in 50 mL of water free of "
            "carbon dioxide.\nTitrate with sodium hydroxide 0.1 mol/L and read the temperature of the burette."
        ),
    )


def _scale(lab: Laboratory) -> None:
    record_method_effective(
        lab,
        "CAC-SCL",
        "Calcium carbonate in scale",
        titrant=lab.titrants["NaOH-0.1"],
        excess_titrant=lab.titrants["HCl-0.1"],
        excess_volume=D("50"),
        expressed_as=lab.substances["calcium carbonate"],
        titration="back",
        ratio="1/2",
        sample_amount=D("0.15"),
        limit=D("1.0"),
        coverage="k2",
        temperature_within=D(3),
        **BY_MASS,
        **PAIR,
        **PHENOLPHTHALEIN,
        instructions=(
            "Weigh 0.15 g of dried scale. Add 50 mL of hydrochloric acid 0.1 mol/L slowly: carbon "
            "dioxide escapes. Boil gently, cool.\nTitrate what is left with sodium hydroxide 0.1 mol/L."
        ),
    )


PRODUCTS: list[tuple[str, str, str, dict[str, Any]]] = [
    ("TV", "Table vinegar 6 %", "TA-VIN", {"lower": D("6.00"), "upper": D("6.40"), "places": 2}),
    ("PV", "Pickling vinegar 5 %", "TA-VIN-C", {"lower": D("5.00"), "upper": D("5.40"), "places": 2}),
    ("PB", "Pickling brine", "CL-BRN", {"lower": D("95.0"), "upper": D("105.0"), "places": 1, "rule": "guard"}),
    ("DP", "Descaler powder", "CIT-DSC", {"lower": D("94.0"), "places": 1}),
    ("EF", "Treated effluent", "ALK-EFF", {"lower": D(60), "upper": D(350), "places": 0, "rounding": "half_even"}),
    ("SL", "Recovered scale", "CAC-SCL", {"lower": D("80.0"), "places": 1}),
]
CONTROLS = [
    ("CS-VIN", "Acetic acid control solution", "TA-VIN", "6.203", "0.020"),
    ("CS-BRN", "Sodium chloride control solution", "CL-BRN", "100.4", "0.5"),
]


def record_products(lab: Laboratory, start: date) -> None:
    """Products with the limits of their tests, and the materials that watch the methods."""
    for code, name, test, limits in PRODUCTS:
        usual = {"lower": None, "upper": None, "rounding": "half_up", "rule": "simple", "unit": lab.versions[test].unit}
        record_product_effective(lab, code, name, {"method": lab.methods[test], **usual, **limits})
    for code, name, method, value, expanded in CONTROLS:
        expires = start + timedelta(days=1500)
        record_control(lab, code, name, method, value=value, expanded=expanded, expires=expires)
