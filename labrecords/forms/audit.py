"""How the trail is filtered."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.models import User
from labrecords.queries.trail import kinds_of_events


class TrailForm(forms.Form):
    """Person, kind of record, days, and a part of a number or of a reason."""

    q = forms.CharField(max_length=200, required=False, label="Record or reason")
    person = forms.ChoiceField(required=False, label="Person")
    action = forms.ChoiceField(required=False, label="Kind")
    since = forms.DateField(
        required=False, label="From", widget=forms.DateInput(attrs={"type": "date"}, format="%Y-%m-%d")
    )
    until = forms.DateField(
        required=False, label="To", widget=forms.DateInput(attrs={"type": "date"}, format="%Y-%m-%d")
    )

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        people = User.objects.values_list("username", "full_name")
        self.fields["person"].choices = [("", "everybody"), *people]  # type: ignore[attr-defined]
        kinds = [(kind, kind.replace("_", " ")) for kind in kinds_of_events()]
        self.fields["action"].choices = [("", "all"), *kinds]  # type: ignore[attr-defined]
        for name in ("since", "until"):
            wrong = f"{self.fields[name].label} is not a day: write it as 2026-11-24."
            self.fields[name].error_messages["invalid"] = wrong

    def clean(self) -> dict[str, Any]:
        """The days are in order."""
        clean = super().clean() or self.cleaned_data
        since, until = clean.get("since"), clean.get("until")
        if since and until and since > until:
            self.add_error("until", f"To is {until}, before From, which is {since}. Exchange the two.")
        return clean

    def filters(self) -> dict[str, Any]:
        """What was chosen; a value that is refused filters nothing."""
        self.is_valid()
        return {name: value for name, value in self.cleaned_data.items() if value}
