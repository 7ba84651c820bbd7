"""The canonical inputs of a calculation: everything it rests on, as plain data, digits as read."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

import analysis
from labrecords import writing
from labrecords.models import (
    Basis,
    Calculation,
    EndpointRule,
    Instrument,
    InstrumentCalibration,
    InstrumentKind,
    Replicate,
    ReplicateKind,
    Run,
    Standardization,
    Substance,
    UsedInstrument,
)  # fmt: skip
from labrecords.queries.method_inputs import as_text, run_method, standardization_method
from labrecords.queries.replicate import instruments_of, replicates_of

SQRT_6 = 6**0.5
SQRT_3 = 3**0.5


def inputs_for_run(run: Run) -> dict[str, Any]:
    """The inputs of a run's calculation, as analysis.determination.compute expects them."""
    version, used = run.method_version, instruments_of(run)
    titrant = titrant_inputs(run.standardization)
    return {
        "kind": "run",
        "engine": analysis.VERSION,
        "method": run_method(run),
        "substance": substance_inputs(version.expressed_as),
        "titrant": titrant,
        "excess": _excess(run, used),
        "burette": burette_inputs(used["burette"]),
        "temperature": _temperature(version, expands_like=version.titrant.expands_like),
        "drift": _drift(version),
        "sample": _sample(version.sample_by, version.sample_unit, used, density=version.sample_density),
        "dilutions": _dilutions(version.dilutions, used),
        **_titrations(run),
        "specification": _specification(run),
    }


def inputs_for_standardization(standardization: Standardization) -> dict[str, Any]:
    """The inputs of a standardization's calculation."""
    titrant, used = standardization.lot.titrant, instruments_of(standardization)
    by_mass = standardization.basis == Basis.MASS
    inputs = {
        "kind": "standardization",
        "engine": analysis.VERSION,
        "method": standardization_method(standardization),
        "standard": _standard(standardization),
        "burette": burette_inputs(used["burette"]),
        "temperature": _temperature(titrant, expands_like=titrant.expands_like),
        "drift": _drift(titrant),
        "sample": _sample("mass" if by_mass else "volume", "g" if by_mass else "mL", used),
        "nominal": str(titrant.nominal),
        "window": {"low": str(titrant.window_low), "high": str(titrant.window_high)},
        **_titrations(standardization),
    }
    if by_mass:
        inputs["balance"] = _balance(used["balance"])
    return inputs


def titrant_inputs(standardization: Standardization) -> dict[str, Any]:
    """A titrant's concentration with the physical inputs it rests on, so that shared ones count once."""
    calculation = standardization.calculation
    if calculation is None or calculation.value is None:
        raise ValueError(f"{standardization.number} has no concentration yet")
    return {
        "lot": standardization.lot.number,
        "standardization": standardization.number,
        "concentration": repr(calculation.value),
        "u": repr(calculation.standard_uncertainty),
        "degrees_of_freedom": repr(calculation.degrees_of_freedom) if calculation.degrees_of_freedom else None,
        "components": titrant_components(calculation, of=standardization.number),
    }


def titrant_components(calculation: Calculation, *, of: str) -> list[dict[str, Any]]:
    """Signed contributions [mol/L] of the inputs of a concentration, by physical key.

    A physical key ("burette:B-07") is the same thing wherever it is used; scatter belongs to its standardization.
    """
    return [
        {
            "key": line["key"] if ":" in line["key"] or "/" in line["key"] else f"{of}/{line['key']}",
            "label": line["label"] if ":" in line["key"] or "/" in line["key"] else f"{line['label']} in {of}",
            "u": repr(line["contribution"]),
            "degrees_of_freedom": None if line["degrees_of_freedom"] is None else repr(line["degrees_of_freedom"]),
        }
        for line in calculation.outputs["budget"]
    ]


def substance_inputs(substance: Substance) -> dict[str, Any]:
    return {
        "name": substance.name,
        "formula": substance.formula,
        "molar_mass": repr(substance.molar_mass),
        "u": repr(substance.molar_mass_u),
    }


def burette_inputs(used: UsedInstrument) -> dict[str, Any]:
    """A burette with its tolerance and the correction table of the calibration that held."""
    burette, calibration = used.instrument, used.calibration
    return {
        "key": f"burette:{burette.identifier}",
        "identifier": burette.identifier,
        "nominal": str(burette.capacity),
        "resolution": str(burette.resolution),
        "tolerance": str(burette.tolerance),
        "table": calibration.corrections,
        "temperature_reference": "20",
    }


def standard_uncertainty(instrument: Instrument, calibration: InstrumentCalibration) -> float:
    """From the certificate where it states one; else from the tolerance.

    Glassware: triangular, half-width over the root of six (QUAM:2012 A2). Balances and others: rectangular.
    """
    if calibration.uncertainty is not None:
        return float(calibration.uncertainty) / 2
    is_glassware = instrument.kind in (InstrumentKind.PIPETTE, InstrumentKind.FLASK, InstrumentKind.BURETTE)
    return float(instrument.tolerance) / (SQRT_6 if is_glassware else SQRT_3)


