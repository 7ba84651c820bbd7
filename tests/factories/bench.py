"""A bench that can work: a titrant with its standard, and titrations on them up to approval."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal as D
from typing import Any

from django.utils import timezone

from labrecords.models import (
    Instrument,
    MethodVersion,
    ReferenceStandard,
    Run,
    Sample,
    Standardization,
    Titrant,
    TitrantLot,
    User,
)
from labrecords.queries.calculation import latest_request
from labrecords.services.batch import record_sample
from labrecords.services.calculation import claim_request, record_calculation
from labrecords.services.control_sample import record_control_sample
from labrecords.services.method import make_version_effective, record_method, record_version
from labrecords.services.replicate import record_readings
from labrecords.services.run import approve_run, start_run, submit_run
from labrecords.services.standardization import (
    approve_standardization,
    start_standardization,
    submit_standardization,
)
from tests.factories.people import signed_by
from tests.factories.register import (
    calibrated,
    days_ago,
    issued_standard,
    phthalate,
    some_lot,
    some_substance,
    some_titrant,
)

# 0.42 g of phthalate (204.22 g/mol) against 0.1 mol/L: 20.6 mL after a blank of 0.05 mL.
WEIGHED = [("0.4210", "20.65"), ("0.4198", "20.60"), ("0.4223", "20.70")]
TITRES = ["12.30", "12.35", "12.30"]


@dataclass
class Bench:
    """The people, the instruments and the reagents of one bench."""

    analyst: User
    supervisor: User
    burette: Instrument
    balance: Instrument
    pipette: Instrument
    standard: ReferenceStandard
    titrant: Titrant
    lot: TitrantLot


def set_up_bench(analyst: User, supervisor: User) -> Bench:
    """Sodium hydroxide 0.1 mol/L with a lot in quarantine and a standard in use."""
    alkali, khp = some_substance(supervisor, hazards=["corrosive_base"]), phthalate(supervisor)
    titrant = some_titrant(supervisor, alkali, khp)
    return Bench(
        analyst=analyst, supervisor=supervisor, burette=calibrated(supervisor), titrant=titrant,
        balance=calibrated(supervisor, "balance"), pipette=calibrated(supervisor, "pipette"),
        standard=issued_standard(analyst, khp, supervisor=supervisor), lot=some_lot(titrant, by=analyst),
    )  # fmt: skip


def compute(record: Run | Standardization) -> None:
    """Do what the worker does."""
    request = latest_request(record)
    assert request is not None
    assert claim_request(request.pk)
    assert record_calculation(request.pk) is not None


def fill(record: Run | Standardization, rows: list[tuple[str, str]], *, by: User, blank: str = "0.05") -> None:
    """Type the readings of a sheet: amount and end of every titration from zero, then the blanks."""
    zero: dict[str, Any] = {"start": D("0.00")}
    for replicate, (amount, end) in zip(record.replicates.filter(kind="sample"), rows, strict=True):
        record_readings(replicate, by=by, values=zero | {"amount": D(amount), "end": D(end)})
    for replicate in record.replicates.filter(kind="blank"):
        record_readings(replicate, by=by, values=zero | {"end": D(blank)})


def started_standardization(bench: Bench) -> Standardization:
    """An open standardization without a reading."""
    instruments = {"burette": bench.burette, "balance": bench.balance}
    return start_standardization(
        bench.lot, by=bench.analyst, instruments=instruments, reference_standard=bench.standard
    )


def approved_standardization(bench: Bench) -> Standardization:
    """The lot gets its concentration."""
    record = started_standardization(bench)
    fill(record, WEIGHED, by=bench.analyst)
    compute(record)
    record = submit_standardization(record, by=bench.analyst, credentials=signed_by(bench.analyst))
    record = approve_standardization(record, by=bench.supervisor, credentials=signed_by(bench.supervisor))
    bench.lot.refresh_from_db()
    return record


def some_version(bench: Bench, **given: Any) -> MethodVersion:
    """The acidity of 10 mL by direct titration, in force."""
    acid = some_substance(bench.supervisor, name="acetic acid", formula="C2H4O2")
    method = record_method(by=bench.supervisor, code="TA", title="Titratable acidity")
    recipe: dict[str, Any] = {
        "titrant": bench.titrant, "expressed_as": acid, "ratio": "1", "titration": "direct",
        "sample_by": "volume",
        "sample_unit": "mL", "sample_amount": D("10"), "blanks_needed": 1, "quantity": "mass_concentration",
        "unit": "g/100 mL", "places": 3, "replicates_needed": 3, "policy": "concordance", "limit": D("0.10"),
        "limit_kind": "range_mL", "coverage": "k2", "endpoint": "indicator", "indicator": "phenolphthalein",
        "indicator_bias": D("0.02"), "indicator_u": D("0.01"),
        "instructions": "Titrate to a lasting pale pink.",
    }  # fmt: skip
    version = record_version(method, by=bench.supervisor, reason="first version", **recipe | given)
    return make_version_effective(version, by=bench.supervisor, credentials=signed_by(bench.supervisor))


def some_sample(bench: Bench, version: MethodVersion) -> Sample:
    """A sample of a control material, so that no product is needed."""
    control = record_control_sample(
        by=bench.supervisor, code="CS-A", name="acid control", method=version.method,
        assigned_value=D("0.735"),
        assigned_expanded=D("0.010"), unit=version.unit, expires_on=days_ago(-300),
    )  # fmt: skip
    return record_sample(
        by=bench.analyst,
        number="CS-A-1",
        drawn_at=timezone.now(),
        drawn_by="the bench",
        control_sample=control,
    )


def started_run(bench: Bench, **recipe: Any) -> Run:
    """An open run on the bench's lot, which must have a concentration."""
    version = some_version(bench, **recipe)
    sample, instruments = some_sample(bench, version), {"burette": bench.burette, "pipette": bench.pipette}
    if version.endpoint == "curve":
        instruments["electrode"] = calibrated(bench.supervisor, "electrode")
    return start_run(sample, by=bench.analyst, method_version=version, lot=bench.lot, instruments=instruments)


def approved_run(bench: Bench) -> Run:
    """A run from its first reading to its review."""
    run = started_run(bench)
    fill(run, [("10.00", titre) for titre in TITRES], by=bench.analyst)
    compute(run)
    run = submit_run(run, by=bench.analyst, credentials=signed_by(bench.analyst))
    return approve_run(run, by=bench.supervisor, credentials=signed_by(bench.supervisor))
