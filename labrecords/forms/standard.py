"""What is typed about a reference standard."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from django import forms

from labrecords.forms.fields import (
    CertificateField,
    DayField,
    NumberField,
    PercentField,
    RecordField,
    TextField,
)
from labrecords.forms.register import ReasonForm, initial_of
from labrecords.models import ReferenceStandard, Substance
from labrecords.rules.number import shortest

FILE_HINT = "PDF, PNG or JPEG up to 5 MB"


class CertificateValuesForm(forms.Form):
    """What is copied from the certificate and the bottle."""

    supplier_lot = TextField(max_length=80, label="Supplier's lot")
    purity = PercentField(
        label="Purity, %",
        least=Decimal(50),
        most=Decimal(101),
        help_text="mass fraction as on the certificate: 99.98",
    )
    purity_expanded = PercentField(
        label="U of the purity, %", least=Decimal("0.00001"), most=Decimal(10), help_text="expanded: 0.03"
    )
    purity_k = NumberField(label="k of that U", initial="2")
    drying = TextField(max_length=160, label="Drying", required=False)
    received_on = DayField(label="Received on")
    expires_on = DayField(label="Expires on", help_text="the last day it may be used")


class StandardForm(CertificateValuesForm):
    """A lot of a primary standard with its certificate."""

    number = TextField(max_length=30, label="Number", help_text="on the bottle's label")
    substance = RecordField(Substance.objects.filter(superseded_by=None), label="Substance")
    certificate = CertificateField(label="Certificate", help_text=FILE_HINT)
    field_order = ("number", "substance")


class SupersedingStandardForm(ReasonForm, StandardForm):
    """An entry that takes the place of another."""

    field_order = ("number", "substance")


class CorrectingStandardForm(ReasonForm, CertificateValuesForm):
    """A correction in quarantine; without a file the certificate stays."""

    certificate = CertificateField(label="Another certificate", required=False, help_text=FILE_HINT)
    field_order = (*CertificateValuesForm.base_fields, "certificate", "reason")


def initial_of_standard(standard: ReferenceStandard, form: type[forms.Form]) -> dict[str, Any]:
    """A lot's values as its form shows them, percentages as percentages, without its file."""
    percent = {name: shortest(getattr(standard, name) * 100) for name in ("purity", "purity_expanded")}
    return initial_of(standard, form) | percent | {"certificate": None}
