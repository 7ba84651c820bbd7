"""Reading the trail."""

from __future__ import annotations

from labrecords.models import AuditEvent, Run, Standardization

CONTRIBUTIONS = (
    "run.start", "run.correct", "run.submit", "standardization.start", "standardization.correct",
    "standardization.submit", "replicate.add", "replicate.record", "replicate.correct", "replicate.exclude",
    "curve.record", "calculation.record",
)  # fmt: skip


def contributor_ids(record: Run | Standardization) -> set[int]:
    """Everyone who started, entered, corrected, excluded, computed or submitted any part of a record."""
    events = AuditEvent.objects.filter(subject=record.number, action__in=CONTRIBUTIONS)
    return {*events.values_list("actor_id", flat=True), record.started_by_id}
