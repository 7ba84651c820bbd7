"""Methods and their versions."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.batch import MethodForm, VersionForm
from labrecords.forms.register import initial_of
from labrecords.models import Method, MethodVersion
from labrecords.queries.history import sentences_about
from labrecords.queries.method import methods
from labrecords.services import method as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All methods with their newest version."""
    return render(request, "method/list.html", {"methods": methods()})


@signed_in
@require_GET
def detail(request: HttpRequest, code: str) -> HttpResponse:
    """One method with the recipe of each version."""
    return render(request, "method/detail.html", _context(code))


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a test."""
    return recorded(
        request,
        MethodForm(request.POST or None),
        template="register/record.html",
        change=service.record_method,
        to=lambda method: ("method-record_version", method.code),
        context={"title": "Record a method", "back": "method-list"},
    )


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def record_version(request: HttpRequest, code: str) -> HttpResponse:
    """Record the next version of a method as a draft, starting from the newest."""
    method = get_object_or_404(Method, code=code)
    newest = method.versions.order_by("-number").first()
    start = initial_of(newest, VersionForm) if newest else {}
    if newest:
        start |= {
            "reason": "",
            "dilutions": "\n".join(f"{step['flask']} {step['aliquot']}" for step in newest.dilutions),
        }

    def change(**clean: Any) -> MethodVersion:
        return service.record_version(method, **clean)

    context = {"title": f"{code}: next version", "back": "method-list"}
    to = lambda _: ("method-detail", code)  # noqa: E731
    form = VersionForm(request.POST or None, initial=start)
    return recorded(request, form, template="register/record.html", change=change, to=to, context=context)


@for_roles("supervisor")
@require_POST
def make_effective(request: HttpRequest, pk: int) -> HttpResponse:
    """Sign a draft into force."""
    version = get_object_or_404(MethodVersion.objects.select_related("method"), pk=pk)
    try:
        credentials, _ = typed_credentials(request.POST)
        service.make_version_effective(version, by=request.user, credentials=credentials)
    except Refused as refusal:
        context = _context(version.method.code) | {"refused": refusal.reasons}
        return render(request, "method/detail.html", context, status=409)
    return redirect("method-detail", version.method.code)


def _context(code: str) -> dict[str, Any]:
    method = get_object_or_404(methods(), code=code)
    versions = method.versions.all()
    return {"method": method, "versions": versions, "history": sentences_about(method, parts=versions)}
