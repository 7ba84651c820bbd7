"""Runs: started, submitted, approved, returned, void."""

from __future__ import annotations

from collections.abc import Mapping
from decimal import Decimal
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if, sure_of
from labrecords.models import (
    Instrument,
    Investigation,
    Meaning,
    MethodVersion,
    RecordState,
    Run,
    Sample,
    TitrantLot,
    User,
)  # fmt: skip
from labrecords.queries.calculation import latest_calculation
from labrecords.queries.product import limit_for_sample
from labrecords.queries.run import as_signed
from labrecords.queries.standardization import in_force
from labrecords.rules.instrument import objections_to_instruments, parts_of_method
from labrecords.rules.review import objections_to_reason, objections_to_reviewing
from labrecords.rules.run import (
    needs_an_investigation,
    objections_to_approving_run,
    objections_to_starting_run,
    objections_to_submitting_run,
    objections_to_voiding_run,
)  # fmt: skip
from labrecords.services import audit
from labrecords.services.calculation import ask_for_calculation
from labrecords.services.investigation import open_investigation
from labrecords.services.number import next_number
from labrecords.services.replicate import add_first_replicates, record_used_instruments
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def start_run(
    sample: Sample,
    *,
    by: User,
    method_version: MethodVersion,
    lot: TitrantLot,
    instruments: Mapping[str, Instrument],
    excess_lot: TitrantLot | None = None,
    retest_for: Investigation | None = None,
) -> Run:
    """Reserve a number and fix what the run rests on; Refused with every reason at once."""
    sample = Sample.objects.select_for_update(of=("self",)).select_related("batch", "control_sample").get(pk=sample.pk)
    lot = TitrantLot.objects.select_for_update(of=("self",)).select_related("titrant").get(pk=lot.pk)
    if excess_lot is not None:
        excess_lot = TitrantLot.objects.select_for_update(of=("self",)).select_related("titrant").get(pk=excess_lot.pk)
    with audit.event("run.start", by=by, subject=sample.number) as event:
        refuse_if(
            [
                *objections_to_starting_run(
                    sample, by=by, version=method_version, lot=lot, excess_lot=excess_lot, retest_for=retest_for,
                    at=event.at,
                ),
                *objections_to_instruments(instruments, parts=parts_of_method(method_version), at=event.at),
            ]
        )  # fmt: skip
        run = Run.objects.create(
            number=next_number("R", at=event.at),
            sample=sample,
            method_version=method_version,
            specification_limit=limit_for_sample(sample, method=method_version.method),
            standardization=sure_of(in_force(lot, at=event.at)),
            excess_standardization=in_force(excess_lot, at=event.at) if excess_lot else None,
            retest_for=retest_for,
            started_by=by,
            started_at=event.at,
        )
        record_used_instruments(run, instruments, at=event.at)
        needed = {"replicates": method_version.replicates_needed, "blanks": method_version.blanks_needed}
        add_first_replicates(run, by=by, at=event.at, **needed)
    return run


@transaction.atomic(durable=True)
def correct_run(run: Run, *, by: User, remarks: str, loss_percent: Decimal | None = None) -> Run:
    """Write the remarks and the loss on drying of an open run."""
    run = _locked(run)
    refuse_if([] if run.state == RecordState.OPEN else [f"{run.number} is {run.state}; only an open run is changed."])
    run.remarks, run.loss_percent = remarks, loss_percent
    with audit.event("run.correct", by=by, subject=run.number) as event:
        run.save(update_fields=["remarks", "loss_percent"])
        ask_for_calculation(run, by=by, at=event.at)
    return run


@transaction.atomic(durable=True)
def submit_run(run: Run, *, by: User, credentials: Credentials) -> Run:
    """Sign "performed by"; an out-of-specification result opens its investigation in this transaction."""
    run = _locked(run)
    refuse_if(objections_to_submitting_run(run, by=by))
    run.calculation, run.state = latest_calculation(run), RecordState.SUBMITTED
    with audit.event("run.submit", by=by, subject=run.number) as event:
        run.save(update_fields=["calculation", "state"])
        _sign(Meaning.PERFORMED, run, by=by, credentials=credentials)
        if needs_an_investigation(run):
            open_investigation(run, calculation=run.calculation, at=event.at)
    return run


@transaction.atomic(durable=True)
def approve_run(run: Run, *, by: User, credentials: Credentials) -> Run:
    """Sign "reviewed by": a second person approves the run as it stands."""
    run = _locked(run)
    refuse_if([*objections_to_reviewing(run, by=by), *objections_to_approving_run(run, by=by)])
    run.state = RecordState.APPROVED
    with audit.event("run.approve", by=by, subject=run.number):
        run.save(update_fields=["state"])
        _sign(Meaning.REVIEWED, run, by=by, credentials=credentials)
    return run


@transaction.atomic(durable=True)
def return_run(run: Run, *, by: User, credentials: Credentials, reason: str) -> Run:
    """Give a submitted run back to its analyst, with a reason."""
    run = _locked(run)
    refuse_if([*objections_to_reviewing(run, by=by), *objections_to_reason(reason, what="the run is returned")])
    run.state, run.returned_reason = RecordState.OPEN, reason
    with audit.event("run.return", by=by, subject=run.number, reason=reason):
        run.save(update_fields=["state", "returned_reason"])
        _sign(Meaning.RETURNED, run, by=by, credentials=credentials, reason=reason)
    return run


@transaction.atomic(durable=True)
def void_run(run: Run, *, by: User, credentials: Credentials, reason: str) -> Run:
    """Void a run; it stays visible. A void run whose result was out of specification is investigated too."""
    run = _locked(run)
    refuse_if([*objections_to_voiding_run(run, by=by), *objections_to_reason(reason, what="the run is void")])
    with audit.event("run.void", by=by, subject=run.number, reason=reason) as event:
        run.state, run.void_reason = RecordState.VOID, reason
        run.save(update_fields=["state", "void_reason"])
        _sign(Meaning.VOIDED, run, by=by, credentials=credentials, reason=reason)
        if needs_an_investigation(run):
            open_investigation(run, calculation=latest_calculation(run), at=event.at)
    return run


def _locked(run: Run) -> Run:
    return (
        Run.objects.select_for_update(of=("self",))
        .select_related("sample", "method_version__method", "standardization__lot", "specification_limit")
        .get(pk=run.pk)
    )


def _sign(meaning: Meaning, run: Run, *, by: User, credentials: Credentials, reason: str = "") -> None:
    content: dict[str, Any] = as_signed(run)
    sign(
        meaning, by=by, credentials=credentials, noun="run", record_id=run.pk, number=run.number, content=content,
        reason=reason, zone=timezone.get_current_timezone_name(),
    )  # fmt: skip
