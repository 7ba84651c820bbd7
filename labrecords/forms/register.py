"""What is typed into the registers of substances, instruments, standards, titrants and their lots."""

from __future__ import annotations

from typing import Any

from django import forms

from labrecords.forms.fields import CertificateField, CountField, DayField, NumberField
from labrecords.models import Hazard, InstrumentKind, Substance, Titrant, User

SEVERAL = forms.CheckboxSelectMultiple


class SubstanceForm(forms.Form):
    """A chemical."""

    name = forms.CharField(max_length=120, label="Name")
    formula = forms.CharField(max_length=120, label="Formula", help_text="such as C8H5KO4 or Na2S2O3·5H2O; the molar mass comes from it")
    density = NumberField(label="Density, g/cm³", required=False, help_text="for buoyancy")
    hazards = forms.MultipleChoiceField(choices=Hazard.choices, label="Hazards", required=False, widget=SEVERAL)


class SupersedingSubstanceForm(SubstanceForm):
    """A chemical that takes the place of another."""

    reason = forms.CharField(max_length=500, label="Reason")


class InstrumentForm(forms.Form):
    """A piece of equipment."""

    identifier = forms.CharField(max_length=20, label="Identifier", help_text="as on its label, such as B-07")
    kind = forms.ChoiceField(choices=InstrumentKind.choices, label="Kind")
    description = forms.CharField(max_length=160, label="Description", required=False)
    capacity = NumberField(label="Capacity", required=False, help_text="mL of glassware, g of a balance")
    unit = forms.ChoiceField(choices=[(unit, unit) for unit in ("mL", "g", "pH", "mV", "°C")], label="Unit")
    resolution = NumberField(label="Resolution", help_text="smallest difference it is read to, in the unit")
    tolerance = NumberField(label="Tolerance", help_text="half-width of its class, in the unit")
    place = forms.CharField(max_length=80, label="Place", required=False)


class CalibrationForm(forms.Form):
    """A calibration."""

    calibrated_on = DayField(label="Calibrated on")
    due_on = DayField(label="Due on")
    performed_by = forms.CharField(max_length=120, label="Performed by")
    uncertainty = NumberField(label="Expanded uncertainty (k = 2)", required=False, help_text="of the certificate, in the instrument's unit")
    corrections = forms.CharField(
        label="Corrections", required=False, widget=forms.Textarea(attrs={"rows": 4}),
        help_text="one line per point: reading and what is added, such as 10.00 0.012",
    )  # fmt: skip
    slope_percent = NumberField(label="Electrode slope, %", required=False)
    remarks = forms.CharField(max_length=2000, label="Remarks", required=False)
    certificate = CertificateField(label="Certificate", required=False)

    def clean_corrections(self) -> list[tuple[str, ...]]:
        """The table as typed, line by line; a decimal comma is taken as a point."""
        lines = self.cleaned_data["corrections"].replace(",", ".").splitlines()
        return [tuple(line.split()) for line in lines if line.strip()]


class StandardForm(forms.Form):
    """A lot of a primary standard with its certificate."""

    number = forms.CharField(max_length=30, label="Number", help_text="on the bottle's label")
    substance = forms.ModelChoiceField(queryset=Substance.objects.filter(superseded_by=None), label="Substance")
    supplier_lot = forms.CharField(max_length=80, label="Supplier's lot")
    purity = NumberField(label="Purity, mass fraction", help_text="0.9998 for 99.98 %")
    purity_expanded = NumberField(label="U of the purity", help_text="as a fraction: 0.0003 for 0.03 %")
    purity_k = NumberField(label="k of that U", initial="2")
    drying = forms.CharField(max_length=160, label="Drying", required=False)
    received_on = DayField(label="Received on")
    expires_on = DayField(label="Expires on")
    certificate = CertificateField(label="Certificate")


class TitrantForm(forms.Form):
    """A kind of solution and the rule of its standardization."""

    code = forms.CharField(max_length=20, label="Code")
    name = forms.CharField(max_length=120, label="Name")
    substance = forms.ModelChoiceField(queryset=Substance.objects.filter(superseded_by=None), label="Substance")
    nominal = NumberField(label="Nominal concentration, mol/L")
    window_low = NumberField(label="Accepted from, mol/L")
    window_high = NumberField(label="Accepted to, mol/L")
    restandardization_days = CountField(label="Restandardized after, days")
    shelf_life_days = CountField(label="Shelf life, days")
    standard_substance = forms.ModelChoiceField(
        queryset=Substance.objects.filter(superseded_by=None), label="Against the primary standard", required=False
    )
    standard_titrant = forms.ModelChoiceField(
        queryset=Titrant.objects.filter(superseded_by=None), label="or against the titrant", required=False
    )
    ratio = forms.CharField(max_length=12, label="Ratio", help_text="mol of titrant per mol of standard: 1, 2 or 1/2")
    aliquot = NumberField(label="Aliquot of the other titrant, mL", required=False)
    standard_mass = NumberField(label="Mass of the standard usually weighed, g", required=False)
    indicator = forms.CharField(max_length=120, label="Indicator and colour change", required=False)
    indicator_bias = NumberField(label="Indicator past equivalence, mL", initial="0")
    indicator_u = NumberField(label="Its standard uncertainty, mL", initial="0")
    replicates_needed = CountField(label="Replicates needed")
    policy = forms.ChoiceField(choices=Titrant._meta.get_field("policy").choices, label="Which replicates count")
    limit = NumberField(label="Limit")
    limit_kind = forms.ChoiceField(choices=Titrant._meta.get_field("limit_kind").choices, label="Limit is a")
    coverage = forms.ChoiceField(choices=Titrant._meta.get_field("coverage").choices, label="Coverage factor")


class LotForm(forms.Form):
    """A bottle or tank of a titrant."""

    number = forms.CharField(max_length=30, label="Number", help_text="on the bottle's label")
    prepared_on = DayField(label="Prepared on")
    prepared_by = forms.ModelChoiceField(queryset=User.objects.filter(is_active=True), label="Prepared by")
    reagent_lot = forms.CharField(max_length=80, label="Reagent lot")
    volume = NumberField(label="Volume prepared, mL")
    expires_on = DayField(label="Expires on", required=False, help_text="left empty: the titrant's shelf life")


def initial_of(record: Any, form: type[forms.Form]) -> dict[str, Any]:
    """The values of a record as a form starts with, for the entry that takes its place."""
    return {name: getattr(record, name) for name in form.base_fields if hasattr(record, name)}
