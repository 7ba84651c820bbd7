"""The history of a record in sentences, from the trail."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from django.db.models import Model, Q

from labrecords.models import AuditChange, AuditEvent, Run, Standardization

SILENT = {
    "id",
    "corrections",
    "state",
    "entered_at",
    "excluded_at",
    "excluded_by_id",
    "entered_by_id",
    "is_excluded",
}
VERBS = {
    "record": "recorded", "correct": "corrected", "exclude": "excluded", "submit": "submitted",
    "approve": "approved",
    "return": "returned", "void": "voided", "withdraw": "withdrew", "open": "opened", "close": "closed",
    "release": "released", "reject": "rejected", "hold": "put on hold", "issue": "issued",
    "supersede": "superseded",
    "start": "started", "add": "added", "assess": "assessed", "plan": "planned retests for",
    "answer": "answered",
    "make_effective": "made effective", "set_limits": "set limits of", "sign_in": "signed in",
    "sign_out": "signed out",
    "fail_sign_in": "was named in a sign-in that failed", "change_password": "changed the password of",
    "calibrate": "calibrated", "expire": "marked as expired",
    "withdraw_calibration": "withdrew a calibration of",
    "review": "reviewed",
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class HistoryLine:
    """One event as a person reads it."""

    event_id: int
    at: datetime
    actor: str
    sentence: str
    details: Sequence[str]
    reason: str
    is_simulated: bool


def sentences_about(record: Model, *, parts: Iterable[Model] = (), limit: int = 200) -> list[HistoryLine]:
    """Events that changed a record or one of the parts named, oldest first."""
    touched = Q()
    for changed in (record, *parts):
        touched |= Q(changes__table_name=changed._meta.db_table, changes__record_key=str(changed.pk))
    if isinstance(record, Run | Standardization):
        touched |= Q(subject=record.number)
    ids = AuditEvent.objects.filter(touched).values_list("pk", flat=True).distinct()[: limit * 5]
    events = AuditEvent.objects.filter(pk__in=list(ids)).prefetch_related("changes").order_by("id")
    return [line(event) for event in events[:limit]]


def line(event: AuditEvent) -> HistoryLine:
    """An event with its changes in words."""
    return HistoryLine(
        event_id=event.pk,
        at=event.occurred_at,
        actor=event.actor_name,
        sentence=sentence_of(event),
        details=[detail for change in event.changes.all() for detail in _details(change)],
        reason=event.reason,
        is_simulated=event.is_simulated,
    )


def sentence_of(event: AuditEvent) -> str:
    """ "submitted run R-26-00417" """
    noun, _, verb = event.action.partition(".")
    spoken = VERBS.get(verb, verb.replace("_", " "))
    subject = f" {event.subject}" if event.subject else ""
    if noun == "user" and verb in ("sign_in", "sign_out", "fail_sign_in"):
        return spoken
    if noun == "replicate":
        return (
            f"{spoken} a reading of{subject}" if verb in ("record", "correct") else f"{spoken} a titration of{subject}"
        )
    return f"{spoken} {noun.replace('_', ' ')}{subject}"


def action_in_words(action: str) -> str:
    """ "run.approve" is read "run: approved"."""
    noun, _, verb = action.partition(".")
    return f"{noun.replace('_', ' ')}: {VERBS.get(verb, verb.replace('_', ' '))}"


def _details(change: AuditChange) -> list[str]:
    if change.operation == "INSERT" or not change.after:
        return []
    before: dict[str, Any] = change.before or {}
    return [
        f"{name.removesuffix('_id').replace('_', ' ')}: {_said(before.get(name))} → {_said(value)}"
        for name, value in change.after.items()
        if name not in SILENT
    ]


def _said(value: Any) -> str:
    if value in (None, ""):
        return "empty"
    text = str(value)
    return text if len(text) <= 60 else f"{text[:57]}..."
