"""Who may open a page: nobody who is not signed in, and only the roles a view names."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import Any

from django.contrib.auth.views import redirect_to_login
from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

View = Callable[..., HttpResponse]


def signed_in(view: View) -> View:
    """Let every signed-in person through; others sign in first and come back."""

    @wraps(view)
    def guarded(request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponse:
        if not request.user.is_authenticated:
            return redirect_to_login(request.get_full_path())
        return view(request, *args, **kwargs)

    guarded.roles = ()  # type: ignore[attr-defined]
    return guarded


def for_roles(*roles: str) -> Callable[[View], View]:
    """Let people with one of the roles through; others get a sentence that says whose page it is."""

    def decorate(view: View) -> View:
        @wraps(view)
        def guarded(request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponse:
            if not request.user.is_authenticated:
                return redirect_to_login(request.get_full_path())
            if not set(roles) & set(request.user.roles):
                whose = " and ".join(f"{role}s" for role in roles)
                reason = f"This page is for {whose}. You are signed in as {request.user.full_name}."
                return render(request, "errors/403.html", {"reason": reason}, status=403)
            return view(request, *args, **kwargs)

        guarded.roles = roles  # type: ignore[attr-defined]
        return guarded

    return decorate
