"""Investigations: a guided page with phases, each signed."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_POST

from labrecords.errors import Refused
from labrecords.forms.investigation import ConclusionForm, PlanForm, typed_checklist
from labrecords.models import Investigation, User
from labrecords.queries.history import sentences_about
from labrecords.queries.investigation import investigations
from labrecords.queries.run import runs
from labrecords.queries.signature import signatures_of
from labrecords.rules.investigation import CHECKLIST, objections_to_investigating
from labrecords.services import investigation as service
from labrecords.services.signature import Credentials
from labrecords.views.access import for_roles, signed_in
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All investigations, newest first."""
    page = Paginator(investigations(), 50).get_page(request.GET.get("page"))
    return render(request, "investigation/list.html", {"page_obj": page})


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """The phases of one investigation, what was found, and what comes next."""
    return render(request, "investigation/detail.html", _context(number, by=request.user))


@for_roles("supervisor")
@require_POST
def assess(request: HttpRequest, number: str) -> HttpResponse:
    """Sign the laboratory assessment."""

    def change(investigation: Investigation, credentials: Credentials) -> None:
        service.assess_investigation(
            investigation, by=request.user, credentials=credentials, checklist=typed_checklist(request.POST),
            assessment=request.POST.get("assessment", ""),
        )  # fmt: skip

    return _signed(request, number, change)


@for_roles("supervisor")
@require_POST
def plan(request: HttpRequest, number: str) -> HttpResponse:
    """Sign the plan of the retests."""
    form = PlanForm(request.POST)

    def change(investigation: Investigation, credentials: Credentials) -> None:
        _must_be_valid(form)
        service.plan_retests(investigation, by=request.user, credentials=credentials, **form.cleaned_data)

    return _signed(request, number, change, plan_form=form)


@for_roles("supervisor")
@require_POST
def close(request: HttpRequest, number: str) -> HttpResponse:
    """Sign the conclusion."""
    form = ConclusionForm(request.POST)

    def change(investigation: Investigation, credentials: Credentials) -> None:
        _must_be_valid(form)
        service.close_investigation(investigation, by=request.user, credentials=credentials, **form.cleaned_data)

    return _signed(request, number, change, conclusion_form=form)


def _signed(request: HttpRequest, number: str, change: Callable[..., None], **forms: Any) -> HttpResponse:
    investigation = get_object_or_404(Investigation, number=number)
    try:
        credentials, _ = typed_credentials(request.POST)
        change(investigation, credentials)
    except Refused as refusal:
        context = _context(number, by=request.user) | forms | {"refused": refusal.reasons}
        context["questions"] = _questions(typed_checklist(request.POST))
        return render(request, "investigation/detail.html", context, status=409)
    return redirect("investigation-detail", number)


def _must_be_valid(form: Any) -> None:
    if not form.is_valid():
        raise Refused([str(error) for errors in form.errors.values() for error in errors])


def _context(number: str, *, by: User) -> dict[str, Any]:
    investigation = get_object_or_404(investigations(), number=number)
    return {
        "investigation": investigation,
        "run": investigation.run,
        "objections": objections_to_investigating(investigation, by=by),
        "questions": _questions(investigation.checklist),
        "plan_form": PlanForm(),
        "conclusion_form": ConclusionForm(),
        "retests": runs().filter(retest_for=investigation),
        "signatures": signatures_of("investigation", investigation.pk),
        "history": sentences_about(investigation),
    }


def _questions(checklist: dict[str, dict[str, str]]) -> list[dict[str, str]]:
    return [{"key": key, "question": question, **checklist.get(key, {})} for key, question in CHECKLIST.items()]
