"""Investigations: opened with the result that asks for them, then assessed, planned, concluded."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import datetime

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if, sure_of
from labrecords.models import (
    Calculation,
    Conclusion,
    Investigation,
    InvestigationState,
    Meaning,
    RecordState,
    Run,
    User,
)  # fmt: skip
from labrecords.queries.investigation import as_signed
from labrecords.queries.run import as_signed as run_as_signed
from labrecords.rules.investigation import (
    objections_to_assessing,
    objections_to_concluding,
    objections_to_planning,
)
from labrecords.services import audit
from labrecords.services.number import next_number
from labrecords.services.signature import Credentials, sign


def open_investigation(run: Run, *, calculation: Calculation | None, at: datetime) -> Investigation:
    """Open the investigation of an out-of-specification result; called inside the service that met it."""
    return Investigation.objects.create(
        number=next_number("I", at=at, width=3), run=run, calculation=sure_of(calculation), opened_at=at
    )


@transaction.atomic(durable=True)
def assess_investigation(
    investigation: Investigation,
    *,
    by: User,
    credentials: Credentials,
    checklist: Mapping[str, Mapping[str, str]],
    assessment: str,
) -> Investigation:
    """Sign the laboratory assessment: the investigation is in phase 1, its checklist answered."""
    investigation = _locked(investigation)
    refuse_if(objections_to_assessing(investigation, by=by, checklist=checklist))
    investigation.checklist, investigation.assessment = dict(checklist), assessment
    investigation.state = InvestigationState.PHASE_1
    with audit.event("investigation.assess", by=by, subject=investigation.number):
        investigation.save(update_fields=["checklist", "assessment", "state"])
        _sign(Meaning.ASSESSED, investigation, by=by, credentials=credentials)
    return investigation


@transaction.atomic(durable=True)
def plan_retests(
    investigation: Investigation, *, by: User, credentials: Credentials, plan: str, retests: int
) -> Investigation:
    """Sign the plan of phase 2 before the first retest; its number of retests is never exceeded."""
    investigation = _locked(investigation)
    refuse_if(objections_to_planning(investigation, by=by, plan=plan, retests=retests))
    with audit.event("investigation.plan", by=by, subject=investigation.number) as event:
        investigation.plan, investigation.retests_planned = plan, retests
        investigation.plan_authorised_by, investigation.plan_authorised_at = by, event.at
        investigation.state = InvestigationState.PHASE_2
        investigation.save()
        _sign(Meaning.PLANNED, investigation, by=by, credentials=credentials)
    return investigation


@transaction.atomic(durable=True)
def close_investigation(
    investigation: Investigation,
    *,
    by: User,
    credentials: Credentials,
    conclusion: str,
    text: str,
    cause: str = "",
) -> Investigation:
    """Sign the conclusion. An assignable cause makes the run void; otherwise the result stands."""
    investigation = _locked(investigation)
    refuse_if(objections_to_concluding(investigation, by=by, conclusion=conclusion, text=text, cause=cause))
    with audit.event("investigation.close", by=by, subject=investigation.number, reason=text) as event:
        if conclusion == Conclusion.ASSIGNABLE_CAUSE:
            _void(investigation.run, by=by, credentials=credentials, reason=f"{investigation.number}: {cause}")
        investigation.cause, investigation.conclusion, investigation.conclusion_text = cause, conclusion, text
        investigation.closed_by, investigation.closed_at = by, event.at
        investigation.state = InvestigationState.CLOSED
        investigation.save(update_fields=["cause", "conclusion", "conclusion_text", "closed_by", "closed_at", "state"])
        _sign(Meaning.CONCLUDED, investigation, by=by, credentials=credentials, reason=text)
    return investigation


def _void(run: Run, *, by: User, credentials: Credentials, reason: str) -> None:
    run = Run.objects.select_for_update(of=("self",)).select_related("sample", "method_version__method").get(pk=run.pk)
    if run.state == RecordState.VOID:
        return
    run.state, run.void_reason = RecordState.VOID, reason
    run.save(update_fields=["state", "void_reason"])
    sign(
        Meaning.VOIDED, by=by, credentials=credentials, noun="run", record_id=run.pk, number=run.number,
        content=run_as_signed(run), reason=reason, zone=timezone.get_current_timezone_name(),
    )  # fmt: skip


def _locked(investigation: Investigation) -> Investigation:
    return (
        Investigation.objects.select_for_update(of=("self",))
        .select_related("run", "calculation")
        .get(pk=investigation.pk)
    )


def _sign(
    meaning: Meaning, investigation: Investigation, *, by: User, credentials: Credentials, reason: str = ""
) -> None:
    sign(
        meaning, by=by, credentials=credentials, noun="investigation", record_id=investigation.pk,
        number=investigation.number, content=as_signed(investigation), reason=reason,
        zone=timezone.get_current_timezone_name(),
    )  # fmt: skip
