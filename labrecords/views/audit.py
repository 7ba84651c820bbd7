"""The trail: events in sentences, the integrity check, the export."""

from __future__ import annotations

from datetime import date
from typing import Any

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse, StreamingHttpResponse
from django.shortcuts import get_object_or_404, render
from django.utils.dateparse import parse_date
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.documents.table import csv_lines
from labrecords.models import AuditCheckpoint, AuditEvent, User
from labrecords.queries.history import line, sentence_of
from labrecords.queries.integrity import checks, simulated_events
from labrecords.queries.trail import events_found
from labrecords.views.access import for_roles

READERS = ("auditor", "supervisor", "administrator")


@for_roles(*READERS)
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """Events, newest first, found by person, action, subject and day."""
    page = Paginator(events_found(**_filters(request)), 50).get_page(request.GET.get("page"))
    context = {
        "page_obj": page,
        "lines": [line(event) for event in page],
        "people": User.objects.all(),
        "typed": request.GET,
    }
    return render(request, "audit/list.html", context)


@for_roles(*READERS)
@require_GET
def detail(request: HttpRequest, pk: int) -> HttpResponse:
    """One event with every row before and after, and its place in the sealed tree."""
    event = get_object_or_404(AuditEvent.objects.select_related("actor", "leaf").prefetch_related("changes"), pk=pk)
    leaf = getattr(event, "leaf", None)
    context = {"event": event, "sentence": sentence_of(event), "leaf": leaf, "leaf_hash": bytes(leaf.leaf_hash).hex() if leaf else ""}
    return render(request, "audit/detail.html", context)


@for_roles("auditor", "administrator")
@require_http_methods(["GET", "POST"])
def integrity(request: HttpRequest) -> HttpResponse:
    """Run every check of the records and their trail."""
    results = [{"sentence": name, "findings": [*check()]} for name, check in checks().items()] if request.method == "POST" else []
    context = {
        "results": results,
        "findings": sum(len(item["findings"]) for item in results),
        "simulated": simulated_events(),
        "checkpoint": AuditCheckpoint.objects.last(),
        "names": [*checks()],
    }
    return render(request, "audit/integrity.html", context)


@for_roles(*READERS)
@require_GET
def export(request: HttpRequest) -> StreamingHttpResponse:
    """The events found, as CSV that no spreadsheet runs."""
    header = ["event", "time (UTC)", "simulated clock", "person", "action", "subject", "reason"]
    rows = (
        [event.pk, event.occurred_at.isoformat(), event.is_simulated, event.actor_name, event.action, event.subject, event.reason]
        for event in events_found(**_filters(request)).iterator(chunk_size=2000)
    )
    answer = StreamingHttpResponse(csv_lines(header, rows), content_type="text/csv; charset=utf-8")
    answer["Content-Disposition"] = 'attachment; filename="trail.csv"'
    return answer


def _filters(request: HttpRequest) -> dict[str, Any]:
    return {
        "q": request.GET.get("q", "").strip(),
        "person": request.GET.get("person", ""),
        "action": request.GET.get("action", "").strip(),
        "since": _day(request.GET.get("since", "")),
        "until": _day(request.GET.get("until", "")),
    }


def _day(text: str) -> date | None:
    try:
        return parse_date(text)
    except ValueError:
        return None
