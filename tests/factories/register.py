"""Substances, instruments, reference standards, titrants and lots: ``some_...(by, **what_differs)``."""

from __future__ import annotations

from datetime import date, timedelta
from decimal import Decimal as D
from typing import Any

from django.utils import timezone

from labrecords.models import (
    Instrument,
    InstrumentCalibration,
    ReferenceStandard,
    Substance,
    Titrant,
    TitrantLot,
    User,
)
from labrecords.services.instrument import record_calibration, record_instrument
from labrecords.services.standard import issue_standard, record_standard
from labrecords.services.substance import record_substance
from labrecords.services.titrant import record_lot, record_titrant

CERTIFICATE = ("certificate.pdf", "application/pdf", b"%PDF-1.4 an invented certificate")
INSTRUMENTS: dict[str, dict[str, Any]] = {
    "burette": {"identifier": "B-07", "capacity": D("50"), "resolution": D("0.05"), "tolerance": D("0.05")},
    "pipette": {"identifier": "P-10", "capacity": D("10"), "resolution": D("0.01"), "tolerance": D("0.02")},
    "flask": {"identifier": "F-03", "capacity": D("100"), "resolution": D("0.01"), "tolerance": D("0.10")},
    "balance": {
        "identifier": "W-01", "capacity": D("220"), "resolution": D("0.0001"), "tolerance": D("0.0003"),
        "unit": "g",
    },
    "electrode": {"identifier": "E-04", "resolution": D("0.001"), "tolerance": D("0.02"), "unit": "pH"},
}  # fmt: skip


def days_ago(count: int) -> date:
    """The day that was some days ago in the laboratory; a negative count lies ahead."""
    return timezone.localdate() - timedelta(days=count)


def some_substance(by: User, **given: Any) -> Substance:
    """Sodium hydroxide, unless told otherwise."""
    return record_substance(by=by, **{"name": "sodium hydroxide", "formula": "NaOH"} | given)


def phthalate(by: User) -> Substance:
    """The primary standard of most of the tests."""
    return record_substance(by=by, name="potassium hydrogen phthalate", formula="C8H5KO4", density=D("1.636"))


def some_instrument(by: User, kind: str = "burette", **given: Any) -> Instrument:
    """An instrument of a kind, not calibrated yet."""
    return record_instrument(by=by, kind=kind, **{"unit": "mL"} | INSTRUMENTS[kind] | given)


def some_calibration(instrument: Instrument, *, by: User, **given: Any) -> InstrumentCalibration:
    """A calibration of last month that holds for a year."""
    held = {"calibrated_on": days_ago(30), "due_on": days_ago(-335), "performed_by": "the laboratory"}
    return record_calibration(instrument, by=by, **held | given)


def calibrated(by: User, kind: str = "burette", **given: Any) -> Instrument:
    """An instrument that may be used today."""
    instrument = some_instrument(by, kind, **given)
    some_calibration(instrument, by=by)
    return instrument


def some_standard(by: User, substance: Substance, **given: Any) -> ReferenceStandard:
    """A lot in quarantine, with its certificate."""
    said = {
        "number": "KHP-26-01", "supplier_lot": "L2609-41", "purity": D("0.9998"),
        "purity_expanded": D("0.0003"),
        "purity_k": D(2), "received_on": days_ago(60), "expires_on": days_ago(-600),
        "certificate": CERTIFICATE,
    }  # fmt: skip
    return record_standard(by=by, substance=substance, **said | given)


def issued_standard(by: User, substance: Substance, *, supervisor: User, **given: Any) -> ReferenceStandard:
    """A lot in use."""
    return issue_standard(some_standard(by, substance, **given), by=supervisor)


def rule_of(substance: Substance, standard: Substance | None, **given: Any) -> dict[str, Any]:
    """The rule of a titrant as the services take it."""
    return {
        "code": "NaOH-0.1", "name": "sodium hydroxide 0.1 mol/L", "substance": substance, "nominal": D("0.1"),
        "window_low": D("0.095"), "window_high": D("0.105"), "restandardization_days": 14,
        "shelf_life_days": 45,
        "standard_substance": standard, "ratio": "1", "standard_mass": D("0.42"),
        "indicator": "phenolphthalein",
        "indicator_bias": D("0.02"), "indicator_u": D("0.01"), "replicates_needed": 3, "policy": "all",
        "limit": D("0.25"), "limit_kind": "rsd_percent", "coverage": "k2",
    } | given  # fmt: skip


def some_titrant(by: User, substance: Substance, standard: Substance | None, **given: Any) -> Titrant:
    """A titrant by mass of a primary standard."""
    return record_titrant(by=by, **rule_of(substance, standard, **given))


def some_lot(titrant: Titrant, *, by: User, **given: Any) -> TitrantLot:
    """A bottle of five litres, prepared yesterday."""
    said = {
        "number": "N26-117", "prepared_on": days_ago(1), "prepared_by": by, "reagent_lot": "NA-2611",
        "volume": D("5000"),
    }  # fmt: skip
    return record_lot(titrant, by=by, **said | given)