def _excess(run: Run, used: dict[str, UsedInstrument]) -> dict[str, Any] | None:
    if run.excess_standardization is None:
        return None
    pipette = used["excess pipette"]
    return {
        **titrant_inputs(run.excess_standardization),
        "volume": str(run.method_version.excess_volume),
        "volume_u": repr(standard_uncertainty(pipette.instrument, pipette.calibration)),
        "key": _key(pipette),
    }


def _drift(rule: EndpointRule) -> dict[str, str] | None:
    """How well the drift is known where titres are corrected for it."""
    return None if rule.drift_u is None else {"u": str(rule.drift_u)}


def _temperature(rule: EndpointRule, *, expands_like: str) -> dict[str, Any]:
    """What is done about the temperature of the titrant; burettes are of borosilicate glass (ISO 385)."""
    return {
        "correct": rule.temperature_correction,
        "within": str(rule.temperature_within),
        "solution": expands_like,
        "glass": "borosilicate",
    }


def _buoyancy(density: Decimal | None) -> dict[str, str] | None:
    """A weighing in air of 1.2 kg/m3, within 0.05 (common practice)."""
    return None if density is None else {"density": str(density), "air": "1.2", "within": "0.05"}


def _sample(by: str, unit: str, used: dict[str, UsedInstrument], *, density: Decimal | None = None) -> dict[str, Any]:
    measure = used["balance" if by == "mass" else "pipette"]
    return {
        "by": by,
        "unit": unit,
        "u": repr(standard_uncertainty(measure.instrument, measure.calibration)),
        "key": _key(measure),
        "label": f"{measure.instrument.get_kind_display()} {measure.instrument.identifier}",
        "buoyancy": _buoyancy(density if by == "mass" else None),
    }


def _balance(used: UsedInstrument) -> dict[str, Any]:
    return {
        "key": _key(used),
        "identifier": used.instrument.identifier,
        "u": repr(standard_uncertainty(used.instrument, used.calibration)),
    }


def _dilutions(steps: list[dict[str, str]], used: dict[str, UsedInstrument]) -> list[dict[str, Any]]:
    lines = []
    for position, step in enumerate(steps, start=1):
        flask, aliquot = used[f"flask {position}"], used[f"aliquot {position}"]
        lines.append(
            {
                "flask": step["flask"],
                "flask_u": repr(standard_uncertainty(flask.instrument, flask.calibration)),
                "flask_key": _key(flask),
                "aliquot": step["aliquot"],
                "aliquot_u": repr(standard_uncertainty(aliquot.instrument, aliquot.calibration)),
                "aliquot_key": _key(aliquot),
            }
        )
    return lines


def _standard(standardization: Standardization) -> dict[str, Any]:
    if standardization.against is not None:
        return {"basis": "titrant", **titrant_inputs(standardization.against)}
    standard = standardization.reference_standard
    if standard is None:
        raise ValueError(f"{standardization.number} rests on no standard")
    return {
        "basis": "mass",
        "key": f"standard:{standard.number}",
        "label": f"{standard.substance.name} {standard.number}",
        "formula": standard.substance.formula,
        "molar_mass": repr(standard.substance.molar_mass),
        "molar_mass_u": repr(standard.substance.molar_mass_u),
        "purity": str(standard.purity),
        "purity_u": str(standard.purity_expanded / standard.purity_k),
        "buoyancy": _buoyancy(standard.substance.density if standardization.lot.titrant.buoyancy else None),
    }


def _titrations(record: Run | Standardization) -> dict[str, list[dict[str, Any]]]:
    items = list(replicates_of(record))
    return {
        "replicates": [_titration(item) for item in items if item.kind == ReplicateKind.SAMPLE],
        "blanks": [_titration(item) for item in items if item.kind == ReplicateKind.BLANK],
    }


def _titration(item: Replicate) -> dict[str, Any]:
    curve = item.curve
    return {
        "number": item.number,
        "amount": as_text(item.amount),
        "start": as_text(item.start),
        "first_end": as_text(item.first_end),
        "end": as_text(item.end),
        "temperature": as_text(item.temperature),
        "drift": as_text(item.drift),
        "minutes": as_text(item.minutes),
        "curve": {"volume": curve.volumes, "reading": curve.readings} if curve else None,
        "excluded": item.is_excluded,
    }


def _specification(run: Run) -> dict[str, Any] | None:
    limit = run.specification_limit
    if limit is None:
        return None
    return {
        "lower": _as_compared(limit.lower, places=limit.places),
        "upper": _as_compared(limit.upper, places=limit.places),
        "places": limit.figures or limit.places,
        "digits": "figures" if limit.figures else "places",
        "rounding": limit.rounding,
        "rule": limit.rule,
        "guard_factor": str(limit.guard_factor),
    }


def _as_compared(bound: Decimal | None, *, places: int) -> str | None:
    """A limit with the decimals it is compared at: 6.400000 of its column is 6.40."""
    return None if bound is None else writing.limit(bound, digits=places).replace(writing.MINUS, "-")


def _key(used: UsedInstrument) -> str:
    return f"{used.instrument.kind}:{used.instrument.identifier}"
