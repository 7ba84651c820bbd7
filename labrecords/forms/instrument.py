"""What is typed about an instrument and its calibrations."""

from __future__ import annotations

from django import forms

from labrecords.forms.fields import CertificateField, DayField, NumberField, OneOfField, TextField
from labrecords.forms.register import ReasonForm
from labrecords.models import InstrumentKind

UNITS = ("mL", "g", "pH", "mV", "µS/cm", "°C")


class InstrumentForm(forms.Form):
    """A piece of equipment."""

    identifier = TextField(max_length=20, label="Identifier", help_text="as on its label, such as B-07")
    kind = OneOfField(choices=InstrumentKind.choices, label="Kind")
    description = TextField(max_length=160, label="Description", required=False)
    capacity = NumberField(label="Capacity", required=False, help_text="mL of glassware, g of a balance")
    unit = OneOfField(choices=[(unit, unit) for unit in UNITS], label="Unit")
    resolution = NumberField(label="Resolution", help_text="smallest difference it is read to, in the unit")
    tolerance = NumberField(label="Tolerance", help_text="half-width of its class, in the unit")
    place = TextField(max_length=80, label="Place", required=False)


class SupersedingInstrumentForm(ReasonForm, InstrumentForm):
    """An entry that takes the place of another."""


class CalibrationForm(forms.Form):
    """A calibration."""

    calibrated_on = DayField(label="Calibrated on")
    due_on = DayField(label="Due on", help_text="the last day it holds")
    performed_by = TextField(max_length=120, label="Performed by")
    uncertainty = NumberField(
        label="Expanded uncertainty (k = 2)", required=False,
        help_text="of the certificate, in the instrument's unit",
    )  # fmt: skip
    corrections = TextField(
        max_length=4000, label="Corrections", required=False, widget=forms.Textarea(attrs={"rows": 4}),
        help_text="one line per point: reading and what is added, such as 10.00 0.012",
    )  # fmt: skip
    slope_percent = NumberField(label="Electrode slope, %", required=False)
    remarks = TextField(max_length=2000, label="Remarks", required=False)
    certificate = CertificateField(label="Certificate", required=False, help_text="PDF, PNG or JPEG up to 5 MB")

    def clean_corrections(self) -> list[tuple[str, ...]]:
        """The table as typed, line by line; a decimal comma is taken as a point."""
        lines = self.cleaned_data["corrections"].replace(",", ".").splitlines()
        return [tuple(line.split()) for line in lines if line.strip()]
