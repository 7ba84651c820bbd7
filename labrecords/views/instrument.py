"""Instruments and their calibrations."""

from __future__ import annotations

from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.figures.fitness_line import fitness_line
from labrecords.forms.instrument import CalibrationForm, InstrumentForm, SupersedingInstrumentForm
from labrecords.forms.register import initial_of
from labrecords.models import Instrument, InstrumentCalibration, InstrumentKind
from labrecords.queries.history import sentences_about
from labrecords.queries.instrument import calibration_at, calibrations_of, records_using
from labrecords.queries.register import instruments
from labrecords.services import instrument as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import page_of, recorded, typed
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All instruments with the day their calibration ends."""
    q, kind, today = request.GET.get("q", ""), request.GET.get("kind", ""), timezone.localdate()
    found = page_of(request, instruments(day=today, q=q, kind=kind))
    context = {"page_obj": found, "q": q, "kind": kind, "kinds": InstrumentKind.choices, "today": today}
    return render(request, "instrument/list.html", context)


@signed_in
@require_GET
def detail(request: HttpRequest, identifier: str) -> HttpResponse:
    """One instrument with its calibrations."""
    return _shown(request, identifier)


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record an instrument."""
    return recorded(
        request, InstrumentForm(typed(request)), template="register/record.html",
        change=service.record_instrument, to=_page, context={"title": "Record an instrument",
        "back": "instrument-list"},
    )  # fmt: skip


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def supersede(request: HttpRequest, identifier: str) -> HttpResponse:
    """Record the entry that takes an instrument's place."""
    instrument = get_object_or_404(Instrument, identifier=identifier)
    form = SupersedingInstrumentForm(typed(request), initial=initial_of(instrument, InstrumentForm))

    def change(**clean: Any) -> Instrument:
        return service.supersede_instrument(instrument, **clean)

    context = {"title": f"Supersede {identifier}", "back": "instrument-list", "button": "Supersede"}
    return recorded(request, form, template="register/record.html", change=change, to=_page, context=context)


@for_roles("administrator", "supervisor", "analyst")
@require_http_methods(["GET", "POST"])
def calibrate(request: HttpRequest, identifier: str) -> HttpResponse:
    """Record a calibration."""
    instrument = get_object_or_404(Instrument, identifier=identifier)

    def change(**clean: Any) -> Instrument:
        return service.record_calibration(instrument, **clean).instrument

    form = CalibrationForm(typed(request), request.FILES or None)
    context = {"title": f"Calibration of {identifier}", "back": "instrument-list", "has_file": True}
    return recorded(request, form, template="register/record.html", change=change, to=_page, context=context)


@for_roles("administrator", "supervisor")
@require_POST
def withdraw(request: HttpRequest, identifier: str) -> HttpResponse:
    """Take an instrument out of use."""
    instrument = get_object_or_404(Instrument, identifier=identifier)
    try:
        service.withdraw_instrument(instrument, by=request.user, reason=request.POST.get("reason", ""))
    except Refused as refusal:
        return _shown(request, identifier, refused=refusal.reasons)
    messages.info(request, f"{identifier} is withdrawn.")
    return redirect("instrument-detail", identifier)


@for_roles("supervisor")
@require_POST
def withdraw_calibration(request: HttpRequest, pk: int) -> HttpResponse:
    """Withdraw a calibration; what was measured under it is put in question."""
    calibration = get_object_or_404(InstrumentCalibration.objects.select_related("instrument"), pk=pk)
    identifier = calibration.instrument.identifier
    try:
        credentials, reason = typed_credentials(request.POST)
        service.withdraw_calibration(calibration, by=request.user, credentials=credentials, reason=reason)
    except Refused as refusal:
        return _shown(request, identifier, refused=refusal.reasons)
    messages.info(request, f"The calibration of {identifier} is withdrawn.")
    return redirect("instrument-detail", identifier)


def _page(instrument: Instrument) -> tuple[str, ...]:
    return "instrument-detail", instrument.identifier


def _shown(request: HttpRequest, identifier: str, *, refused: tuple[str, ...] = ()) -> HttpResponse:
    instrument = get_object_or_404(Instrument.objects.select_related("superseded_by"), identifier=identifier)
    calibrations = calibrations_of(instrument)
    context = {
        "instrument": instrument,
        "calibrations": calibrations,
        "uses": records_using(instrument),
        "history": sentences_about(instrument, parts=calibrations),
        "refused": refused,
    } | _fitness(instrument)
    return render(request, "instrument/detail.html", context, status=409 if refused else 200)


def _fitness(instrument: Instrument) -> dict[str, Any]:
    holds, today = calibration_at(instrument, at=timezone.now()), timezone.localdate()
    if holds is None:
        return {"holds": None}
    whole, left = (holds.due_on - holds.calibrated_on).days, (holds.due_on - today).days
    words = f"{left} day{'' if left == 1 else 's'} left"
    return {"holds": holds, "left": words, "fitness": fitness_line(1 - left / whole, label=words)}
