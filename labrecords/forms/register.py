"""What the forms of the registers share."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from django import forms

from labrecords.forms.fields import TextField
from labrecords.rules.number import shortest


class ReasonForm(forms.Form):
    """Why a record is changed, superseded or taken out of use."""

    reason = TextField(max_length=500, label="Reason")


def initial_of(record: Any, form: type[forms.Form]) -> dict[str, Any]:
    """The values of a record as a form starts with, for the entry that takes its place."""
    found = {name: getattr(record, name) for name in form.base_fields if hasattr(record, name)}
    return {name: shortest(value) if isinstance(value, Decimal) else value for name, value in found.items()}
