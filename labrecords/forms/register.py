"""What the forms of the registers share."""

from __future__ import annotations

from decimal import Decimal
from typing import Any, ClassVar

from django import forms

from labrecords.forms.fields import TextField
from labrecords.rules.number import shortest


class ReasonForm(forms.Form):
    """Why a record is changed, superseded or taken out of use."""

    reason = TextField(max_length=500, label="Reason")


class GroupedForm(forms.Form):
    """A long form in parts with a heading each; what no part names comes in the first one."""

    groups: ClassVar[tuple[tuple[str, tuple[str, ...]], ...]] = ()

    def grouped(self) -> list[tuple[str, list[forms.BoundField]]]:
        """Heading and fields of each part, in order."""
        named = {name for _, names in self.groups for name in names}
        rest = [name for name in self.fields if name not in named]
        parts = [(title, list(names)) for title, names in self.groups]
        parts[0][1][:0] = rest
        return [(title, [self[name] for name in names if name in self.fields]) for title, names in parts]


def initial_of(record: Any, form: type[forms.Form]) -> dict[str, Any]:
    """The values of a record as a form starts with, for the entry that takes its place."""
    found = {name: getattr(record, name) for name in form.base_fields if hasattr(record, name)}
    return {name: shortest(value) if isinstance(value, Decimal) else value for name, value in found.items()}
