"""Control samples."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.batch import ControlSampleForm
from labrecords.models import ControlSample
from labrecords.queries.history import sentences_about
from labrecords.queries.result import comparable_numbers
from labrecords.queries.run import runs
from labrecords.services import control_sample as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All control samples."""
    return render(request, "control_sample/list.html", {"controls": ControlSample.objects.select_related("method")})


@signed_in
@require_GET
def detail(request: HttpRequest, code: str) -> HttpResponse:
    """One control sample with its newest runs."""
    return render(request, "control_sample/detail.html", _context(code))


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a control sample."""
    return recorded(
        request, ControlSampleForm(request.POST or None), template="register/record.html",
        change=service.record_control_sample, to=lambda control: ("control_sample-detail", control.code),
        context={"title": "Record a control sample", "back": "control_sample-list"},
    )  # fmt: skip


@for_roles("supervisor")
@require_POST
def withdraw(request: HttpRequest, code: str) -> HttpResponse:
    """Take a control sample out of use."""
    control = get_object_or_404(ControlSample, code=code)
    try:
        service.withdraw_control_sample(control, by=request.user, reason=request.POST.get("reason", ""))
    except Refused as refusal:
        return render(request, "control_sample/detail.html", _context(code) | {"refused": refusal.reasons}, status=409)
    return redirect("control_sample-detail", code)


def _context(code: str) -> dict[str, object]:
    control = get_object_or_404(ControlSample.objects.select_related("method"), code=code)
    newest = runs().filter(sample__control_sample=control)[:30]
    return {
        "control": control,
        "charts": control.charts.all(),
        "runs": newest,
        "comparable": comparable_numbers(newest[:6]),
        "history": sentences_about(control),
    }
