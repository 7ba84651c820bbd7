"""Calculations: asked for with the change that needs them, computed by the worker, stored for ever."""

from __future__ import annotations

from datetime import datetime, timedelta
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.background import after_commit
from labrecords.canonical import sha256_of
from labrecords.errors import sure_of
from labrecords.models import Calculation, CalculationRequest, RecordState, Run, Standardization, User
from labrecords.queries.calculation import latest_calculation, waiting_requests
from labrecords.queries.preview import computed
from labrecords.services import audit

Record = Run | Standardization
MOST_ATTEMPTS = 5


def ask_for_calculation(record: Record, *, by: User, at: datetime) -> CalculationRequest:
    """Write the row that says "waiting" and send the worker after it; called inside another service."""
    request, is_new = CalculationRequest.objects.get_or_create(
        **_owner(record), state="waiting", defaults={"requested_by": by, "requested_at": at}
    )
    if not is_new and request.requested_by_id != by.pk:
        request.requested_by, request.requested_at = by, at
        request.save(update_fields=["requested_by", "requested_at"])
    after_commit("labrecords.tasks.compute_request", request_id=request.pk)
    return request


@transaction.atomic(durable=True)
def claim_request(request_id: int) -> bool:
    """Count an attempt before it is made, so that one that kills its worker is not repeated for ever."""
    request = CalculationRequest.objects.select_for_update().filter(pk=request_id, state="waiting").first()
    if request is None:
        return False
    if request.attempts >= MOST_ATTEMPTS:
        _finish(request, problem="The worker gave up after five attempts. Tell the administrator.")
        return False
    request.attempts += 1
    request.save(update_fields=["attempts"])
    return True


@transaction.atomic(durable=True)
def record_calculation(request_id: int) -> Calculation | None:
    """Compute one waiting request and store the outcome; None when there is nothing to do any more.

    Safe to run twice: a second worker waits and finds it done. The record is locked before its request, as every
    service that changes a record does, so that neither waits for the other.
    """
    asked = CalculationRequest.objects.filter(pk=request_id, state="waiting").first()
    if asked is None:
        return None
    record = _locked_record(asked)
    request = CalculationRequest.objects.select_for_update().filter(pk=request_id, state="waiting").first()
    if request is None:
        return None
    if record.state != RecordState.OPEN:
        return _finish(request, problem=f"{record.number} is {record.state}; it is not computed again.")
    try:
        text, outputs = computed(record)
    except ValueError as error:
        return _finish(request, problem=str(error))
    return _finish(request, calculation=_stored(record, text=text, outputs=outputs, by=request.requested_by))


def overdue_requests(*, seconds: int = 10) -> list[int]:
    """Ids of the requests that a lost message left waiting."""
    waiting = waiting_requests(older_than=timedelta(seconds=seconds), now=timezone.now())
    return list(waiting.values_list("pk", flat=True)[:200])


def _locked_record(request: CalculationRequest) -> Record:
    if request.run_id:
        return Run.objects.select_for_update().get(pk=request.run_id)
    return Standardization.objects.select_for_update().get(pk=sure_of(request.standardization_id))


def _stored(record: Record, *, text: str, outputs: dict[str, Any], by: User) -> Calculation:
    latest = latest_calculation(record)
    digest = sha256_of(text)
    if latest is not None and latest.inputs_sha256 == digest:
        return latest
    with audit.event("calculation.record", by=by, subject=record.number) as event:
        return Calculation.objects.create(
            **_owner(record),
            number=latest.number + 1 if latest else 1,
            inputs=text,
            inputs_sha256=digest,
            outputs=outputs,
            engine_version=outputs["engine"],
            value=outputs["value"],
            standard_uncertainty=outputs["u"],
            expanded_uncertainty=outputs["U"],
            coverage_factor=outputs["k"],
            degrees_of_freedom=_finite(outputs["degrees_of_freedom"]),
            unit=outputs["unit"],
            is_acceptable=outputs["acceptable"],
            needs_person=outputs["needs_person"],
            outcome=(outputs["verdict"] or {}).get("outcome", ""),
            requested_by=by,
            computed_at=event.at,
        )


def _finish(
    request: CalculationRequest, *, calculation: Calculation | None = None, problem: str = ""
) -> Calculation | None:
    request.state = "done" if calculation else "failed"
    request.calculation, request.problem = calculation, problem
    request.save(update_fields=["state", "calculation", "problem"])
    return calculation


def _owner(record: Record) -> dict[str, Any]:
    return {"run": record} if isinstance(record, Run) else {"standardization": record}


def _finite(value: float | None) -> float | None:
    return None if value is None or value == float("inf") else value
