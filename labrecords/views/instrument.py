"""Instruments and their calibrations."""

from __future__ import annotations

from typing import Any

from django import forms
from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.figures.fitness_line import fitness_line
from labrecords.forms.register import CalibrationForm, InstrumentForm, initial_of
from labrecords.models import Instrument, InstrumentCalibration
from labrecords.queries.history import sentences_about
from labrecords.queries.instrument import calibration_at
from labrecords.queries.register import instruments
from labrecords.services import instrument as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All instruments with the day their calibration ends."""
    q, today = request.GET.get("q", ""), timezone.localdate()
    return render(request, "instrument/list.html", {"instruments": instruments(q=q), "q": q, "today": today})


@signed_in
@require_GET
def detail(request: HttpRequest, identifier: str) -> HttpResponse:
    """One instrument with its calibrations."""
    return render(request, "instrument/detail.html", _context(identifier))


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record an instrument."""
    return recorded(
        request, InstrumentForm(request.POST or None), template="register/record.html", change=service.record_instrument,
        to=lambda instrument: ("instrument-detail", instrument.identifier),
        context={"title": "Record an instrument", "back": "instrument-list"},
    )  # fmt: skip


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def supersede(request: HttpRequest, identifier: str) -> HttpResponse:
    """Record the entry that takes an instrument's place."""
    instrument = get_object_or_404(Instrument, identifier=identifier)
    form = InstrumentForm(request.POST or None, initial=initial_of(instrument, InstrumentForm))
    form.fields["reason"] = forms.CharField(max_length=500, label="Reason")

    def change(**clean: Any) -> Instrument:
        return service.supersede_instrument(instrument, **clean)

    context = {"title": f"Supersede {identifier}", "back": "instrument-list"}
    to = lambda new: ("instrument-detail", new.identifier)  # noqa: E731
    return recorded(request, form, template="register/record.html", change=change, to=to, context=context)


@for_roles("administrator", "supervisor", "analyst")
@require_http_methods(["GET", "POST"])
def calibrate(request: HttpRequest, identifier: str) -> HttpResponse:
    """Record a calibration."""
    instrument = get_object_or_404(Instrument, identifier=identifier)

    def change(**clean: Any) -> InstrumentCalibration:
        return service.record_calibration(instrument, **clean)

    form = CalibrationForm(request.POST or None, request.FILES or None)
    context = {"title": f"Calibration of {identifier}", "back": "instrument-list", "has_file": True}
    to = lambda _: ("instrument-detail", identifier)  # noqa: E731
    return recorded(request, form, template="register/record.html", change=change, to=to, context=context)


@for_roles("administrator", "supervisor")
@require_POST
def withdraw(request: HttpRequest, identifier: str) -> HttpResponse:
    """Take an instrument out of use."""
    instrument = get_object_or_404(Instrument, identifier=identifier)
    try:
        service.withdraw_instrument(instrument, by=request.user, reason=request.POST.get("reason", ""))
    except Refused as refusal:
        return render(request, "instrument/detail.html", _context(identifier) | {"refused": refusal.reasons}, status=409)
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
        return render(request, "instrument/detail.html", _context(identifier) | {"refused": refusal.reasons}, status=409)
    return redirect("instrument-detail", identifier)


def _context(identifier: str) -> dict[str, Any]:
    instrument = get_object_or_404(Instrument, identifier=identifier)
    holds, today, line = calibration_at(instrument, at=timezone.now()), timezone.localdate(), ""
    if holds is not None:
        whole = max((holds.due_on - holds.calibrated_on).days, 1)
        line = fitness_line((today - holds.calibrated_on).days / whole, label=f"{(holds.due_on - today).days} days left")
    return {
        "instrument": instrument,
        "holds": holds,
        "fitness": line,
        "days_left": (holds.due_on - today).days if holds else None,
        "calibrations": instrument.calibrations.select_related("certificate").order_by("-calibrated_on", "-id"),
        "history": sentences_about(instrument),
    }
