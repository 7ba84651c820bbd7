"""Reading investigations."""

from __future__ import annotations

from typing import Any

from django.db.models import QuerySet

from labrecords.models import Investigation, InvestigationState, Sample


def investigations() -> QuerySet[Investigation]:
    """All investigations with what a list shows, newest first."""
    return Investigation.objects.select_related(
        "run__sample__batch__product",
        "run__method_version__method",
        "calculation",
        "closed_by",
        "plan_authorised_by",
    )


def open_investigation_of_sample(sample: Sample, *, method_id: int) -> Investigation | None:
    """The investigation that locks a sample against further runs of a test, or None."""
    return (
        Investigation.objects.filter(run__sample=sample, run__method_version__method_id=method_id)
        .exclude(state=InvestigationState.CLOSED)
        .first()
    )


def as_signed(investigation: Investigation) -> dict[str, Any]:
    """The content of an investigation that a signature covers."""
    return {
        "noun": "investigation",
        "number": investigation.number,
        "run": investigation.run.number,
        "calculation": investigation.calculation.inputs_sha256,
        "state": investigation.state,
        "opened_at": investigation.opened_at,
        "checklist": investigation.checklist,
        "assessment": investigation.assessment,
        "cause": investigation.cause,
        "plan": investigation.plan,
        "retests_planned": investigation.retests_planned,
        "conclusion": investigation.conclusion,
        "conclusion_text": investigation.conclusion_text,
    }
