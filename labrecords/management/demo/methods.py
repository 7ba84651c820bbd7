"""The demo's six methods, its products with their limits, and its control samples."""

from __future__ import annotations

from datetime import date, timedelta
from decimal import Decimal as D
from typing import Any

from labrecords.management.demo.laboratory import (
    Laboratory, record_control, record_method_effective, record_product_effective,
)  # fmt: skip

ACETIC = {"kind": "acid_base", "titrant": "base", "carbonate": 0.0, "activity": True,
          "analytes": [{"name": "acetic acid", "pKa": [4.756], "charge": 0}]}  # fmt: skip
CHLORIDE = {"kind": "precipitation", "titrant": "silver", "carbonate": 0.0, "activity": False,
            "analytes": [{"name": "chloride", "pKa": [], "charge": -1, "pKs": 9.752}]}  # fmt: skip
PHENOLPHTHALEIN = {"endpoint": "indicator", "indicator": "phenolphthalein, first lasting pale pink",
                   "indicator_bias": D("0.02"), "indicator_u": D("0.01")}  # fmt: skip


def record_methods(lab: Laboratory) -> None:
    """Each method as a recipe a bench could follow."""
    naoh, hcl, silver = lab.titrants["NaOH-0.1"], lab.titrants["HCl-0.1"], lab.titrants["AgNO3-0.1"]
    concordant: dict[str, Any] = {"replicates_needed": 3, "policy": "concordance", "limit": D("0.10"), "limit_kind": "range_mL"}
    pair: dict[str, Any] = {"replicates_needed": 2, "policy": "all", "limit_kind": "rsd_percent"}
    direct: dict[str, Any] = {"titration": "direct", "coverage": "k2"}
    by_volume: dict[str, Any] = {"sample_by": "volume", "sample_unit": "mL"}
    by_mass: dict[str, Any] = {"sample_by": "mass", "sample_unit": "g", "quantity": "mass_fraction", "unit": "%", "places": 2}
    record_method_effective(
        lab, "TA-VIN", "Titratable acidity", titrant=naoh, expressed_as=lab.substances["acetic acid"], ratio="1",
        sample_amount=D("10"), dilutions=[{"flask": "100", "aliquot": "20"}], blanks_needed=1,
        quantity="mass_concentration", unit="g/100 mL", places=3, **direct, **by_volume, **concordant, **PHENOLPHTHALEIN,
        instructions="Pipette 10 mL of vinegar into a 100 mL flask, fill to the mark, mix.\nTitrate 20 mL with sodium hydroxide 0.1 mol/L to the first pale pink that lasts 30 s.",
    )  # fmt: skip
    record_method_effective(
        lab, "TA-VIN-C", "Titratable acidity by curve", titrant=naoh, expressed_as=lab.substances["acetic acid"],
        ratio="1", sample_amount=D("2"), quantity="mass_concentration", unit="g/100 mL", places=3, endpoint="curve",
        curve_quantity="pH", deciding_family="model", checking_family="gran", system=ACETIC, initial_volume=D("60"),
        limit=D("0.5"), **direct, **by_volume, **pair,
        instructions="Pipette 2 mL of vinegar into 58 mL of water.\nRecord the pH against the volume of sodium hydroxide 0.1 mol/L to 1.5 times the endpoint.",
    )  # fmt: skip
    record_method_effective(
        lab, "ALK-EFF", "Alkalinity to pH 4.5", titrant=hcl, expressed_as=lab.substances["calcium carbonate"],
        ratio="1/2", sample_amount=D("100"), quantity="mass_concentration", unit="mg/L", places=1, endpoint="curve",
        curve_quantity="pH", deciding_family="fixed", checking_family="derivative", fixed_reading=D("4.5"),
        initial_volume=D("100"), limit=D("3"), agreement_limit=D("6"), **direct, **by_volume, **pair,
        instructions="Pipette 100 mL of effluent, do not filter.\nRecord the pH while hydrochloric acid 0.1 mol/L is added, to below pH 3.5.",
    )  # fmt: skip
    record_method_effective(
        lab, "CL-BRN", "Chloride as sodium chloride", titrant=silver, expressed_as=lab.substances["sodium chloride"],
        ratio="1", sample_amount=D("5"), dilutions=[{"flask": "100", "aliquot": "10"}], quantity="mass_concentration",
        unit="g/L", places=2, endpoint="curve", curve_quantity="mV", deciding_family="model",
        checking_family="derivative", system=CHLORIDE, initial_volume=D("60"), limit=D("1"), **direct, **by_volume, **pair,
        instructions="Pipette 5 mL of brine into a 100 mL flask, fill to the mark.\nTitrate 10 mL in 50 mL of water and 1 mL of dilute nitric acid with silver nitrate 0.1 mol/L; record the potential.",
    )  # fmt: skip
    record_method_effective(
        lab, "CIT-DSC", "Citric acid in descaler powder", titrant=naoh, expressed_as=lab.substances["citric acid"],
        ratio="1/3", sample_amount=D("0.13"), limit=D("0.60"), replicates_needed=3, policy="all", limit_kind="rsd_percent",
        **direct, **by_mass, **PHENOLPHTHALEIN,
        instructions="Weigh 0.13 g of powder, dissolve in 50 mL of water free of carbon dioxide.\nTitrate with sodium hydroxide 0.1 mol/L.",
    )  # fmt: skip
    record_method_effective(
        lab, "CAC-SCL", "Calcium carbonate in scale", titrant=naoh, excess_titrant=hcl, excess_volume=D("50"),
        expressed_as=lab.substances["calcium carbonate"], titration="back", ratio="1/2", sample_amount=D("0.15"),
        limit=D("1.0"), coverage="k2", **by_mass, **pair, **PHENOLPHTHALEIN,
        instructions="Weigh 0.15 g of dried scale. Add 50 mL of hydrochloric acid 0.1 mol/L slowly: carbon dioxide escapes. Boil gently, cool.\nTitrate what is left with sodium hydroxide 0.1 mol/L.",
    )  # fmt: skip


def record_products(lab: Laboratory, start: date) -> None:
    """Products with the limits of their tests, and the materials that watch the methods."""
    def limit(code: str, **more: Any) -> dict[str, Any]:
        version = lab.versions[code]
        line = {"method": lab.methods[code], "lower": None, "upper": None, "unit": version.unit, "rounding": "half_up", "rule": "simple"}
        return line | more

    record_product_effective(lab, "TV", "Table vinegar 6 %", limit("TA-VIN", lower=D("6.00"), upper=D("6.40"), places=2))
    record_product_effective(lab, "PV", "Pickling vinegar 5 %", limit("TA-VIN-C", lower=D("5.00"), upper=D("5.40"), places=2))
    record_product_effective(lab, "PB", "Pickling brine", limit("CL-BRN", lower=D("95.0"), upper=D("105.0"), places=1, rule="guard"))
    record_product_effective(lab, "DP", "Descaler powder", limit("CIT-DSC", lower=D("94.0"), places=1))
    record_product_effective(lab, "EF", "Treated effluent", limit("ALK-EFF", lower=D("60"), upper=D("350"), places=0, rounding="half_even"))
    record_product_effective(lab, "SL", "Recovered scale", limit("CAC-SCL", lower=D("80.0"), places=1))
    expires = start + timedelta(days=400)
    record_control(lab, "CS-VIN", "Acetic acid control solution", "TA-VIN", value="6.203", expanded="0.020", expires=expires)
    record_control(lab, "CS-BRN", "Sodium chloride control solution", "CL-BRN", value="100.4", expanded="0.5", expires=expires)
