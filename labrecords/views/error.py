"""Pages for what went wrong, each saying what to do next."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def bad_request(request: HttpRequest, exception: Exception | None = None) -> HttpResponse:
    """400."""
    return render(request, "errors/400.html", status=400)


def forbidden(request: HttpRequest, exception: Exception | None = None) -> HttpResponse:
    """403."""
    return render(request, "errors/403.html", status=403)


def not_found(request: HttpRequest, exception: Exception | None = None) -> HttpResponse:
    """404."""
    return render(request, "errors/404.html", status=404)


def broken(request: HttpRequest) -> HttpResponse:
    """500: no context, because anything may be broken."""
    return render(request, "errors/500.html", status=500)
