"""Pages for what went wrong, each saying what to do next."""

from __future__ import annotations

from collections.abc import Callable
from itertools import chain

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

NUL = "\x00"


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


def refuse_nul(get_response: Callable[[HttpRequest], HttpResponse]) -> Callable[[HttpRequest], HttpResponse]:
    """Middleware: the database keeps no text with the character NUL, so no address or form may have one."""

    def answer(request: HttpRequest) -> HttpResponse:
        if not _has_nul(request):
            return get_response(request)
        reason = "What was sent holds the character NUL, which no text has. Type it again."
        return render(request, "errors/400.html", {"reason": reason}, status=400)

    return answer


def _has_nul(request: HttpRequest) -> bool:
    sent = chain(request.GET.lists(), request.POST.lists())
    return NUL in request.path_info or any(NUL in text for name, values in sent for text in (name, *values))
