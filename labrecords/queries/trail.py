"""Reading the trail as a list: filtered, newest first."""

from __future__ import annotations

from datetime import date

from django.db.models import Q, QuerySet

from labrecords.models import AuditEvent


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
        found = found.filter(action__startswith=action)
    if since:
        found = found.filter(occurred_at__date__gte=since)
    if until:
        found = found.filter(occurred_at__date__lte=until)
    return found
