"""Reference standards."""

from __future__ import annotations

from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.standard import (
    CorrectingStandardForm,
    StandardForm,
    SupersedingStandardForm,
    initial_of_standard,
)
from labrecords.models import LotState, ReferenceStandard, StoredFile
from labrecords.queries.history import sentences_about
from labrecords.queries.signature import signatures_of
from labrecords.queries.standard import standards, standards_found
from labrecords.rules.standard import objections_to_issuing
from labrecords.services import standard as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import page_of, recorded, typed
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All lots of reference standards."""
    q, state = request.GET.get("q", ""), request.GET.get("state", "")
    found = page_of(request, standards_found(day=timezone.localdate(), q=q, state=state))
    context = {"page_obj": found, "q": q, "state": state, "states": LotState.values}
    return render(request, "standard/list.html", context)


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """One lot with its certificate and what was standardized with it."""
    return _shown(request, number)


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a lot with its certificate; it starts in quarantine."""
    form = StandardForm(typed(request), request.FILES or None)
    context = {"title": "Record a reference standard", "back": "standard-list", "has_file": True}
    return recorded(
        request,
        form,
        template="register/record.html",
        change=service.record_standard,
        to=_page,
        context=context,
    )


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def correct(request: HttpRequest, number: str) -> HttpResponse:
    """Correct a lot in quarantine."""
    standard = get_object_or_404(ReferenceStandard, number=number)
    initial = initial_of_standard(standard, CorrectingStandardForm)
    form = CorrectingStandardForm(typed(request), request.FILES or None, initial=initial)

    def change(**clean: Any) -> ReferenceStandard:
        return service.correct_standard(standard, **clean)

    context = {
        "title": f"Correct {number}",
        "back": "standard-list",
        "button": "Keep the correction",
        "has_file": True,
    }
    return recorded(request, form, template="register/record.html", change=change, to=_page, context=context)


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def supersede(request: HttpRequest, number: str) -> HttpResponse:
    """Record the entry that takes a lot's place."""
    standard = get_object_or_404(ReferenceStandard, number=number)
    initial = initial_of_standard(standard, SupersedingStandardForm) | {"number": ""}
    form = SupersedingStandardForm(typed(request), request.FILES or None, initial=initial)

    def change(**clean: Any) -> ReferenceStandard:
        return service.supersede_standard(standard, **clean)

    context = {
        "title": f"Supersede {number}",
        "back": "standard-list",
        "button": "Supersede",
        "has_file": True,
    }
    return recorded(request, form, template="register/record.html", change=change, to=_page, context=context)


@for_roles("supervisor")
@require_POST
def issue(request: HttpRequest, number: str) -> HttpResponse:
    """Release a lot from quarantine."""
    standard = get_object_or_404(ReferenceStandard, number=number)
    try:
        service.issue_standard(standard, by=request.user)
    except Refused as refusal:
        return _shown(request, number, refused=refusal.reasons)
    messages.info(request, f"{number} is in use.")
    return redirect("standard-detail", number)


@for_roles("supervisor")
@require_POST
def withdraw(request: HttpRequest, number: str) -> HttpResponse:
    """Withdraw a lot; what rests on it is put in question."""
    standard = get_object_or_404(ReferenceStandard, number=number)
    try:
        credentials, reason = typed_credentials(request.POST)
        service.withdraw_standard(standard, by=request.user, credentials=credentials, reason=reason)
    except Refused as refusal:
        return _shown(request, number, refused=refusal.reasons)
    messages.info(request, f"{number} is withdrawn.")
    return redirect("standard-detail", number)


@signed_in
@require_GET
def certificate(request: HttpRequest, pk: int) -> HttpResponse:
    """A certificate's file as it arrived; always saved, never opened inside the site."""
    file = get_object_or_404(StoredFile, pk=pk, media_type__in=["application/pdf", "image/png", "image/jpeg"])
    answer = HttpResponse(bytes(file.content), content_type=file.media_type)
    name = "".join(
        letter if letter.isascii() and (letter.isalnum() or letter in "._-") else "_" for letter in file.name
    )
    answer["Content-Disposition"] = f'attachment; filename="{name}"'
    answer["Content-Security-Policy"] = "sandbox"
    answer["X-Content-Type-Options"] = "nosniff"
    return answer


def _page(standard: ReferenceStandard) -> tuple[str, ...]:
    return "standard-detail", standard.number


def _shown(request: HttpRequest, number: str, *, refused: tuple[str, ...] = ()) -> HttpResponse:
    today = timezone.localdate()
    standard = get_object_or_404(standards(day=today), number=number)
    made = standard.standardizations.select_related("lot__titrant", "calculation")
    context = {
        "standard": standard,
        "standardizations": made.order_by("-id")[:100],
        "objections_to_issuing": objections_to_issuing(standard, by=request.user, today=today),
        "signatures": signatures_of("standard", standard.pk),
        "history": sentences_about(standard),
        "refused": refused,
    }
    return render(request, "standard/detail.html", context, status=409 if refused else 200)
