"""Substances."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.views.decorators.http import require_GET, require_http_methods

from labrecords.forms.register import initial_of
from labrecords.forms.substance import SubstanceForm, SupersedingSubstanceForm
from labrecords.models import Substance
from labrecords.queries.history import sentences_about
from labrecords.queries.register import substances
from labrecords.rules.cautions import cautions_for
from labrecords.services import substance as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import page_of, recorded, typed


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All substances, found by name or formula."""
    q = request.GET.get("q", "")
    return render(request, "substance/list.html", {"page_obj": page_of(request, substances(q=q)), "q": q})


@signed_in
@require_GET
def detail(request: HttpRequest, pk: int) -> HttpResponse:
    """One substance with its cautions and its history."""
    substance = get_object_or_404(Substance.objects.select_related("superseded_by"), pk=pk)
    context = {
        "substance": substance,
        "cautions": cautions_for(substance.hazards),
        "history": sentences_about(substance),
    }
    return render(request, "substance/detail.html", context)


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a substance."""
    return recorded(
        request, SubstanceForm(typed(request)), template="register/record.html",
        change=service.record_substance,
        to=_page, context={"title": "Record a substance", "back": "substance-list"},
    )  # fmt: skip


@for_roles("administrator", "supervisor")
@require_http_methods(["GET", "POST"])
def supersede(request: HttpRequest, pk: int) -> HttpResponse:
    """Record the entry that takes a substance's place."""
    substance = get_object_or_404(Substance, pk=pk)
    form = SupersedingSubstanceForm(typed(request), initial=initial_of(substance, SubstanceForm))

    def change(**clean: Any) -> Substance:
        return service.supersede_substance(substance, **clean)

    context = {"title": f"Supersede {substance.name}", "back": "substance-list", "button": "Supersede"}
    return recorded(request, form, template="register/record.html", change=change, to=_page, context=context)


def _page(substance: Substance) -> tuple[str, ...]:
    return "substance-detail", str(substance.pk)
