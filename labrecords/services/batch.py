"""Batches and samples: recorded, and the decision on a batch, signed."""

from __future__ import annotations

from datetime import date, datetime

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if, sure_of
from labrecords.models import Batch, BatchState, ControlSample, Meaning, Product, Sample, User
from labrecords.queries.batch import as_signed
from labrecords.queries.product import effective_specification
from labrecords.rules.batch import (
    objections_to_holding,
    objections_to_recording_batch,
    objections_to_recording_sample,
    objections_to_rejecting,
    objections_to_releasing,
)  # fmt: skip
from labrecords.rules.review import objections_to_reason
from labrecords.services import audit
from labrecords.services.number import reserve_name
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def record_batch(*, by: User, number: str, product: Product, made_on: date, size: str = "") -> Batch:
    """Record a batch under the specification of its product that is effective now."""
    batch = Batch(number=number, product=product, made_on=made_on, size=size)
    specification = effective_specification(product)
    reserve_name("batch", number)
    with audit.event("batch.record", by=by, subject=number) as event:
        today = timezone.localtime(event.at).date()
        refuse_if(objections_to_recording_batch(batch, by=by, specification=specification, today=today))
        batch.specification = sure_of(specification)
        batch.save()
    return batch


@transaction.atomic(durable=True)
def record_sample(
    *,
    by: User,
    number: str,
    drawn_at: datetime,
    drawn_by: str,
    batch: Batch | None = None,
    control_sample: ControlSample | None = None,
    place: str = "",
    is_urgent: bool = False,
) -> Sample:
    """Record what was drawn, from a batch or from a control material."""
    sample = Sample(
        number=number, batch=batch, control_sample=control_sample, drawn_at=drawn_at, drawn_by=drawn_by,
        place=place, is_urgent=is_urgent, recorded_by=by,
    )  # fmt: skip
    reserve_name("sample", number)
    with audit.event("sample.record", by=by, subject=number) as event:
        refuse_if(objections_to_recording_sample(sample, by=by, now=event.at))
        sample.save()
    return sample


@transaction.atomic(durable=True)
def void_sample(sample: Sample, *, by: User, reason: str) -> Sample:
    """Mark a sample as not to be tested; only while nothing was run on it."""
    sample = Sample.objects.select_for_update(of=("self",)).get(pk=sample.pk)
    refuse_if(
        [
            *objections_to_reason(reason, what="the sample is void"),
            *([f"Sample {sample.number} has runs; void those first."] if sample.runs.exclude(state="void") else []),
            *([] if by.is_analyst or by.is_supervisor else ["An analyst or a supervisor voids samples."]),
        ]
    )
    sample.void_reason = reason
    with audit.event("sample.void", by=by, subject=sample.number, reason=reason):
        sample.save(update_fields=["void_reason"])
    return sample


@transaction.atomic(durable=True)
def release_batch(batch: Batch, *, by: User, credentials: Credentials, reason: str = "") -> Batch:
    """Sign "released by"."""
    batch = _locked(batch)
    refuse_if(objections_to_releasing(batch, by=by))
    return _disposed(batch, BatchState.RELEASED, Meaning.RELEASED, by=by, credentials=credentials, reason=reason)


@transaction.atomic(durable=True)
def reject_batch(batch: Batch, *, by: User, credentials: Credentials, reason: str) -> Batch:
    """Sign "rejected by", with the reason."""
    batch = _locked(batch)
    refuse_if([*objections_to_rejecting(batch, by=by), *objections_to_reason(reason, what="the batch is rejected")])
    return _disposed(batch, BatchState.REJECTED, Meaning.REJECTED, by=by, credentials=credentials, reason=reason)


@transaction.atomic(durable=True)
def hold_batch(batch: Batch, *, by: User, credentials: Credentials, reason: str) -> Batch:
    """Sign "held by", with the reason; a held batch may still be released or rejected."""
    batch = _locked(batch)
    refuse_if([*objections_to_holding(batch, by=by), *objections_to_reason(reason, what="the batch is held")])
    return _disposed(batch, BatchState.ON_HOLD, Meaning.HELD, by=by, credentials=credentials, reason=reason)


def _locked(batch: Batch) -> Batch:
    return Batch.objects.select_for_update(of=("self",)).select_related("product", "specification").get(pk=batch.pk)


def _disposed(
    batch: Batch, state: BatchState, meaning: Meaning, *, by: User, credentials: Credentials, reason: str
) -> Batch:
    verb = {BatchState.RELEASED: "release", BatchState.REJECTED: "reject", BatchState.ON_HOLD: "hold"}[state]
    with audit.event(f"batch.{verb}", by=by, subject=batch.number, reason=reason) as event:
        batch.state, batch.disposition_reason = state, reason
        batch.disposed_by, batch.disposed_at = by, event.at
        batch.save(update_fields=["state", "disposition_reason", "disposed_by", "disposed_at"])
        sign(
            meaning, by=by, credentials=credentials, noun="batch", record_id=batch.pk, number=batch.number,
            content=as_signed(batch), reason=reason, zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
    return batch
