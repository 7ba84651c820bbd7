"""Titrant lots: bottles and tanks."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.documents.label import label_code
from labrecords.errors import Refused
from labrecords.figures.control_chart import control_chart_figure
from labrecords.figures.fitness_line import fitness_line
from labrecords.forms.register import LotForm
from labrecords.models import LotState, Standardization, Titrant, TitrantLot
from labrecords.queries.bench import lots_of_titrant
from labrecords.queries.history import sentences_about
from labrecords.queries.register import titrant_lots
from labrecords.queries.standardization import attempts_on_lot, standardizations
from labrecords.queries.titrant_lot import volume_balance
from labrecords.rules.cautions import cautions_for
from labrecords.services import titrant as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All lots, newest first."""
    q, state = request.GET.get("q", ""), request.GET.get("state", "")
    page = Paginator(titrant_lots(q=q, state=state), 50).get_page(request.GET.get("page"))
    return render(request, "titrant_lot/list.html", {"page_obj": page, "q": q, "state": state, "states": LotState.values})


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """One lot: its concentration and the time it still holds, its standardizations, its volume."""
    return render(request, "titrant_lot/detail.html", _context(number))


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest, code: str) -> HttpResponse:
    """Record a fresh lot of a titrant."""
    titrant = get_object_or_404(Titrant, code=code)

    def change(**clean: Any) -> TitrantLot:
        return service.record_lot(titrant, **clean)

    form = LotForm(request.POST or None, initial={"prepared_on": timezone.localdate(), "prepared_by": request.user.pk})
    context = {"title": f"Record a lot of {titrant.name}", "back": "titrant_lot-list"}
    to = lambda lot: ("titrant_lot-detail", lot.number)  # noqa: E731
    return recorded(request, form, template="register/record.html", change=change, to=to, context=context)


@signed_in
@require_GET
def label(request: HttpRequest, number: str) -> HttpResponse:
    """The label of the bottle, for printing."""
    context = _context(number)
    return render(request, "titrant_lot/label.html", context | {"code": label_code(number)})


@for_roles("supervisor")
@require_POST
def withdraw(request: HttpRequest, number: str) -> HttpResponse:
    """Take a lot out of use."""
    lot = get_object_or_404(TitrantLot, number=number)
    try:
        credentials, reason = typed_credentials(request.POST)
        doubtful = request.POST.get("is_doubtful") == "1"
        service.withdraw_lot(lot, by=request.user, credentials=credentials, reason=reason, is_doubtful=doubtful)
    except Refused as refusal:
        return render(request, "titrant_lot/detail.html", _context(number) | {"refused": refusal.reasons}, status=409)
    return redirect("titrant_lot-detail", number)


def _context(number: str) -> dict[str, Any]:
    lot = get_object_or_404(TitrantLot.objects.select_related("titrant__substance", "prepared_by"), number=number)
    held = next((item for item in lots_of_titrant(lot.titrant_id, at=timezone.now()) if item.lot.pk == lot.pk), None)
    records = standardizations().filter(lot=lot)
    return {
        "lot": lot,
        "held": held,
        "fitness": fitness_line(held.fraction_used, label=f"{held.days_left} days left") if held else "",
        "standardizations": records,
        "drift": _drift([record for record in records if record.state == "approved"][::-1]),
        "attempts": attempts_on_lot(lot),
        "balance": volume_balance(lot),
        "cautions": cautions_for(lot.titrant.substance.hazards),
        "history": sentences_about(lot),
    }


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
    limits = {"centre": float(titrant.nominal), "lower": float(titrant.window_low), "upper": float(titrant.window_high),
              "warn_lower": None, "warn_upper": None, "version": "window"}  # fmt: skip
    return control_chart_figure(points, limits=limits, title="Concentration, mol/L", digits=5)
