"""What is typed about a titrant and its lots."""

from __future__ import annotations

from django import forms

from labrecords.forms.endpoint_rule import CORRECTIONS, COUNTING, ENDPOINT, FAMILIES, EndpointRuleForm
from labrecords.forms.fields import CountField, DayField, NumberField, OneOfField, RecordField, TextField
from labrecords.forms.register import ReasonForm
from labrecords.models import Substance, Titrant, User

SUBSTANCES = Substance.objects.filter(superseded_by=None)


class TitrantForm(EndpointRuleForm):
    """A kind of solution and the rule of its standardization."""

    groups = (
        ("The solution", ("code", "name", "substance", "nominal", "window_low", "window_high",
                          "restandardization_days", "shelf_life_days")),
        ("How it is standardized", ("standard_substance", "standard_mass", "standard_titrant", "aliquot", "ratio")),
        ("Endpoint", ENDPOINT),
        ("Which titrations count", COUNTING),
        ("Corrections and uncertainty", CORRECTIONS),
    )  # fmt: skip

    code = TextField(max_length=20, label="Code")
    name = TextField(max_length=120, label="Name")
    substance = RecordField(SUBSTANCES, label="Substance")
    nominal = NumberField(label="Nominal concentration, mol/L")
    window_low = NumberField(label="Accepted from, mol/L")
    window_high = NumberField(label="Accepted to, mol/L")
    restandardization_days = CountField(label="Restandardized after, days")
    shelf_life_days = CountField(label="Shelf life, days")
    standard_substance = RecordField(SUBSTANCES, label="Against the primary standard", required=False)
    standard_titrant = RecordField(
        Titrant.objects.filter(superseded_by=None), label="or against the titrant", required=False
    )
    ratio = TextField(max_length=12, label="Ratio", help_text="mol of titrant per mol of standard: 1, 2 or 1/2")
    aliquot = NumberField(label="Aliquot of the other titrant, mL", required=False)
    standard_mass = NumberField(label="Mass of the standard usually weighed, g", required=False)
    endpoint = OneOfField(choices=Titrant._meta.get_field("endpoint").choices, label="Endpoint by", initial="indicator")
    indicator = TextField(max_length=120, label="Indicator and colour change", required=False)
    indicator_bias = NumberField(label="Indicator past equivalence, mL", initial="0")
    indicator_u = NumberField(label="Its standard uncertainty, mL", initial="0")
    curve_quantity = OneOfField(
        choices=[("", "none"), *Titrant._meta.get_field("curve_quantity").choices], label="Curve of", required=False
    )
    deciding_family = OneOfField(choices=FAMILIES, label="Deciding family", required=False)
    checking_family = OneOfField(choices=FAMILIES, label="Checking family", required=False)
    blanks_needed = CountField(label="Blanks needed", initial="1")
    replicates_needed = CountField(label="Replicates needed")
    policy = OneOfField(choices=Titrant._meta.get_field("policy").choices, label="Which replicates count")
    limit = NumberField(label="Limit")
    limit_kind = OneOfField(choices=Titrant._meta.get_field("limit_kind").choices, label="Limit is a")
    expands_like = OneOfField(
        choices=Titrant._meta.get_field("expands_like").choices, label="Expands with temperature like"
    )
    buoyancy = forms.BooleanField(label="Weighings of the standard are corrected for buoyancy", required=False)
    coverage = OneOfField(choices=Titrant._meta.get_field("coverage").choices, label="Coverage factor")


class SupersedingTitrantForm(ReasonForm, TitrantForm):
    """A titrant that takes the place of another."""


class LotForm(forms.Form):
    """A bottle or tank of a titrant."""

    number = TextField(max_length=30, label="Number", help_text="on the bottle's label")
    prepared_on = DayField(label="Prepared on")
    prepared_by = RecordField(
        User.objects.filter(is_active=True, roles__overlap=["analyst", "supervisor"]), label="Prepared by"
    )
    reagent_lot = TextField(max_length=80, label="Reagent lot")
    volume = NumberField(label="Volume prepared, mL")
    expires_on = DayField(label="Expires on", required=False, help_text="left empty: the titrant's shelf life")
