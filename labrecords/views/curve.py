"""Recorded curves: a file dropped on a titration, its columns confirmed, kept byte for byte."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.errors import Refused
from labrecords.figures.curve import curve_figure
from labrecords.forms.curve import CurveFileForm, MappingForm, packed
from labrecords.imports.curve import curve_fields, extract_curve
from labrecords.imports.encoding import refuse_size
from labrecords.imports.mapping import chosen_mapping, propose_mapping
from labrecords.imports.table import Table, read_table
from labrecords.models import Replicate
from labrecords.services.replicate import attach_curve
from labrecords.views.access import for_roles, signed_in


@for_roles("analyst")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest, pk: int) -> HttpResponse:
    """Drop the file, see which columns were taken and the curve they give, then keep it."""
    replicate, status = _replicate(pk), 200
    owner = replicate.owner
    back = reverse(f"{owner._meta.model_name}-sheet", args=[owner.number])
    context = {
        "form": CurveFileForm(),
        "replicate": replicate,
        "owner": owner,
        "back": back,
    }
    if request.method == "POST":
        try:
            if "packed" in request.POST:
                _keep(request, replicate)
                return redirect(back)
            context |= _proposed(request, replicate)
        except Refused as refusal:
            context, status = context | {"refused": refusal.reasons}, 409
    return render(request, "curve/record.html", context, status=status)


@signed_in
@require_GET
def detail(request: HttpRequest, pk: int) -> HttpResponse:
    """The file of a curve as it arrived."""
    replicate = get_object_or_404(Replicate.objects.select_related("curve__file"), pk=pk, curve__isnull=False)
    file = replicate.curve.file
    answer = HttpResponse(bytes(file.content), content_type="application/octet-stream")
    answer["Content-Disposition"] = f'attachment; filename="{_safe(file.name)}"'
    answer["X-Content-Type-Options"] = "nosniff"
    return answer


def _proposed(request: HttpRequest, replicate: Replicate) -> dict[str, Any]:
    form = CurveFileForm(request.POST, request.FILES)
    if not form.is_valid():
        raise Refused([str(error) for errors in form.errors.values() for error in errors])
    upload = form.cleaned_data["file"]
    refuse_size(upload.size, name=upload.name)
    content = upload.read()
    table = read_table(content, name=upload.name)
    mapping = propose_mapping(table, wanted=_wanted(replicate))
    return {
        "table": table,
        "mapping": mapping,
        "packed": packed(content),
        "name": upload.name,
        **_drawn(table, mapping),
    }


def _drawn(table: Table, mapping: Any) -> dict[str, Any]:
    curve = extract_curve(table, mapping=mapping)
    figure = curve_figure(None, volume=curve.volume, reading=curve.reading, quantity=curve.quantity)
    return {"curve": curve, "figure": figure, "first_rows": table.rows[:5]}


def _keep(request: HttpRequest, replicate: Replicate) -> None:
    form = MappingForm(request.POST)
    if not form.is_valid():
        raise Refused([f"{name}: {error}" for name, errors in form.errors.items() for error in errors])
    clean = form.cleaned_data
    content = clean["packed"]
    refuse_size(len(content), name=clean["name"])
    table = read_table(content, name=clean["name"])
    quantity = _wanted(replicate)
    mapping = chosen_mapping(table, volume=clean["volume"], reading=clean["reading"], quantity=quantity)
    curve = extract_curve(table, mapping=mapping)
    attach_curve(
        replicate, by=request.user, name=clean["name"], media_type="text/csv", content=content,
        curve=curve_fields(table, mapping=mapping, curve=curve),
    )  # fmt: skip


def _replicate(pk: int) -> Replicate:
    found = Replicate.objects.select_related("run__method_version__method", "standardization__lot__titrant", "curve")
    return get_object_or_404(found, pk=pk)


def _wanted(replicate: Replicate) -> str:
    return replicate.owner.rule.curve_quantity


def _safe(name: str) -> str:
    return "".join(letter if letter.isalnum() or letter in "._- " else "_" for letter in name)[:100] or "curve"
