"""Named calculations: volumes, weighings, densities and alkalinity."""

from __future__ import annotations

from dataclasses import asdict

from analysis.alkalinity import split_alkalinity
from analysis.calculation import Calculation, Field, optional
from analysis.titration_inputs import correction_at
from analysis.water import air_density, water_density, water_expansion
from analysis.weighing import buoyancy_factor, volume_at, volume_of_water, z_factor

TEMPERATURE = Field("temperature", "degC", "temperature")
PRESSURE = optional("pressure", "hPa", "pressure of the air, 1013 when left out")
GLASS = optional("glass", "1/K", "expansion of the vessel, 9.9e-6 when left out")
REFERENCE = optional("reference", "degC", "reference temperature, 20 when left out")

VOLUMES = (
    Calculation(
        "water_density", "Density of air-free water", (TEMPERATURE,), "kg/m3",
        lambda inputs: water_density(**inputs)
    ),
    Calculation(
        "water_expansion", "Volume expansion of water", (TEMPERATURE,), "1/K",
        lambda inputs: water_expansion(**inputs)
    ),
    Calculation(
        "air_density", "Density of air",
        (
            optional("temperature", "degC", "20 when left out"),
            optional("pressure", "hPa", "1013.25 when left out"),
            optional("humidity", "%", "50 when left out"),
        ),
        "kg/m3", lambda inputs: air_density(**inputs),
    ),
    Calculation(
        "buoyancy_factor", "True mass over apparent mass",
        (
            Field("density", "kg/m3", "of what is weighed"), optional("air", "kg/m3", "1.2 when left out"),
            optional("weights", "kg/m3", "8000 when left out"),
        ),
        "factor", lambda inputs: buoyancy_factor(**inputs),
    ),
    Calculation(
        "z_factor", "Volume of water per apparent mass", (TEMPERATURE, PRESSURE), "mL/g",
        lambda inputs: z_factor(**inputs),
    ),
    Calculation(
        "volume_of_water", "Volume of a vessel from a mass of water",
        (Field("mass", "g", "apparent mass"), TEMPERATURE, PRESSURE, GLASS, REFERENCE), "mL",
        lambda inputs: volume_of_water(**inputs),
    ),
    Calculation(
        "volume_at_reference", "Volume of a solution at the reference temperature",
        (
            Field("volume", "mL", "as read"), TEMPERATURE, REFERENCE, GLASS,
            optional("liquid", "1/K", "expansion of the solution; as water when left out"),
        ),
        "mL", lambda inputs: volume_at(**inputs),
    ),
    Calculation(
        "burette_correction", "Correction of a burette at a reading, from its table",
        (Field("reading", "mL", "reading"), Field("table", "mL", "pairs of reading and correction")), "mL",
        lambda inputs: correction_at(float(inputs["reading"]), inputs["table"]),
    ),
    Calculation(
        "alkalinity", "Hydroxide, carbonate and bicarbonate from two endpoints",
        (
            Field("phenolphthalein", "any", "alkalinity to pH 8.3"),
            Field("total", "unit of the first", "alkalinity to pH 4.5"),
        ),
        "hydroxide, carbonate, bicarbonate", lambda inputs: asdict(split_alkalinity(**inputs)),
    ),
)  # fmt: skip
