"""Samples: list, page with the tests to run, recording."""

from __future__ import annotations

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.batch import SampleForm
from labrecords.models import Batch, Sample
from labrecords.queries.batch import samples, samples_found
from labrecords.queries.bench import tests_for_sample
from labrecords.queries.history import sentences_about
from labrecords.queries.run import runs
from labrecords.services import batch as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All samples."""
    q = request.GET.get("q", "")
    page = Paginator(samples_found(q=q), 50).get_page(request.GET.get("page"))
    return render(request, "sample/list.html", {"page_obj": page, "q": q})


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """One sample: the tests it is for, and its runs."""
    return render(request, "sample/detail.html", _context(number))


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record what was drawn."""
    batch = Batch.objects.filter(number=request.GET.get("batch", "")).first()
    start = {
        "drawn_at": timezone.localtime(),
        "batch": batch.pk if batch else None,
        "drawn_by": request.user.full_name,
    }
    return recorded(
        request, SampleForm(request.POST or None, initial=start), template="register/record.html",
        change=service.record_sample, to=lambda sample: ("sample-detail", sample.number),
        context={"title": "Receive a sample", "back": "sample-list"},
    )  # fmt: skip


@for_roles("analyst", "supervisor")
@require_POST
def void(request: HttpRequest, number: str) -> HttpResponse:
    """Mark a sample as not to be tested."""
    sample = get_object_or_404(Sample, number=number)
    try:
        service.void_sample(sample, by=request.user, reason=request.POST.get("reason", ""))
    except Refused as refusal:
        return render(request, "sample/detail.html", _context(number) | {"refused": refusal.reasons}, status=409)
    return redirect("sample-detail", number)


def _context(number: str) -> dict[str, object]:
    sample = get_object_or_404(samples(), number=number)
    return {
        "sample": sample,
        "tests": tests_for_sample(sample),
        "runs": runs().filter(sample=sample),
        "history": sentences_about(sample),
    }
