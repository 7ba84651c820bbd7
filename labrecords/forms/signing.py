"""What is typed at a signing."""

from __future__ import annotations

from django import forms

from labrecords.errors import Refused


class SigningForm(forms.Form):
    """Name and password; never pre-filled, never sent back to the page."""

    username = forms.CharField(max_length=40, required=False, label="Your name for signing in")
    password = forms.CharField(max_length=128, required=False, label="Your password", strip=False)
    reason = forms.CharField(max_length=2000, required=False, label="Reason")


def typed_components(data: object) -> tuple[str, str, str]:
    """Name, password and reason of a signing; Refused naming what is empty."""
    form = SigningForm(data)  # type: ignore[arg-type]
    if not form.is_valid():
        raise Refused(
            [f"{form.fields[name].label}: {error}" for name, errors in form.errors.items() for error in errors]
        )
    clean = form.cleaned_data
    empty = [
        f"{form.fields[name].label} is empty. Both are typed at every signing."
        for name in ("username", "password")
        if not clean[name]
    ]
    if empty:
        raise Refused(empty)
    return clean["username"], clean["password"], clean["reason"].strip()
