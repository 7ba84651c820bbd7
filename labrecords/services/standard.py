"""Reference standards: recorded into quarantine, corrected there, issued, superseded, withdrawn."""

from __future__ import annotations

from datetime import date
from decimal import Decimal
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import LotState, Meaning, ReferenceStandard, Substance, User
from labrecords.queries.standard import as_signed, standardizations_using
from labrecords.rules.review import objections_to_reason
from labrecords.rules.standard import (
    objections_to_certificate_values,
    objections_to_correcting_standard,
    objections_to_issuing,
    objections_to_recording_standard,
    objections_to_superseding_standard,
    objections_to_withdrawing_standard,
)
from labrecords.services import audit
from labrecords.services.number import reserve_name
from labrecords.services.question import raise_questions_on
from labrecords.services.signature import Credentials, sign
from labrecords.services.stored_file import Certificate, store_certificate


@transaction.atomic(durable=True)
def record_standard(
    *, by: User, number: str, substance: Substance, supplier_lot: str, purity: Decimal,
    purity_expanded: Decimal,
    purity_k: Decimal, received_on: date, expires_on: date, drying: str = "",
    certificate: Certificate | None = None,
) -> ReferenceStandard:  # fmt: skip
    """Record a lot into quarantine; its certificate is given as (name, media type, bytes)."""
    standard = ReferenceStandard(
        number=number, substance=substance, supplier_lot=supplier_lot, purity=purity,
        purity_expanded=purity_expanded,
        purity_k=purity_k, received_on=received_on, expires_on=expires_on, drying=drying,
    )  # fmt: skip
    reserve_name("standard", number)
    with audit.event("standard.record", by=by, subject=number) as event:
        refuse_if(objections_to_recording_standard(standard, by=by, today=timezone.localtime(event.at).date()))
        if certificate is not None:
            standard.certificate = store_certificate(certificate, by=by, at=event.at)
        standard.save()
    return standard


@transaction.atomic(durable=True)
def correct_standard(
    standard: ReferenceStandard, *, by: User, reason: str, supplier_lot: str, purity: Decimal,
    purity_expanded: Decimal,
    purity_k: Decimal, received_on: date, expires_on: date, drying: str = "",
    certificate: Certificate | None = None,
) -> ReferenceStandard:  # fmt: skip
    """Correct a lot in quarantine, with a reason; a certificate is replaced only by another one."""
    standard = _locked(standard)
    standard.supplier_lot, standard.drying = supplier_lot, drying
    standard.purity, standard.purity_expanded, standard.purity_k = purity, purity_expanded, purity_k
    standard.received_on, standard.expires_on = received_on, expires_on
    with audit.event("standard.correct", by=by, subject=standard.number, reason=reason) as event:
        refuse_if(
            [
                *objections_to_correcting_standard(standard, by=by),
                *objections_to_certificate_values(standard, today=timezone.localtime(event.at).date()),
                *objections_to_reason(reason, what="the standard is corrected"),
            ]
        )
        if certificate is not None:
            standard.certificate = store_certificate(certificate, by=by, at=event.at)
        standard.save()
    return standard


@transaction.atomic(durable=True)
def supersede_standard(
    standard: ReferenceStandard,
    *,
    by: User,
    reason: str,
    certificate: Certificate | None = None,
    **values: Any,
) -> ReferenceStandard:
    """Put a new entry in a lot's place, in quarantine; the old one is used for nothing new."""
    standard, successor = _locked(standard), ReferenceStandard(**values)
    reserve_name("standard", successor.number)
    with audit.event("standard.supersede", by=by, subject=standard.number, reason=reason) as event:
        today = timezone.localtime(event.at).date()
        refuse_if(
            [
                *objections_to_superseding_standard(standard, by=by),
                *objections_to_recording_standard(successor, by=by, today=today),
                *objections_to_reason(reason, what="the standard is superseded"),
            ]
        )
        if certificate is not None:
            successor.certificate = store_certificate(certificate, by=by, at=event.at)
        successor.save()
        standard.superseded_by = successor
        standard.save(update_fields=["superseded_by"])
    return successor


@transaction.atomic(durable=True)
def issue_standard(standard: ReferenceStandard, *, by: User) -> ReferenceStandard:
    """Release a lot from quarantine: a supervisor has compared it with its certificate."""
    standard = _locked(standard)
    with audit.event("standard.issue", by=by, subject=standard.number) as event:
        refuse_if(objections_to_issuing(standard, by=by, today=timezone.localtime(event.at).date()))
        standard.state = LotState.IN_USE
        standard.save(update_fields=["state"])
    return standard


@transaction.atomic(durable=True)
def withdraw_standard(
    standard: ReferenceStandard, *, by: User, credentials: Credentials, reason: str
) -> ReferenceStandard:
    """Withdraw a lot: every standardization and run that rests on it, at any remove, is put in question."""
    standard = _locked(standard)
    refuse_if(
        [
            *objections_to_withdrawing_standard(standard, by=by),
            *objections_to_reason(reason, what="the standard is withdrawn"),
        ]
    )
    with audit.event("standard.withdraw", by=by, subject=standard.number, reason=reason):
        standard.state, standard.withdrawn_reason = LotState.WITHDRAWN, reason
        standard.save(update_fields=["state", "withdrawn_reason"])
        sign(
            Meaning.WITHDRAWN, by=by, credentials=credentials, noun="standard", record_id=standard.pk,
            number=standard.number, content=as_signed(standard), reason=reason,
            zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
        because = f"Reference standard {standard.number} is withdrawn: {reason}"
        raise_questions_on(standardizations_using(standard), because=because, by=by)
    return standard


def _locked(standard: ReferenceStandard) -> ReferenceStandard:
    return (
        ReferenceStandard.objects.select_for_update(of=("self",))
        .select_related("substance", "certificate", "superseded_by")
        .get(pk=standard.pk)
    )
