"""The way every recording page goes: a form, one service call, the sentences of a refusal, or on to the record."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from django.forms import Form
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render

from labrecords.errors import Refused


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
    status = 400 if request.method == "POST" else 200
    return render(request, template, {"form": form, "refused": refused, **(context or {})}, status=status)
