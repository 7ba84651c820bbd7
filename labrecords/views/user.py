"""People: signing in and out, accounts, passwords."""

from __future__ import annotations

from typing import Any

from django.contrib import messages
from django.contrib.auth import authenticate, login, logout, update_session_auth_hash
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.http import url_has_allowed_host_and_scheme
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.register import initial_of
from labrecords.forms.user import AccountForm, CorrectionForm, PasswordForm, SignInForm
from labrecords.models import User
from labrecords.queries.history import sentences_about
from labrecords.queries.register import people
from labrecords.services import user as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import page_of, recorded, typed

REFUSED = "The name or the password is not right. After eight wrong tries the account waits a quarter of an hour."


@require_http_methods(["GET", "POST"])
def sign_in(request: HttpRequest) -> HttpResponse:
    """Sign in and go on to the page that was asked for."""
    form, refused = SignInForm(typed(request)), ()
    if request.method == "POST" and form.is_valid():
        user = authenticate(request, **form.cleaned_data)
        if user is not None:
            service.record_sign_in(user)
            login(request, user)
            return redirect(_next(request))
        _record_failure(request, form.cleaned_data["username"])
        refused = (REFUSED,)
    status = 401 if refused else 400 if request.method == "POST" else 200
    context = {"form": form, "refused": refused, "next": _next(request)}
    return render(request, "user/sign_in.html", context, status=status)


@signed_in
@require_POST
def sign_out(request: HttpRequest) -> HttpResponse:
    """Sign out."""
    service.record_sign_out(request.user)
    logout(request)
    return redirect("user-sign_in")


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """Everybody with an account, closed ones too."""
    q = request.GET.get("q", "")
    return render(request, "user/list.html", {"page_obj": page_of(request, people(q=q)), "q": q})


@for_roles("administrator")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a new account."""
    return recorded(
        request, AccountForm(typed(request)), template="user/record.html", change=service.record_user,
        to=lambda user: ("user-detail", user.username),
    )  # fmt: skip


@signed_in
@require_http_methods(["GET", "POST"])
def detail(request: HttpRequest, username: str) -> HttpResponse:
    """One person: roles, history; an administrator corrects them here."""
    person = get_object_or_404(User, username=username)
    form = CorrectionForm(typed(request), initial=initial_of(person, CorrectionForm))

    def change(**clean: Any) -> User:
        return service.correct_user(person, **clean)

    context = {"person": person, "history": sentences_about(person)}
    return recorded(
        request, form, template="user/detail.html", change=change, context=context,
        to=lambda user: ("user-detail", user.username),
    )  # fmt: skip


@for_roles("administrator")
@require_POST
def close(request: HttpRequest, username: str) -> HttpResponse:
    """Close an account; what it signed stays."""
    person = get_object_or_404(User, username=username)
    try:
        service.close_user(person, by=request.user, reason=request.POST.get("reason", ""))
    except Refused as refusal:
        form = CorrectionForm(initial=initial_of(person, CorrectionForm))
        context = {
            "person": person,
            "form": form,
            "refused": refusal.reasons,
            "history": sentences_about(person),
        }
        return render(request, "user/detail.html", context, status=409)
    messages.info(request, f"The account of {person.full_name} is closed.")
    return redirect("user-detail", username)


@signed_in
@require_http_methods(["GET", "POST"])
def change_password(request: HttpRequest) -> HttpResponse:
    """Change one's own password."""
    form, refused = PasswordForm(typed(request)), ()
    if request.method == "POST" and form.is_valid():
        try:
            user = service.change_password(request.user, by=request.user, **form.cleaned_data)
            update_session_auth_hash(request, user)
            messages.info(request, "Your password is changed.")
            return redirect("user-detail", user.username)
        except Refused as refusal:
            refused = refusal.reasons
    status = 409 if refused else 400 if request.method == "POST" else 200
    return render(request, "user/change_password.html", {"form": form, "refused": refused}, status=status)


def _record_failure(request: HttpRequest, username: str) -> None:
    """On the trail, unless the account waits already: a flood of tries fills the log and not the trail."""
    if not getattr(request, "axes_locked_out", False):
        service.record_failed_sign_in(username.strip(), address=request.META.get("REMOTE_ADDR", ""))


def _next(request: HttpRequest) -> str:
    wanted = request.POST.get("next") or request.GET.get("next") or "/"
    safe = url_has_allowed_host_and_scheme(
        wanted, allowed_hosts={request.get_host()}, require_https=request.is_secure()
    )
    return wanted if safe else "/"
