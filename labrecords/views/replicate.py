"""Cells of a sheet: kept when they are left, corrected with a reason, excluded with a cause, or read from a file."""

from __future__ import annotations

from decimal import Decimal

from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils import timezone
from django.views.decorators.http import require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.reading import clean_cell, clean_observation
from labrecords.models import ExclusionCause, Replicate, Run, Standardization
from labrecords.queries.replicate import replicates_of
from labrecords.rules.replicate import FIELDS, needs_a_reason, remarks_on_reading
from labrecords.services import replicate as service
from labrecords.views.access import for_roles
from labrecords.views.sheet import refused_sheet


@for_roles("analyst")
@require_POST
def record(request: HttpRequest, pk: int, field: str) -> HttpResponse:
    """Keep one cell the moment it is left; a change of a kept value asks for its reason first (428)."""
    replicate, reason = _replicate(pk), request.POST.get("reason", "")
    try:
        value = _value(field, request.POST.get(f"{field}-{pk}", ""))
        if needs_a_reason(replicate, field=field, value=value) and not reason.strip():
            return render(request, "components/_reason.html", {"id": f"{field}-{pk}"}, status=428)
        service.record_readings(replicate, by=request.user, values={field: value}, reason=reason)
    except Refused as refusal:
        return JsonResponse({"reasons": list(refusal.reasons)}, status=409)
    remarks = remarks_on_reading(replicate, record=replicate.owner, field=field, value=value)
    return JsonResponse({"saved": timezone.localtime().strftime("%H:%M:%S"), "remark": " ".join(remarks)})


@for_roles("analyst")
@require_POST
def record_all(request: HttpRequest, noun: str, number: str) -> HttpResponse:
    """Keep every changed cell of a sheet at once: the way without JavaScript."""
    owner = _owner(noun, number)
    reasons: list[str] = []
    for item in replicates_of(owner):
        reasons += _kept(request, item)
    if reasons:
        return refused_sheet(request, _owner(noun, number), Refused(reasons))
    return redirect(f"{noun}-sheet", number)


@for_roles("analyst")
@require_POST
def add(request: HttpRequest, noun: str, number: str) -> HttpResponse:
    """Add an empty titration or blank."""
    owner = _owner(noun, number)
    try:
        service.add_replicate(owner, by=request.user, kind=request.POST.get("kind", "sample"))
    except Refused as refusal:
        return refused_sheet(request, owner, refusal)
    return redirect(f"{noun}-sheet", number)


@for_roles("analyst")
@require_http_methods(["GET", "POST"])
def exclude(request: HttpRequest, pk: int) -> HttpResponse:
    """Take a titration out of the calculation for an assignable cause; it stays on the sheet."""
    replicate, reasons = _replicate(pk), ()
    owner = replicate.owner
    cause, sentence = request.POST.get("cause", ""), request.POST.get("sentence", "")
    if request.method == "POST":
        try:
            service.exclude_replicate(replicate, by=request.user, cause=cause, sentence=sentence)
            return redirect(f"{owner._meta.model_name}-sheet", owner.number)
        except Refused as refusal:
            reasons = refusal.reasons
    context = {
        "replicate": replicate, "owner": owner, "causes": ExclusionCause.choices, "cause": cause,
        "sentence": sentence, "refused": reasons,
    }  # fmt: skip
    return render(request, "replicate/exclude.html", context, status=409 if reasons else 200)


def _kept(request: HttpRequest, item: Replicate) -> list[str]:
    cells = {field: request.POST.get(f"{field}-{item.pk}") for field in FIELDS}
    try:
        values = {field: _value(field, text) for field, text in cells.items() if text is not None}
        service.record_readings(item, by=request.user, values=values, reason=request.POST.get(f"reason-{item.pk}", ""))
    except Refused as refusal:
        return [f"{str(item).capitalize()}: {reason}" for reason in refusal.reasons]
    return []


def _value(field: str, text: str) -> Decimal | str | None:
    return clean_observation(text) if field == "observation" else clean_cell(field, text)


def _replicate(pk: int) -> Replicate:
    return get_object_or_404(Replicate.objects.select_related("run", "standardization", "curve"), pk=pk)


def _owner(noun: str, number: str) -> Run | Standardization:
    return get_object_or_404(Run if noun == "run" else Standardization, number=number)
