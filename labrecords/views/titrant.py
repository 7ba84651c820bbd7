"""Titrants: kinds of solution."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.forms.register import initial_of
from labrecords.forms.titrant import SupersedingTitrantForm, TitrantForm
from labrecords.models import Titrant
from labrecords.queries.bench import lots_of_titrant
from labrecords.queries.history import sentences_about
from labrecords.queries.register import titrant_lots, titrants
from labrecords.rules.cautions import cautions_for
from labrecords.services import titrant as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import page_of, recorded, typed


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All titrants."""
    q = request.GET.get("q", "")
    return render(request, "titrant/list.html", {"page_obj": page_of(request, titrants(q=q)), "q": q})


@signed_in
@require_GET
def detail(request: HttpRequest, code: str) -> HttpResponse:
    """One titrant with its rule, its lots and its cautions."""
    titrant = get_object_or_404(titrants(), code=code)
    context = {
        "titrant": titrant,
        "in_force": lots_of_titrant(titrant.pk, at=timezone.now()),
        "lots": titrant_lots(day=timezone.localdate()).filter(titrant=titrant)[:50],
        "cautions": cautions_for(titrant.substance.hazards),
        "history": sentences_about(titrant),
    }
    return render(request, "titrant/detail.html", context)


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a titrant."""
    return recorded(
        request, TitrantForm(typed(request)), template="register/record.html",
        change=service.record_titrant,
        to=_page, context={"title": "Record a titrant", "back": "titrant-list"},
    )  # fmt: skip


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def supersede(request: HttpRequest, code: str) -> HttpResponse:
    """Record the entry that takes a titrant's place."""
    titrant = get_object_or_404(Titrant, code=code)
    form = SupersedingTitrantForm(typed(request), initial=initial_of(titrant, TitrantForm))

    def change(**clean: Any) -> Titrant:
        return service.supersede_titrant(titrant, **clean)

    context = {"title": f"Supersede {code}", "back": "titrant-list", "button": "Supersede"}
    return recorded(request, form, template="register/record.html", change=change, to=_page, context=context)


def _page(titrant: Titrant) -> tuple[str, ...]:
    return "titrant-detail", titrant.code
