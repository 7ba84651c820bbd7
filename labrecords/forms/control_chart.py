"""What is typed about control charts."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.errors import Refused
from labrecords.models import ControlSample, Instrument, InstrumentKind, Method, Titrant
from labrecords.rules.number import parse_number

MEMORY = {
    "ewma_weight": "Weight of the average, lambda",
    "ewma_width": "Width of its limits, L",
    "cusum_reference": "Reference value, k",
    "cusum_interval": "Decision interval, h",
}


class ChartForm(forms.Form):
    """A chart of a control sample, a titrant, a method's blank or an electrode."""

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
    method = forms.ModelChoiceField(
        queryset=Method.objects.all(), label="or of the blank of the method", required=False
    )
    instrument = forms.ModelChoiceField(
        queryset=Instrument.objects.filter(kind=InstrumentKind.ELECTRODE, withdrawn_at=None),
        label="or of the slope of the electrode",
        required=False,
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
        "also": data.getlist("also"),
    }


def typed_memory(data: Any) -> dict[str, float]:
    """Lambda, L, k and h as typed; Refused naming what is no number, nothing for what is left empty."""
    found, reasons = {}, []
    for field, name in MEMORY.items():
        text = data.get(field, "").strip()
        if not text:
            continue
        try:
            found[field] = float(parse_number(text, field=name))
        except ValueError as problem:
            reasons.append(str(problem))
    if reasons:
        raise Refused(reasons)
    return found


def _key(text: str) -> int:
    """The key of a point; what is none is no point's key."""
    return int(text) if text.isascii() and text.isdigit() and len(text) < 19 else 0
