"""The way every recording page goes: a form, one service call, a refusal's sentences, or on to the record."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from django.core.paginator import Page, Paginator
from django.db.models import QuerySet
from django.forms import Form
from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import redirect, render

from labrecords.errors import Refused

ROWS = 50


def page_of(request: HttpRequest, found: QuerySet[Any] | Sequence[Any]) -> Page[Any]:
    """Fifty rows of a list: the page that the address asks for, or the nearest one that exists."""
    return Paginator(found, ROWS).get_page(request.GET.get("page"))


def typed(request: HttpRequest) -> QueryDict | None:
    """What a form was sent with, also when it is nothing at all; None where the page is only opened."""
    return request.POST if request.method == "POST" else None


def recorded(
    request: HttpRequest,
    form: Form,
    *,
    template: str,
    change: Callable[..., Any],
    to: Callable[[Any], tuple[str, ...]],
    context: Mapping[str, Any] | None = None,
) -> HttpResponse:
    """Show the form, or make the change with its clean values and go to the address ``to`` names."""
    refused: tuple[str, ...] = ()
    if request.method == "POST" and form.is_valid():
        try:
            name, *arguments = to(change(by=request.user, **form.cleaned_data))
            return redirect(name, *arguments)
        except Refused as refusal:
            refused = refusal.reasons
    status = 409 if refused else 400 if request.method == "POST" else 200
    return render(request, template, {"form": form, "refused": refused, **(context or {})}, status=status)
