"""Signing in, accounts and passwords."""

from __future__ import annotations

from django import forms

from labrecords.forms.fields import SomeOfField, TextField
from labrecords.forms.register import ReasonForm
from labrecords.models import Role


class SignInForm(forms.Form):
    """Name and password."""

    username = forms.CharField(
        max_length=40, label="Name for signing in", error_messages={"required": "Name is empty."}
    )
    password = forms.CharField(
        max_length=128, label="Password", strip=False, widget=forms.PasswordInput,
        error_messages={"required": "Password is empty."},
    )  # fmt: skip


class AccountForm(forms.Form):
    """A new account."""

    username = TextField(max_length=40, label="Name for signing in", help_text="small letters, digits, dots or hyphens")
    full_name = TextField(max_length=120, label="Full name", help_text="printed beside every signature")
    roles = SomeOfField(choices=Role.choices, label="Roles")
    password = TextField(
        max_length=128, label="First password", strip=False, widget=forms.PasswordInput,
        help_text="12 characters or more; the person changes it after the first sign-in",
    )  # fmt: skip


class CorrectionForm(ReasonForm):
    """A change of a person's name or roles."""

    full_name = TextField(max_length=120, label="Full name")
    roles = SomeOfField(choices=Role.choices, label="Roles")
    field_order = ("full_name", "roles", "reason")


class PasswordForm(forms.Form):
    """A person's own new password."""

    current = TextField(max_length=128, label="Current password", strip=False, widget=forms.PasswordInput)
    password = TextField(max_length=128, label="New password", strip=False, widget=forms.PasswordInput)
