"""Standardizations: list, start, the sheet, and the signed decisions."""

from __future__ import annotations

from collections.abc import Callable

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.models import RecordState, Standardization, TitrantLot
from labrecords.queries.standardization import attempts_on_lot, standardizations, standardizations_found
from labrecords.rules.cautions import cautions_for
from labrecords.services import standardization as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.sheet import means_context, refused_sheet, sheet_context, typed_credentials
from labrecords.views.start import standardization_form


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All standardizations, found by number, lot, titrant or standard, and by state."""
    q, state = request.GET.get("q", ""), request.GET.get("state", "")
    page = Paginator(standardizations_found(q=q, state=state), 50).get_page(request.GET.get("page"))
    return render(
        request,
        "standardization/list.html",
        {"page_obj": page, "q": q, "state": state, "states": RecordState.values},
    )


@for_roles("analyst")
@require_http_methods(["GET", "POST"])
def start(request: HttpRequest, lot_number: str) -> HttpResponse:
    """Choose what a standardization rests on, and reserve its number."""
    lot = get_object_or_404(TitrantLot.objects.select_related("titrant"), number=lot_number)
    form, reasons = standardization_form(lot, data=request.POST if request.method == "POST" else None), ()
    if request.method == "POST" and form.is_valid():
        try:
            standardization = service.start_standardization(
                lot, by=request.user, instruments=form.chosen_instruments(),
                reference_standard=form.chosen_standard(), against=form.chosen_lot("lot of the other titrant"),
            )  # fmt: skip
            return redirect("standardization-sheet", standardization.number)
        except Refused as refusal:
            reasons = refusal.reasons
    context = {
        "lot": lot,
        "form": form,
        "refused": reasons,
        "attempts": attempts_on_lot(lot),
        "cautions": cautions_for(lot.titrant.substance.hazards),
    }
    return render(request, "standardization/start.html", context, status=400 if request.method == "POST" else 200)


@signed_in
@require_GET
def sheet(request: HttpRequest, number: str) -> HttpResponse:
    """The sheet of a standardization."""
    return render(request, "standardization/sheet.html", sheet_context(_standardization(number), by=request.user))


@signed_in
@require_GET
def result(request: HttpRequest, number: str) -> HttpResponse:
    """The part of the sheet that the worker's calculation fills; asked for again while it is waited for."""
    context = sheet_context(_standardization(number), by=request.user) | {"is_fragment": True}
    return render(request, "sheet/_means.html", context)


@for_roles("analyst")
@require_POST
def preview(request: HttpRequest, number: str) -> HttpResponse:
    """What the cells as typed would mean; nothing is stored."""
    context = means_context(_standardization(number), request.POST, by=request.user)
    return render(request, "sheet/_means.html", context)


@for_roles("analyst")
@require_POST
def correct(request: HttpRequest, number: str) -> HttpResponse:
    """Keep the remarks of an open standardization."""
    record = _standardization(number)
    try:
        service.correct_standardization(record, by=request.user, remarks=request.POST.get("remarks", ""))
    except Refused as refusal:
        return refused_sheet(request, _standardization(number), refusal)
    return redirect("standardization-sheet", number)


@for_roles("analyst")
@require_POST
def submit(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "performed by"."""
    return _signed(request, number, "is submitted. It waits for a second person.", service.submit_standardization)


@for_roles("supervisor")
@require_POST
def approve(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "reviewed by": the concentration is in force."""
    return _signed(request, number, "is approved and in force.", service.approve_standardization)


@for_roles("supervisor")
@require_POST
def give_back(request: HttpRequest, number: str) -> HttpResponse:
    """Return a standardization to its analyst."""
    change = service.return_standardization
    return _signed(request, number, "is returned to its analyst.", change, with_reason=True)


@for_roles("analyst", "supervisor")
@require_POST
def void(request: HttpRequest, number: str) -> HttpResponse:
    """Void a standardization; what rests on it is put in question."""
    return _signed(request, number, "is void and stays visible.", service.void_standardization, with_reason=True)


def _signed(
    request: HttpRequest,
    number: str,
    done: str,
    change: Callable[..., Standardization],
    *,
    with_reason: bool = False,
) -> HttpResponse:
    record = _standardization(number)
    try:
        credentials, reason = typed_credentials(request.POST)
        change(record, by=request.user, credentials=credentials, **({"reason": reason} if with_reason else {}))
    except Refused as refusal:
        return refused_sheet(request, _standardization(number), refusal)
    messages.info(request, f"{number} {done}")
    return redirect("standardization-sheet", number)


def _standardization(number: str) -> Standardization:
    return get_object_or_404(standardizations(), number=number)
