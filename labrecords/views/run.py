"""Runs: list, start, the sheet, and the signed decisions."""

from __future__ import annotations

from collections.abc import Callable

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.reading import clean_cell
from labrecords.models import Investigation, MethodVersion, RecordState, Run, Sample
from labrecords.queries.run import runs, runs_found
from labrecords.services import run as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.sheet import means_context, refused_sheet, sheet_context, typed_credentials
from labrecords.views.start import run_choices, run_form


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All runs, found by number, sample, batch, lot or method, and by state."""
    found = runs_found(q=request.GET.get("q", ""), state=request.GET.get("state", ""))
    page = Paginator(found, 50).get_page(request.GET.get("page"))
    context = {"page_obj": page, "q": request.GET.get("q", ""), "state": request.GET.get("state", "")}
    return render(request, "run/list.html", context | {"states": RecordState.values})


@for_roles("analyst")
@require_http_methods(["GET", "POST"])
def start(request: HttpRequest, sample_number: str, version_id: int) -> HttpResponse:
    """Choose what a run rests on, and reserve its number."""
    sample = get_object_or_404(
        Sample.objects.select_related("batch__specification", "control_sample"), number=sample_number
    )
    version = get_object_or_404(
        MethodVersion.objects.select_related("method", "titrant", "excess_titrant"), pk=version_id
    )
    retest_for = Investigation.objects.filter(number=request.GET.get("retest_for", "")).first()
    form, reasons = run_form(version, data=request.POST if request.method == "POST" else None), ()
    if request.method == "POST" and form.is_valid():
        try:
            run = service.start_run(
                sample, by=request.user, method_version=version, lot=form.chosen_lot("titrant lot"),
                instruments=form.chosen_instruments(), excess_lot=form.chosen_lot("excess lot"), retest_for=retest_for,
            )  # fmt: skip
            return redirect("run-sheet", run.number)
        except Refused as refusal:
            reasons = refusal.reasons
    context = {
        "sample": sample,
        "version": version,
        "form": form,
        "refused": reasons,
        "retest_for": retest_for,
    }
    context |= run_choices(version)
    return render(request, "run/start.html", context, status=400 if request.method == "POST" else 200)


@signed_in
@require_GET
def sheet(request: HttpRequest, number: str) -> HttpResponse:
    """The sheet of a run: readings, titres, result, uncertainty, signatures."""
    return render(request, "run/sheet.html", sheet_context(_run(number), by=request.user))


@signed_in
@require_GET
def result(request: HttpRequest, number: str) -> HttpResponse:
    """The part of the sheet that the worker's calculation fills; asked for again while it is waited for."""
    context = sheet_context(_run(number), by=request.user) | {"is_fragment": True}
    return render(request, "sheet/_means.html", context)


@for_roles("analyst")
@require_POST
def preview(request: HttpRequest, number: str) -> HttpResponse:
    """What the cells as typed would mean; nothing is stored."""
    context = means_context(_run(number), request.POST, by=request.user)
    return render(request, "sheet/_means.html", context)


@for_roles("analyst")
@require_POST
def correct(request: HttpRequest, number: str) -> HttpResponse:
    """Keep the remarks and the loss on drying of an open run."""
    run = _run(number)
    try:
        loss = clean_cell("loss", request.POST.get("loss_percent", ""))
        service.correct_run(run, by=request.user, remarks=request.POST.get("remarks", ""), loss_percent=loss)
    except Refused as refusal:
        return refused_sheet(request, _run(number), refusal)
    return redirect("run-sheet", run.number)


@for_roles("analyst")
@require_POST
def submit(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "performed by"."""
    return _signed(request, number, "is submitted. It waits for a second person.", service.submit_run)


@for_roles("supervisor")
@require_POST
def approve(request: HttpRequest, number: str) -> HttpResponse:
    """Sign "reviewed by"."""
    return _signed(request, number, "is approved.", service.approve_run)


@for_roles("supervisor")
@require_POST
def give_back(request: HttpRequest, number: str) -> HttpResponse:
    """Return a run to its analyst."""
    return _signed(request, number, "is returned to its analyst.", service.return_run, with_reason=True)


@for_roles("analyst", "supervisor")
@require_POST
def void(request: HttpRequest, number: str) -> HttpResponse:
    """Void a run; it stays visible."""
    return _signed(request, number, "is void and stays visible.", service.void_run, with_reason=True)


def _signed(
    request: HttpRequest, number: str, done: str, change: Callable[..., Run], *, with_reason: bool = False
) -> HttpResponse:
    run = _run(number)
    try:
        credentials, reason = typed_credentials(request.POST)
        change(run, by=request.user, credentials=credentials, **({"reason": reason} if with_reason else {}))
    except Refused as refusal:
        return refused_sheet(request, _run(number), refusal)
    messages.info(request, f"{run.number} {done}")
    return redirect("run-sheet", run.number)


def _run(number: str) -> Run:
    return get_object_or_404(runs(), number=number)
