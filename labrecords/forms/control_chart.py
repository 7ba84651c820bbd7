"""What is typed about control charts."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.models import ControlSample, Titrant


class ChartForm(forms.Form):
    """A chart of a control sample or of a titrant."""

    code = forms.CharField(max_length=20, label="Code")
    title = forms.CharField(max_length=120, label="Title")
    control_sample = forms.ModelChoiceField(
        queryset=ControlSample.objects.filter(withdrawn_reason=""),
        label="Of the control sample",
        required=False,
    )
    titrant = forms.ModelChoiceField(
        queryset=Titrant.objects.filter(superseded_by=None), label="or of the titrant", required=False
    )


def typed_limits(data: Any) -> dict[str, Any]:
    """The baseline, its exclusions and the rules, as chosen."""
    excluded = {
        _key(name.removeprefix("why-")): text.strip()
        for name, text in data.items()
        if name.startswith("why-") and text.strip()
    }
    return {
        "baseline": [_key(text) for text in data.getlist("baseline")],
        "excluded": excluded,
        "rules": data.getlist("rules"),
        "reason": data.get("limits_reason", "").strip(),
    }


def _key(text: str) -> int:
    """The key of a point; what is none is no point's key."""
    return int(text) if text.isascii() and text.isdigit() and len(text) < 19 else 0
