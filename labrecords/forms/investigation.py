"""What is typed in an investigation."""

from __future__ import annotations

from collections.abc import Mapping

from django import forms

from labrecords.forms.fields import CountField
from labrecords.models import Conclusion
from labrecords.rules.investigation import CHECKLIST


class PlanForm(forms.Form):
    """The plan of the retests."""

    plan = forms.CharField(max_length=4000, label="Plan", widget=forms.Textarea(attrs={"rows": 3}), required=False)
    retests = CountField(label="Retests planned", required=False)


class ConclusionForm(forms.Form):
    """The conclusion."""

    conclusion = forms.ChoiceField(choices=Conclusion.choices, label="Conclusion", required=False)
    cause = forms.CharField(max_length=2000, label="Assignable cause, if one was found", required=False)
    text = forms.CharField(
        max_length=4000,
        label="What was found, in sentences",
        widget=forms.Textarea(attrs={"rows": 3}),
        required=False,
    )


def typed_checklist(data: Mapping[str, str]) -> dict[str, dict[str, str]]:
    """The answers of the checklist, by the key of its question."""
    return {
        key: {"answer": data.get(f"answer-{key}", ""), "note": data.get(f"note-{key}", "").strip()} for key in CHECKLIST
    }
