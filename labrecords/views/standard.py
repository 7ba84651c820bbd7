"""Reference standards."""

from __future__ import annotations

from typing import Any

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.register import StandardForm
from labrecords.models import LotState, StoredFile
from labrecords.queries.history import sentences_about
from labrecords.queries.signature import signatures_of
from labrecords.queries.standard import standards, standards_found
from labrecords.services import standard as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All lots of reference standards."""
    q, state = request.GET.get("q", ""), request.GET.get("state", "")
    page = Paginator(standards_found(q=q, state=state), 50).get_page(request.GET.get("page"))
    return render(request, "standard/list.html", {"page_obj": page, "q": q, "state": state, "states": LotState.values})


@signed_in
@require_GET
def detail(request: HttpRequest, number: str) -> HttpResponse:
    """One lot with its certificate and what was standardized with it."""
    return render(request, "standard/detail.html", _context(number))


@for_roles("analyst", "supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a lot with its certificate; it starts in quarantine."""
    return recorded(
        request, StandardForm(request.POST or None, request.FILES or None), template="register/record.html",
        change=service.record_standard, to=lambda standard: ("standard-detail", standard.number),
        context={"title": "Record a reference standard", "back": "standard-list", "has_file": True},
    )  # fmt: skip


@for_roles("supervisor")
@require_POST
def issue(request: HttpRequest, number: str) -> HttpResponse:
    """Release a lot from quarantine."""
    try:
        service.issue_standard(_context(number)["standard"], by=request.user)
    except Refused as refusal:
        return render(request, "standard/detail.html", _context(number) | {"refused": refusal.reasons}, status=409)
    messages.info(request, f"{number} is in use.")
    return redirect("standard-detail", number)


@for_roles("supervisor")
@require_POST
def withdraw(request: HttpRequest, number: str) -> HttpResponse:
    """Withdraw a lot; what rests on it is put in question."""
    try:
        credentials, reason = typed_credentials(request.POST)
        service.withdraw_standard(_context(number)["standard"], by=request.user, credentials=credentials, reason=reason)
    except Refused as refusal:
        return render(request, "standard/detail.html", _context(number) | {"refused": refusal.reasons}, status=409)
    return redirect("standard-detail", number)


@signed_in
@require_GET
def certificate(request: HttpRequest, pk: int) -> HttpResponse:
    """A certificate's file as it arrived."""
    file = get_object_or_404(StoredFile, pk=pk, media_type__in=["application/pdf", "image/png", "image/jpeg"])
    answer = HttpResponse(bytes(file.content), content_type=file.media_type)
    name = "".join(letter if letter.isalnum() or letter in "._-" else "_" for letter in file.name)
    answer["Content-Disposition"] = f'attachment; filename="{name}"'
    answer["X-Content-Type-Options"] = "nosniff"
    return answer


def _context(number: str) -> dict[str, Any]:
    standard = get_object_or_404(standards(), number=number)
    return {
        "standard": standard,
        "standardizations": standard.standardizations.select_related("lot__titrant", "calculation").order_by("-id")[:100],
        "signatures": signatures_of("standard", standard.pk),
        "history": sentences_about(standard),
    }
