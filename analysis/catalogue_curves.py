"""Named calculations: endpoints of curves, pH at equilibrium, electrodes and buffers."""

from __future__ import annotations

from typing import Any

import numpy as np

from analysis.buffer import buffer_ph, electrode_slope, nernst_slope, water_ion_product
from analysis.calculation import Calculation, Field, Inputs, optional
from analysis.curve import Curve, clean_curve
from analysis.derivative import first_derivative, second_derivative_zero
from analysis.endpoint import CurveSettings, evaluate_curve
from analysis.regression import straight_line
from analysis.solution_ph import PKW, Species, solution_ph, titrated_ph
from analysis.system import System

VOLUME = Field("volume", "mL", "volumes of titrant")
READING = Field("reading", "pH, mV, mS/cm, degC or absorbance", "readings at these volumes")
TEMPERATURE = Field("temperature", "degC", "temperature")
SPECIES = Field("species", "", "acids, each with concentration [mol/L], pKa (list) and charge when fully protonated")
P_KW = optional("pKw", "", "ion product of water, 14 when left out")


def _endpoint(inputs: Inputs) -> dict[str, Any]:
    system = inputs.get("system")
    settings = CurveSettings(
        deciding=inputs["deciding"], checking=inputs.get("checking"),
        fixed_reading=inputs.get("fixed_reading"),
        expected=int(inputs.get("expected", 1)), chosen=int(inputs.get("chosen", 1)),
        system=None if system is None else System.from_json(system),
    )  # fmt: skip
    found = evaluate_curve(
        clean_curve(inputs["volume"], inputs["reading"], quantity=inputs["quantity"]), settings=settings
    )
    checked = None if found.checked is None else {"volume": found.checked.volume, "family": found.checked.family}
    return {
        "volume": found.decided.volume, "standard_uncertainty": found.decided.standard_uncertainty,
        "kind": found.decided.kind, "checked": checked, "agreement": found.agreement,
        "needs_person": found.needs_person, "flags": list(found.flags),
    }  # fmt: skip


def _curve(inputs: Inputs) -> Curve:
    return Curve(np.asarray(inputs["volume"], float), np.asarray(inputs["reading"], float), "pH", ())


def _derivatives(inputs: Inputs) -> dict[str, list[float]]:
    middle, slope = first_derivative(_curve(inputs))
    between, change = first_derivative(Curve(middle, slope, "pH", ()))
    return {
        "first_volume": middle.tolist(), "first": slope.tolist(), "second_volume": between.tolist(),
        "second": change.tolist(),
    }  # fmt: skip


def _zero(inputs: Inputs) -> float:
    curve = _curve(inputs)
    middle, slope = first_derivative(curve)
    return second_derivative_zero(curve, near=float(middle[np.abs(slope).argmax()]))[0]


def _gran_intercept(inputs: Inputs) -> float:
    """Weak acid: V 10^-pH falls along a straight line that meets zero at the equivalence volume."""
    volume, reading = _curve(inputs).volume, _curve(inputs).reading
    line = straight_line(volume.tolist(), (volume * 10.0 ** -(reading - reading.mean())).tolist())
    return -line.intercept / line.slope


def _species(inputs: Inputs) -> list[Species]:
    return [
        Species(each["concentration"], tuple(each["pKa"]), int(each.get("charge", 0)))
        for each in inputs.get("species", [])
    ]


def _equilibrium(inputs: Inputs) -> float:
    return solution_ph(_species(inputs), strong=inputs.get("strong", 0.0), pKw=inputs.get("pKw", PKW))


def _titrated(inputs: Inputs) -> float:
    return titrated_ph(
        _species(inputs), strong=inputs.get("strong", 0.0), sample_volume=inputs["sample_volume"],
        titrant_volume=inputs["titrant_volume"], titrant_concentration=inputs["titrant_concentration"],
        titrant_charge=int(inputs.get("titrant_charge", 1)), pKw=inputs.get("pKw", PKW),
    )  # fmt: skip


def _slope(inputs: Inputs) -> float:
    names = ("first_ph", "first_mv", "second_ph", "second_mv", "temperature")
    return electrode_slope(**{name: inputs[name] for name in names})


STRONG = optional("strong", "mol/L", "charge of ions that take no part, cations less anions; 0 when left out")

CURVES = (
    Calculation(
        "endpoint", "Endpoint of a recorded curve by a deciding family, checked by another",
        (
            VOLUME, READING, Field("quantity", "", "pH, mV, conductivity, temperature or absorbance"),
            Field("deciding", "", "model, gran, derivative, parabola, polynomial, segments or fixed"),
            optional("checking", "", "another of these families"),
            optional("fixed_reading", "unit of the reading", "for the family fixed"),
            optional("expected", "", "number of endpoints"),
            optional("chosen", "", "which one gives the titre, from 1"),
            optional("system", "", "chemistry, for the families model and gran"),
        ),
        "volume [mL], standard_uncertainty [mL], kind, checked, agreement, needs_person, flags", _endpoint,
    ),
    Calculation(
        "derivatives", "First and second difference quotients of a curve and their middle volumes",
        (VOLUME, READING),
        "first_volume, second_volume [mL], first [1/mL], second [1/mL2]", _derivatives,
    ),
    Calculation(
        "second_derivative_zero", "Volume at which the second derivative changes sign", (VOLUME, READING),
        "mL", _zero,
    ),
    Calculation(
        "gran_intercept", "Equivalence volume of a weak acid from V 10^-pH before the endpoint",
        (VOLUME, READING), "mL",
        _gran_intercept,
    ),
    Calculation(
        "equilibrium_ph", "pH of a solution, without activities", (SPECIES, STRONG, P_KW), "pH", _equilibrium,
    ),
    Calculation(
        "titrated_ph", "pH after adding a strong titrant, without activities",
        (
            SPECIES, STRONG, P_KW, Field("sample_volume", "mL", "sample"),
            Field("titrant_volume", "mL", "titrant added"),
            Field("titrant_concentration", "mol/L", "titrant"),
            optional("titrant_charge", "", "1 base, -1 acid"),
        ),
        "pH", _titrated,
    ),
    Calculation(
        "buffer_ph", "pH of a reference buffer",
        (Field("buffer", "", "phthalate, phosphate or borax"), TEMPERATURE), "pH",
        lambda inputs: buffer_ph(inputs["buffer"], temperature=inputs["temperature"]),
    ),
    Calculation(
        "nernst_slope", "Ideal slope of a pH electrode", (TEMPERATURE,), "mV per pH",
        lambda inputs: nernst_slope(inputs["temperature"]),
    ),
    Calculation(
        "electrode_slope", "Slope of an electrode between two buffers",
        (
            Field("first_ph", "", "first buffer"), Field("first_mv", "mV", "its reading"),
            Field("second_ph", "", "second buffer"), Field("second_mv", "mV", "its reading"), TEMPERATURE,
        ),
        "percent of the ideal slope", _slope,
    ),
    Calculation(
        "water_ion_product", "pKw of water, molal scale, 0.1 MPa", (TEMPERATURE,), "pKw",
        lambda inputs: water_ion_product(inputs["temperature"]),
    ),
)  # fmt: skip
