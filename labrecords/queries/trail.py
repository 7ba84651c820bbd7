"""Reading the trail as a list: filtered, newest first."""

from __future__ import annotations

from datetime import date
from typing import Any

from django.db.models import Count, Q, QuerySet

from labrecords.models import AuditCheckpoint, AuditEvent, Meaning, Signature

# What a reviewer of the trail looks at one by one: readings changed, records taken back, sign-ins that failed.
TELLING = ("correct", "exclude", "void", "return", "withdraw", "reject", "supersede", "fail_sign_in")


def events_found(
    *, q: str = "", person: str = "", action: str = "", since: date | None = None, until: date | None = None
) -> QuerySet[AuditEvent]:
    """Events by subject or reason, person, kind of action and day, newest first."""
    found = AuditEvent.objects.select_related("actor").prefetch_related("changes").order_by("-id")
    if q:
        found = found.filter(Q(subject__icontains=q) | Q(reason__icontains=q))
    if person:
        found = found.filter(actor__username=person)
    if action:
        found = found.filter(action__startswith=f"{action}.")
    if since:
        found = found.filter(occurred_at__date__gte=since)
    if until:
        found = found.filter(occurred_at__date__lte=until)
    return found


def kinds_of_events() -> list[str]:
    """The nouns of all actions on the trail."""
    actions = AuditEvent.objects.order_by("action").values_list("action", flat=True).distinct()
    return sorted({action.partition(".")[0] for action in actions})


def last_review() -> Signature | None:
    """The signature under the newest review of the trail."""
    return Signature.objects.filter(noun="trail", meaning=Meaning.TRAIL_REVIEWED).order_by("record_id", "id").last()


def reviewed_to() -> int:
    """How many places of the sealed trail were reviewed."""
    last = last_review()
    return last.record_id if last else 0


def checkpoint_to_review() -> AuditCheckpoint | None:
    """The newest checkpoint that reaches beyond the last review."""
    return AuditCheckpoint.objects.filter(tree_size__gt=reviewed_to()).order_by("tree_size").last()


def events_between(start: int, stop: int) -> QuerySet[AuditEvent]:
    """The events at these places of the sealed trail, oldest first."""
    return AuditEvent.objects.filter(leaf__position__gte=start, leaf__position__lt=stop).order_by("id")


def telling_among(events: QuerySet[AuditEvent]) -> QuerySet[AuditEvent]:
    """The events that a reviewer looks at one by one."""
    telling = Q()
    for verb in TELLING:
        telling |= Q(action__endswith=f".{verb}")
    return events.filter(telling).prefetch_related("changes")


def counts_of(events: QuerySet[AuditEvent]) -> dict[str, int]:
    """How many events of each action there are."""
    counted = events.order_by("action").values("action").annotate(count=Count("pk"))
    return {row["action"]: row["count"] for row in counted}


def review_as_signed(checkpoint: AuditCheckpoint, *, start: int, remarks: str) -> dict[str, Any]:
    """The content of a review that a signature covers: the sealed trail by its root, and what it holds."""
    return {
        "noun": "trail",
        "first_place": start,
        "places": checkpoint.tree_size - start,
        "root_at_end": bytes(checkpoint.root_hash).hex(),
        "events": counts_of(events_between(start, checkpoint.tree_size)),
        "remarks": remarks,
    }
