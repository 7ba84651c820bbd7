"""People: signing in and out, accounts, passwords."""

from __future__ import annotations

from django.contrib import messages
from django.contrib.auth import authenticate, login, logout, update_session_auth_hash
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.http import url_has_allowed_host_and_scheme
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.user import AccountForm, CorrectionForm, PasswordForm, SignInForm
from labrecords.models import User
from labrecords.queries.history import sentences_about
from labrecords.services import user as service
from labrecords.views.access import for_roles, signed_in

REFUSED = "The name or the password is not right. After eight wrong tries the account waits a quarter of an hour."


@require_http_methods(["GET", "POST"])
def sign_in(request: HttpRequest) -> HttpResponse:
    """Sign in and go on to the page that was asked for."""
    form = SignInForm(request.POST or None)
    refused: list[str] = []
    if request.method == "POST" and form.is_valid():
        user = authenticate(request, **form.cleaned_data)
        if user is not None:
            login(request, user)
            service.record_sign_in(user)
            return redirect(_next(request))
        refused = [REFUSED]
    status = 401 if refused else 200
    return render(request, "user/sign_in.html", {"form": form, "refused": refused, "next": _next(request)}, status=status)


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
    return render(request, "user/list.html", {"people": User.objects.all()})


@for_roles("administrator")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a new account."""
    form, refused = AccountForm(request.POST or None), ()
    if request.method == "POST" and form.is_valid():
        try:
            user = service.record_user(by=request.user, **form.cleaned_data)
            return redirect("user-detail", user.username)
        except Refused as refusal:
            refused = refusal.reasons
    status = 400 if request.method == "POST" else 200
    return render(request, "user/record.html", {"form": form, "refused": refused}, status=status)


@signed_in
@require_http_methods(["GET", "POST"])
def detail(request: HttpRequest, username: str) -> HttpResponse:
    """One person: roles, history; an administrator corrects them here."""
    person, refused = get_object_or_404(User, username=username), ()
    start = {"full_name": person.full_name, "roles": person.roles}
    form = CorrectionForm(request.POST or None, initial=start)
    if request.method == "POST" and form.is_valid():
        try:
            service.correct_user(person, by=request.user, **form.cleaned_data)
            return redirect("user-detail", username)
        except Refused as refusal:
            refused = refusal.reasons
    context = {"person": person, "form": form, "refused": refused, "history": sentences_about(person)}
    return render(request, "user/detail.html", context, status=409 if refused else 200)


@for_roles("administrator")
@require_POST
def close(request: HttpRequest, username: str) -> HttpResponse:
    """Close an account; what it signed stays."""
    person = get_object_or_404(User, username=username)
    try:
        service.close_user(person, by=request.user, reason=request.POST.get("reason", ""))
    except Refused as refusal:
        context = {"person": person, "form": CorrectionForm(), "refused": refusal.reasons}
        return render(request, "user/detail.html", context | {"history": sentences_about(person)}, status=409)
    return redirect("user-detail", username)


@signed_in
@require_http_methods(["GET", "POST"])
def change_password(request: HttpRequest) -> HttpResponse:
    """Change one's own password."""
    form, refused = PasswordForm(request.POST or None), ()
    if request.method == "POST" and form.is_valid():
        try:
            user = service.change_password(request.user, by=request.user, **form.cleaned_data)
            update_session_auth_hash(request, user)
            messages.info(request, "Your password is changed.")
            return redirect("user-detail", user.username)
        except Refused as refusal:
            refused = refusal.reasons
    return render(request, "user/change_password.html", {"form": form, "refused": refused}, status=409 if refused else 200)


def _next(request: HttpRequest) -> str:
    wanted = request.POST.get("next") or request.GET.get("next") or "/"
    safe = url_has_allowed_host_and_scheme(wanted, allowed_hosts={request.get_host()}, require_https=request.is_secure())
    return wanted if safe else "/"
