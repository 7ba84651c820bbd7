"""Instruments and calibrations: recorded, superseded, withdrawn."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import date
from decimal import Decimal
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import Instrument, InstrumentCalibration, Meaning, User
from labrecords.queries.lineage import runs_resting_on, standardizations_resting_on
from labrecords.rules.instrument_register import (
    objections_to_calibrating,
    objections_to_recording_instrument,
    objections_to_superseding_instrument,
    objections_to_withdrawing_calibration,
    objections_to_withdrawing_instrument,
)  # fmt: skip
from labrecords.rules.review import objections_to_reason
from labrecords.services import audit
from labrecords.services.number import reserve_name
from labrecords.services.question import raise_questions_on, raise_questions_on_runs
from labrecords.services.signature import Credentials, sign
from labrecords.services.stored_file import Certificate, store_certificate


@transaction.atomic(durable=True)
def record_instrument(
    *, by: User, identifier: str, kind: str, unit: str, resolution: Decimal, tolerance: Decimal,
    capacity: Decimal | None = None, description: str = "", place: str = "",
) -> Instrument:  # fmt: skip
    """Record an instrument; it is used once it has a calibration."""
    instrument = Instrument(
        identifier=identifier, kind=kind, unit=unit, resolution=resolution, tolerance=tolerance,
        capacity=capacity,
        description=description, place=place,
    )  # fmt: skip
    reserve_name("instrument", identifier)
    refuse_if(objections_to_recording_instrument(instrument, by=by))
    with audit.event("instrument.record", by=by, subject=identifier):
        instrument.save()
    return instrument


@transaction.atomic(durable=True)
def supersede_instrument(instrument: Instrument, *, by: User, reason: str, **new: Any) -> Instrument:
    """Replace an entry by a corrected one under another identifier; the old one stays with its uses."""
    instrument = _locked(instrument)
    successor = Instrument(**new)
    reserve_name("instrument", successor.identifier)
    refuse_if(
        [
            *objections_to_superseding_instrument(instrument, by=by),
            *objections_to_recording_instrument(successor, by=by),
            *objections_to_reason(reason, what="the instrument is superseded"),
        ]
    )
    with audit.event("instrument.supersede", by=by, subject=instrument.identifier, reason=reason):
        successor.save()
        instrument.superseded_by = successor
        instrument.save(update_fields=["superseded_by"])
    return successor


@transaction.atomic(durable=True)
def withdraw_instrument(instrument: Instrument, *, by: User, reason: str) -> Instrument:
    """Take an instrument out of use; what was done with it stays."""
    instrument = _locked(instrument)
    refuse_if(
        [
            *objections_to_withdrawing_instrument(instrument, by=by),
            *objections_to_reason(reason, what="the instrument is withdrawn"),
        ]
    )
    with audit.event("instrument.withdraw", by=by, subject=instrument.identifier, reason=reason) as event:
        instrument.withdrawn_at, instrument.withdrawn_reason = event.at, reason
        instrument.save(update_fields=["withdrawn_at", "withdrawn_reason"])
    return instrument


@transaction.atomic(durable=True)
def record_calibration(
    instrument: Instrument, *, by: User, calibrated_on: date, due_on: date, performed_by: str,
    uncertainty: Decimal | None = None, corrections: Sequence[Sequence[str]] = (),
    slope_percent: Decimal | None = None,
    remarks: str = "", certificate: Certificate | None = None,
) -> InstrumentCalibration:  # fmt: skip
    """Record a calibration, with its certificate as (name, media type, bytes) where there is one."""
    calibration = InstrumentCalibration(
        instrument=_locked(instrument), calibrated_on=calibrated_on, due_on=due_on, performed_by=performed_by,
        uncertainty=uncertainty, corrections=[list(row) for row in corrections], slope_percent=slope_percent,
        remarks=remarks,
    )  # fmt: skip
    with audit.event("instrument.calibrate", by=by, subject=instrument.identifier) as event:
        refuse_if(objections_to_calibrating(calibration, by=by, today=timezone.localtime(event.at).date()))
        if certificate is not None:
            calibration.certificate = store_certificate(certificate, by=by, at=event.at)
        calibration.save()
    return calibration


@transaction.atomic(durable=True)
def withdraw_calibration(
    calibration: InstrumentCalibration, *, by: User, credentials: Credentials, reason: str
) -> InstrumentCalibration:
    """Withdraw a calibration that proved wrong; everything measured under it is put in question."""
    calibration = (
        InstrumentCalibration.objects.select_for_update(of=("self",))
        .select_related("instrument")
        .get(pk=calibration.pk)
    )
    refuse_if(
        [
            *objections_to_withdrawing_calibration(calibration, by=by),
            *objections_to_reason(reason, what="the calibration is withdrawn"),
        ]
    )
    identifier = calibration.instrument.identifier
    because = f"Calibration of {identifier} of {calibration.calibrated_on:%-d %b %Y} is withdrawn: {reason}"
    with audit.event("instrument.withdraw_calibration", by=by, subject=identifier, reason=reason) as event:
        calibration.withdrawn_at, calibration.withdrawn_reason = event.at, reason
        calibration.save(update_fields=["withdrawn_at", "withdrawn_reason"])
        sign(
            Meaning.WITHDRAWN, by=by, credentials=credentials, noun="calibration", record_id=calibration.pk,
            number=str(calibration), content={"noun": "calibration", "instrument": identifier,
            "reason": reason},
            reason=reason, zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
        _question_uses(calibration, because=because, by=by)
    return calibration


def _question_uses(calibration: InstrumentCalibration, *, because: str, by: User) -> None:
    """Each record once, also where a run used the instrument and rests on a standardization that did."""
    uses = list(calibration.uses.all())
    standardizations = [use.standardization_id for use in uses if use.standardization_id]
    raise_questions_on(standardizations, because=because, by=by)
    resting = set(runs_resting_on(standardizations_resting_on(standardizations)))
    runs = [use.run_id for use in uses if use.run_id and use.run_id not in resting]
    raise_questions_on_runs(runs, because=because, by=by)


def _locked(instrument: Instrument) -> Instrument:
    found = Instrument.objects.select_for_update(of=("self",)).select_related("superseded_by")
    return found.get(pk=instrument.pk)
