"""What is typed about a substance."""

from __future__ import annotations

from django import forms

from labrecords.forms.fields import NumberField, SomeOfField, TextField
from labrecords.forms.register import ReasonForm
from labrecords.models import Hazard


class SubstanceForm(forms.Form):
    """A chemical."""

    name = TextField(max_length=120, label="Name")
    formula = TextField(
        max_length=120,
        label="Formula",
        help_text="such as C8H5KO4 or Na2S2O3·5H2O; the molar mass comes from it",
    )
    density = NumberField(label="Density, g/cm³", required=False, help_text="for the buoyancy of weighings")
    hazards = SomeOfField(choices=Hazard.choices, label="Hazards", required=False)


class SupersedingSubstanceForm(ReasonForm, SubstanceForm):
    """A chemical that takes the place of another."""
