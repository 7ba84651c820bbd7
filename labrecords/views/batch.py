"""Batches: list, page, and the signed decision."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.figures.limit_bar import limit_bar
from labrecords.forms.batch import BatchForm
from labrecords.models import Batch, BatchState, User
from labrecords.queries.batch import RequiredTest, batches, batches_found, required_tests
from labrecords.queries.history import sentences_about
from labrecords.queries.result import comparable_numbers
from labrecords.queries.signature import signatures_of
from labrecords.rules.batch import (
    is_ready,
    objections_to_holding,
    objections_to_rejecting,
    objections_to_releasing,
)
from labrecords.services import batch as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All batches, found by number or product, and by state."""
    q, state = request.GET.get("q", ""), request.GET.get("state", "")
    page = Paginator(batches_found(q=q, state=state), 50).get_page(request.GET.get("page"))
    return render(request, "batch/list.html", {"page_obj": page, "q": q, "state": state, "states": BatchState.values})


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """Each required test against its limits, what stands in the way, and the decision."""
    return render(request, "batch/detail.html", _context(number, by=request.user))


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a batch."""
    return recorded(
        request, BatchForm(request.POST or None), template="register/record.html", change=service.record_batch,
        to=lambda batch: ("batch-detail", batch.number), context={"title": "Record a batch", "back": "batch-list"},
    )  # fmt: skip


@for_roles("supervisor")
@require_POST
def release(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "released by"."""
    return _decided(request, number, service.release_batch, "is released.")


@for_roles("supervisor")
@require_POST
def reject(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "rejected by"."""
    return _decided(request, number, service.reject_batch, "is rejected.")


@for_roles("supervisor")
@require_POST
def hold(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "held by"."""
    return _decided(request, number, service.hold_batch, "is on hold.")


def _decided(request: HttpRequest, number: str, change: Callable[..., Batch], done: str) -> HttpResponse:
    batch = get_object_or_404(Batch, number=number)
    try:
        credentials, reason = typed_credentials(request.POST)
        change(batch, by=request.user, credentials=credentials, reason=reason)
    except Refused as refusal:
        context = _context(number, by=request.user) | {"refused": refusal.reasons}
        return render(request, "batch/detail.html", context, status=409)
    messages.info(request, f"Batch {number} {done}")
    return redirect("batch-detail", number)


def _context(number: str, *, by: User) -> dict[str, Any]:
    batch = get_object_or_404(batches(), number=number)
    tests = required_tests(batch)
    return {
        "batch": batch,
        "tests": [_shown(test) for test in tests],
        "ready": is_ready(tests) and batch.state == BatchState.TESTING,
        "samples": batch.samples.select_related("recorded_by"),
        "release_objections": objections_to_releasing(batch, by=by),
        "reject_objections": objections_to_rejecting(batch, by=by),
        "hold_objections": objections_to_holding(batch, by=by),
        "signatures": signatures_of("batch", batch.pk),
        "history": sentences_about(batch),
    }


def _shown(test: RequiredTest) -> dict[str, Any]:
    outputs = test.run.calculation.outputs if test.run and test.run.calculation else None
    bar = limit_bar(outputs, places=test.limit.places) if outputs and outputs.get("verdict") else ""
    return {"test": test, "bar": bar, "outputs": outputs, "comparable": comparable_numbers(test.runs)}
