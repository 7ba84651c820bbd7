"""Replicates and blanks: added, read, corrected, excluded. A reading is kept the moment its cell is left."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from datetime import datetime
from decimal import Decimal
from typing import Any

from django.db import transaction

from labrecords.errors import refuse_if, sure_of
from labrecords.models import (
    Curve,
    Instrument,
    Replicate,
    ReplicateKind,
    Run,
    Standardization,
    UsedInstrument,
    User,
)
from labrecords.queries.instrument import calibration_at
from labrecords.queries.replicate import next_replicate_number
from labrecords.rules.replicate import (
    objections_to_adding,
    objections_to_attaching,
    objections_to_excluding,
    objections_to_readings,
)  # fmt: skip
from labrecords.services import audit
from labrecords.services.calculation import ask_for_calculation
from labrecords.services.stored_file import store_file

Record = Run | Standardization


@transaction.atomic(durable=True)
def add_replicate(record: Record, *, by: User, kind: str) -> Replicate:
    """Add an empty replicate or blank to an open record."""
    record = lock_record(record)
    refuse_if(objections_to_adding(record, by=by, kind=kind))
    with audit.event("replicate.add", by=by, subject=record.number) as event:
        return _added(record, by=by, at=event.at, kind=kind)


@transaction.atomic(durable=True)
def record_readings(
    replicate: Replicate, *, by: User, values: Mapping[str, Decimal | str | None], reason: str = ""
) -> Replicate:
    """Keep one or more cells of a titration: amount, start, end, temperature, observation.

    Filling an empty cell needs nothing more; changing a kept value is a correction and needs a reason.
    """
    record = lock_record_of(replicate)
    replicate = Replicate.objects.select_for_update(of=("self",)).get(pk=replicate.pk)
    changed = {field: value for field, value in values.items() if str(getattr(replicate, field, None)) != str(value)}
    if not changed:
        return replicate
    refuse_if(objections_to_readings(replicate, record=record, by=by, values=changed, reason=reason))
    corrected = [field for field in changed if getattr(replicate, field) not in (None, "")]
    for field, value in changed.items():
        setattr(replicate, field, value)
    replicate.corrections += len(corrected)
    action = "replicate.correct" if corrected else "replicate.record"
    with audit.event(action, by=by, subject=record.number, reason=reason) as event:
        replicate.save(update_fields=[*changed, "corrections"])
        ask_for_calculation(record, by=by, at=event.at)
    return replicate


@transaction.atomic(durable=True)
def exclude_replicate(replicate: Replicate, *, by: User, cause: str, sentence: str) -> Replicate:
    """Take a replicate out of the calculation for an assignable cause; it stays on the record."""
    record = lock_record_of(replicate)
    replicate = Replicate.objects.select_for_update(of=("self",)).get(pk=replicate.pk)
    refuse_if(objections_to_excluding(replicate, record=record, by=by, cause=cause, sentence=sentence))
    with audit.event("replicate.exclude", by=by, subject=record.number, reason=sentence) as event:
        replicate.is_excluded, replicate.exclusion_cause, replicate.exclusion_sentence = True, cause, sentence
        replicate.excluded_by, replicate.excluded_at = by, event.at
        replicate.save()
        ask_for_calculation(record, by=by, at=event.at)
    return replicate


@transaction.atomic(durable=True)
def attach_curve(
    replicate: Replicate, *, by: User, name: str, media_type: str, content: bytes, curve: Mapping[str, Any]
) -> Replicate:
    """Keep a recorded curve and its file byte for byte with a replicate that has no readings yet.

    ``curve`` has quantity, mapping, volumes, readings and notes as the reader of curve files gave them.
    """
    record = lock_record_of(replicate)
    replicate = Replicate.objects.select_for_update(of=("self",)).get(pk=replicate.pk)
    digest = hashlib.sha256(content).hexdigest()
    refuse_if(objections_to_attaching(replicate, record=record, by=by, digest=digest, quantity=curve["quantity"]))
    with audit.event("curve.record", by=by, subject=record.number) as event:
        file = store_file(name, media_type=media_type, content=content, by=by, at=event.at)
        replicate.curve = Curve.objects.create(file=file, recorded_by=by, recorded_at=event.at, **curve)
        replicate.save(update_fields=["curve"])
        ask_for_calculation(record, by=by, at=event.at)
    return replicate


def add_first_replicates(record: Record, *, by: User, at: datetime, replicates: int, blanks: int) -> None:
    """The empty rows a new sheet starts with; called inside the starting service."""
    for kind, count in ((ReplicateKind.BLANK, blanks), (ReplicateKind.SAMPLE, replicates)):
        for _ in range(count):
            _added(record, by=by, at=at, kind=kind)


def record_used_instruments(record: Record, instruments: Mapping[str, Instrument], *, at: datetime) -> None:
    """Fix each instrument in its part with the calibration that holds; called inside the starting service."""
    for part, instrument in instruments.items():
        UsedInstrument.objects.create(
            **_owner(record), part=part, instrument=instrument, calibration=sure_of(calibration_at(instrument, at=at))
        )


def lock_record(record: Record) -> Record:
    """The record, locked; what is read and what is refused then belong together."""
    if isinstance(record, Run):
        return Run.objects.select_for_update(of=("self",)).select_related("method_version__method").get(pk=record.pk)
    return Standardization.objects.select_for_update(of=("self",)).select_related("lot__titrant").get(pk=record.pk)


def lock_record_of(replicate: Replicate) -> Record:
    """The record a replicate belongs to, locked."""
    owner = Run(pk=replicate.run_id) if replicate.run_id else Standardization(pk=replicate.standardization_id)
    return lock_record(owner)


def _added(record: Record, *, by: User, at: datetime, kind: str) -> Replicate:
    return Replicate.objects.create(
        **_owner(record),
        kind=kind,
        number=next_replicate_number(record, kind=kind),
        entered_by=by,
        entered_at=at,
    )


def _owner(record: Record) -> dict[str, Record]:
    return {"run": record} if isinstance(record, Run) else {"standardization": record}
