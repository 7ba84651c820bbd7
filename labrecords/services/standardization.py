"""Standardizations: started, submitted, approved, returned, void."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import timedelta
from typing import TypeVar

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import (
    Basis,
    Instrument,
    LotState,
    Meaning,
    RecordState,
    ReferenceStandard,
    Standardization,
    TitrantLot,
    User,
)  # fmt: skip
from labrecords.queries.calculation import latest_calculation
from labrecords.queries.standardization import approved_for_lot, as_signed, in_force
from labrecords.rules.instrument import objections_to_instruments, parts_of_standardization
from labrecords.rules.review import objections_to_reason, objections_to_reviewing
from labrecords.rules.standardization import (
    objections_to_approving_standardization,
    objections_to_starting_standardization,
    objections_to_submitting_standardization,
    objections_to_voiding_standardization,
)  # fmt: skip
from labrecords.services import audit
from labrecords.services.calculation import ask_for_calculation
from labrecords.services.number import next_number
from labrecords.services.question import raise_questions_on
from labrecords.services.replicate import add_first_replicates, record_used_instruments
from labrecords.services.signature import Credentials, sign

Row = TypeVar("Row", ReferenceStandard, TitrantLot)


@transaction.atomic(durable=True)
def start_standardization(
    lot: TitrantLot,
    *,
    by: User,
    instruments: Mapping[str, Instrument],
    reference_standard: ReferenceStandard | None = None,
    against: TitrantLot | None = None,
) -> Standardization:
    """Reserve a number and fix what the standardization rests on."""
    lot = TitrantLot.objects.select_for_update(of=("self",)).select_related("titrant").get(pk=lot.pk)
    reference_standard, against = _as_stored(reference_standard), _as_stored(against)
    basis = Basis.MASS if reference_standard is not None else Basis.TITRANT
    with audit.event("standardization.start", by=by, subject=lot.number) as event:
        parts = parts_of_standardization(basis, titrant=lot.titrant)
        found = objections_to_starting_standardization(
            lot, by=by, reference_standard=reference_standard, against=against, at=event.at
        )
        refuse_if([*found, *objections_to_instruments(instruments, parts=parts, at=event.at)])
        standardization = Standardization.objects.create(
            number=next_number("S", at=event.at),
            lot=lot,
            basis=basis,
            reference_standard=reference_standard,
            against=in_force(against, at=event.at) if against else None,
            started_by=by,
            started_at=event.at,
        )
        record_used_instruments(standardization, instruments, at=event.at)
        counts = {"replicates": lot.titrant.replicates_needed, "blanks": lot.titrant.blanks_needed}
        add_first_replicates(standardization, by=by, at=event.at, **counts)
    return standardization


@transaction.atomic(durable=True)
def correct_standardization(standardization: Standardization, *, by: User, remarks: str) -> Standardization:
    """Write the remarks of an open standardization."""
    standardization = _locked(standardization)
    refuse_if(
        []
        if standardization.state == RecordState.OPEN and by.is_analyst
        else [f"{standardization.number} is {standardization.state}; an analyst changes it while it is open."]
    )
    standardization.remarks = remarks
    with audit.event("standardization.correct", by=by, subject=standardization.number) as event:
        standardization.save(update_fields=["remarks"])
        ask_for_calculation(standardization, by=by, at=event.at)
    return standardization


@transaction.atomic(durable=True)
def submit_standardization(standardization: Standardization, *, by: User, credentials: Credentials) -> Standardization:
    """Sign "performed by"."""
    standardization = _locked(standardization)
    refuse_if(objections_to_submitting_standardization(standardization, by=by))
    standardization.calculation = latest_calculation(standardization)
    standardization.state = RecordState.SUBMITTED
    with audit.event("standardization.submit", by=by, subject=standardization.number):
        standardization.save(update_fields=["calculation", "state"])
        _sign(Meaning.PERFORMED, standardization, by=by, credentials=credentials)
    return standardization


@transaction.atomic(durable=True)
def approve_standardization(standardization: Standardization, *, by: User, credentials: Credentials) -> Standardization:
    """Sign "reviewed by": the concentration is in force until the restandardization date."""
    standardization = _locked(standardization)
    lot = TitrantLot.objects.select_for_update().get(pk=standardization.lot_id)
    refuse_if(
        [
            *objections_to_reviewing(standardization, by=by),
            *objections_to_approving_standardization(standardization, by=by),
        ]
    )
    with audit.event("standardization.approve", by=by, subject=standardization.number) as event:
        for earlier in approved_for_lot(lot, at=event.at):
            earlier.superseded_at = event.at
            earlier.save(update_fields=["superseded_at"])
        days = timedelta(days=standardization.lot.titrant.restandardization_days)
        standardization.state, standardization.in_force_from = RecordState.APPROVED, event.at
        standardization.in_force_until = min(timezone.localtime(event.at).date() + days, lot.expires_on)
        standardization.save(update_fields=["state", "in_force_from", "in_force_until"])
        if lot.state == LotState.QUARANTINED:
            lot.state = LotState.IN_USE
            lot.save(update_fields=["state"])
        _sign(Meaning.REVIEWED, standardization, by=by, credentials=credentials)
    return standardization


@transaction.atomic(durable=True)
def return_standardization(
    standardization: Standardization, *, by: User, credentials: Credentials, reason: str
) -> Standardization:
    """Give a submitted standardization back to its analyst, with a reason."""
    standardization = _locked(standardization)
    refuse_if(
        [
            *objections_to_reviewing(standardization, by=by),
            *objections_to_reason(reason, what="the standardization is returned"),
        ]
    )
    standardization.state, standardization.returned_reason = RecordState.OPEN, reason
    with audit.event("standardization.return", by=by, subject=standardization.number, reason=reason):
        standardization.save(update_fields=["state", "returned_reason"])
        _sign(Meaning.RETURNED, standardization, by=by, credentials=credentials, reason=reason)
    return standardization


@transaction.atomic(durable=True)
def void_standardization(
    standardization: Standardization, *, by: User, credentials: Credentials, reason: str
) -> Standardization:
    """Void a standardization; everything that rests on an approved one is put in question."""
    standardization = _locked(standardization)
    was_approved = standardization.state == RecordState.APPROVED
    refuse_if(
        [
            *objections_to_voiding_standardization(standardization, by=by),
            *objections_to_reason(reason, what="the standardization is void"),
        ]
    )
    standardization.state, standardization.void_reason = RecordState.VOID, reason
    with audit.event("standardization.void", by=by, subject=standardization.number, reason=reason):
        standardization.save(update_fields=["state", "void_reason"])
        _sign(Meaning.VOIDED, standardization, by=by, credentials=credentials, reason=reason)
        if was_approved:
            raise_questions_on(
                [standardization.pk],
                because=f"Standardization {standardization.number} is void: {reason}",
                by=by,
            )
    return standardization


def _as_stored(row: Row | None) -> Row | None:
    """A choice as it stands now, not as it stood when the page was made; locked against being withdrawn meanwhile."""
    if row is None:
        return None
    return type(row).objects.select_for_update(of=("self",)).get(pk=row.pk)


def _locked(standardization: Standardization) -> Standardization:
    return (
        Standardization.objects.select_for_update(of=("self",))
        .select_related("lot__titrant", "reference_standard__substance", "against", "started_by")
        .get(pk=standardization.pk)
    )


def _sign(
    meaning: Meaning,
    standardization: Standardization,
    *,
    by: User,
    credentials: Credentials,
    reason: str = "",
) -> None:
    sign(
        meaning, by=by, credentials=credentials, noun="standardization", record_id=standardization.pk,
        number=standardization.number, content=as_signed(standardization), reason=reason,
        zone=timezone.get_current_timezone_name(),
    )  # fmt: skip
