"""The trail: events in sentences, the integrity check, the review, the export."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse, StreamingHttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.documents.table import csv_lines
from labrecords.errors import Refused
from labrecords.forms.audit import TrailForm
from labrecords.models import AuditChange, AuditCheckpoint, AuditEvent
from labrecords.queries.find import exact_match
from labrecords.queries.history import action_in_words, line, sentence_of
from labrecords.queries.integrity import checks, simulated_events
from labrecords.queries.trail import (
    checkpoint_to_review,
    counts_of,
    events_between,
    events_found,
    last_review,
    reviewed_to,
    telling_among,
)
from labrecords.services.trail import review_trail
from labrecords.views.access import for_roles
from labrecords.views.recording import page_of
from labrecords.views.sheet import typed_credentials

READERS = ("auditor", "supervisor", "administrator")
HEADER = ("event", "time (UTC)", "simulated clock", "person", "action", "subject", "reason", "changes")
MOST_TELLING = 200


@for_roles(*READERS)
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """Events, newest first, found by person, kind, subject and day."""
    form = TrailForm(request.GET)
    page_obj = page_of(request, events_found(**form.filters()))
    context = {
        "page_obj": page_obj,
        "lines": [line(event) for event in page_obj],
        "form": form,
        "last_review": last_review(),
        "typed": request.GET,
    }
    return render(request, "audit/list.html", context)


@for_roles(*READERS)
@require_GET
def detail(request: HttpRequest, pk: int) -> HttpResponse:
    """One event with every row before and after, and its place in the sealed tree."""
    events = AuditEvent.objects.select_related("actor", "leaf").prefetch_related("changes")
    event = get_object_or_404(events, pk=pk)
    leaf = getattr(event, "leaf", None)
    context = {
        "event": event,
        "sentence": sentence_of(event),
        "changes": [(change, _columns(change)) for change in event.changes.all()],
        "leaf": leaf,
        "leaf_hash": bytes(leaf.leaf_hash).hex() if leaf else "",
        "about": exact_match(event.subject) if event.subject else None,
    }
    return render(request, "audit/detail.html", context)


@for_roles("auditor", "administrator")
@require_http_methods(["GET", "POST"])
def integrity(request: HttpRequest) -> HttpResponse:
    """Run every check of the records and their trail."""
    named = checks()
    results = []
    if request.method == "POST":
        results = [{"sentence": name, "findings": [*check()]} for name, check in named.items()]
    context = {
        "results": results,
        "findings": sum(len(item["findings"]) for item in results),
        "simulated": simulated_events(),
        "checkpoint": AuditCheckpoint.objects.last(),
        "names": [*named],
    }
    return render(request, "audit/integrity.html", context)


@for_roles("auditor")
@require_http_methods(["GET", "POST"])
def review(request: HttpRequest) -> HttpResponse:
    """Look at what was sealed since the last review, and sign that it was looked at."""
    refused: tuple[str, ...] = ()
    if request.method == "POST":
        try:
            credentials, remarks = typed_credentials(request.POST)
            size = _size(request.POST.get("tree_size", ""))
            review_trail(by=request.user, credentials=credentials, tree_size=size, remarks=remarks)
            return redirect("audit-list")
        except Refused as refusal:
            refused = refusal.reasons
    context = _to_review() | {"refused": refused, "reason": request.POST.get("reason", "")}
    return render(request, "audit/review.html", context, status=409 if refused else 200)


@for_roles(*READERS)
@require_GET
def export(request: HttpRequest) -> StreamingHttpResponse:
    """The events found, as CSV that no spreadsheet runs."""
    events = events_found(**TrailForm(request.GET).filters())
    rows = (_row(event) for event in events.iterator(chunk_size=2000))
    answer = StreamingHttpResponse(csv_lines(HEADER, rows), content_type="text/csv; charset=utf-8")
    answer["Content-Disposition"] = 'attachment; filename="trail.csv"'
    return answer


def _row(event: AuditEvent) -> tuple[Any, ...]:
    entry = line(event)
    return (
        event.pk,
        event.occurred_at.isoformat(),
        "yes" if event.is_simulated else "no",
        event.actor_name,
        event.action,
        event.subject,
        event.reason,
        "; ".join(entry.details),
    )


def _columns(change: AuditChange) -> Any:
    """Each column of a change as it was before and after."""
    before, after = change.before or {}, change.after or {}
    return [(name, before.get(name), after.get(name)) for name in {**before, **after}]


def _to_review() -> dict[str, Any]:
    checkpoint, start = checkpoint_to_review(), reviewed_to()
    if checkpoint is None:
        return {"checkpoint": None, "last_review": last_review()}
    events = events_between(start, checkpoint.tree_size)
    return {
        "checkpoint": checkpoint,
        "last_review": last_review(),
        "start": start,
        "count": checkpoint.tree_size - start,
        "counts": [
            {"kind": action.partition(".")[0], "words": action_in_words(action), "count": count}
            for action, count in counts_of(events).items()
        ],
        "telling": [line(event) for event in telling_among(events)[:MOST_TELLING]],
        "telling_count": telling_among(events).count(),
    }


def _size(text: str) -> int:
    return int(text) if text.isascii() and text.isdigit() and len(text) < 19 else 0
