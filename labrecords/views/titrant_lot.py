"""Titrant lots: bottles and tanks."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.documents.label import label_code
from labrecords.errors import Refused
from labrecords.figures.control_chart import control_chart_figure
from labrecords.figures.fitness_line import fitness_line
from labrecords.forms.titrant import LotForm
from labrecords.models import LotState, Standardization, Titrant, TitrantLot
from labrecords.queries.bench import LotInUse, lots_of_titrant
from labrecords.queries.history import sentences_about
from labrecords.queries.register import titrant_lots
from labrecords.queries.result import comparable_numbers
from labrecords.queries.standardization import attempts_on_lot, standardizations
from labrecords.queries.titrant_lot import runs_on_lot, volume_balance
from labrecords.rules.cautions import cautions_for
from labrecords.services import titrant as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import page_of, recorded, typed
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All lots, newest first."""
    q, state = request.GET.get("q", ""), request.GET.get("state", "")
    found = page_of(request, titrant_lots(day=timezone.localdate(), q=q, state=state))
    context = {"page_obj": found, "q": q, "state": state, "states": LotState.values}
    return render(request, "titrant_lot/list.html", context)


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """One lot: its concentration and the time it still holds, its standardizations, its volume."""
    return _shown(request, number)


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest, code: str) -> HttpResponse:
    """Record a fresh lot of a titrant."""
    titrant = get_object_or_404(Titrant, code=code)

    def change(**clean: Any) -> TitrantLot:
        return service.record_lot(titrant, **clean)

    form = LotForm(typed(request), initial={"prepared_on": timezone.localdate(), "prepared_by": request.user.pk})
    form.fields["expires_on"].help_text = f"left empty: {titrant.shelf_life_days} days after it was prepared"
    context = {"title": f"Record a lot of {titrant.name}", "back": "titrant_lot-list"}
    return recorded(
        request, form, template="register/record.html", change=change, context=context,
        to=lambda lot: ("titrant_lot-detail", lot.number),
    )  # fmt: skip


@signed_in
@require_GET
def label(request: HttpRequest, number: str) -> HttpResponse:
    """The label of the bottle, for printing."""
    lot = _lot(number)
    context = {"lot": lot, "held": _held(lot), "code": label_code(number)}
    return render(
        request, "titrant_lot/label.html", context | {"cautions": cautions_for(lot.titrant.substance.hazards)}
    )


@for_roles("analyst", "supervisor")
@require_POST
def expire(request: HttpRequest, number: str) -> HttpResponse:
    """Mark a lot whose shelf life is over."""
    try:
        service.expire_lot(_lot(number), by=request.user)
    except Refused as refusal:
        return _shown(request, number, refused=refusal.reasons)
    messages.info(request, f"Lot {number} is marked as expired.")
    return redirect("titrant_lot-detail", number)


@for_roles("supervisor")
@require_POST
def withdraw(request: HttpRequest, number: str) -> HttpResponse:
    """Take a lot out of use."""
    lot, doubtful = _lot(number), request.POST.get("is_doubtful") == "1"
    try:
        credentials, reason = typed_credentials(request.POST)
        service.withdraw_lot(lot, by=request.user, credentials=credentials, reason=reason, is_doubtful=doubtful)
    except Refused as refusal:
        return _shown(request, number, refused=refusal.reasons)
    messages.info(request, f"Lot {number} is withdrawn.")
    return redirect("titrant_lot-detail", number)


def _lot(number: str) -> TitrantLot:
    return get_object_or_404(titrant_lots(day=timezone.localdate()), number=number)


def _held(lot: TitrantLot) -> LotInUse | None:
    found = lots_of_titrant(lot.titrant_id, at=timezone.now())
    return next((item for item in found if item.lot.pk == lot.pk), None)


def _shown(request: HttpRequest, number: str, *, refused: tuple[str, ...] = ()) -> HttpResponse:
    lot = _lot(number)
    held, records = _held(lot), standardizations().filter(lot=lot)
    context = {
        "lot": lot,
        "held": held,
        "fitness": fitness_line(held.fraction_used, label=f"{held.days_left} days left") if held else "",
        "standardizations": records,
        "comparable": comparable_numbers(records),
        "drift": _drift([record for record in records if record.state == "approved"][::-1]),
        "attempts": attempts_on_lot(lot),
        "run_count": runs_on_lot(lot),
        "balance": volume_balance(lot),
        "cautions": cautions_for(lot.titrant.substance.hazards),
        "history": sentences_about(lot),
        "refused": refused,
    }
    return render(request, "titrant_lot/detail.html", context, status=409 if refused else 200)


def _drift(records: Sequence[Standardization]) -> Any:
    """The concentrations of one lot in order against the titrant's window, when there are at least two."""
    if len(records) < 2:
        return None
    titrant = records[0].lot.titrant
    points = [
        {
            "label": record.number, "value": record.calculation.value, "signals": [], "out": False,
            "url": reverse("standardization-sheet", args=[record.number]),
        }
        for record in records
    ]  # fmt: skip
    limits = {
        "centre": float(titrant.nominal), "lower": float(titrant.window_low),
        "upper": float(titrant.window_high),
        "warn_lower": None, "warn_upper": None, "version": "window",
    }  # fmt: skip
    return control_chart_figure(points, limits=limits, title="Concentration, mol/L", digits=5)
