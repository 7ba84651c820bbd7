"""What is typed about batches, samples, methods, products and control samples."""

from __future__ import annotations

from datetime import datetime
from typing import Any

from django import forms
from django.utils import timezone

from labrecords.forms.endpoint_rule import CORRECTIONS, COUNTING, ENDPOINT, FAMILIES, EndpointRuleForm
from labrecords.forms.fields import CountField, DayField, NumberField
from labrecords.forms.parts import PartsField
from labrecords.models import (
    Batch,
    BatchState,
    ControlSample,
    Method,
    MethodVersion,
    Product,
    Substance,
    Titrant,
)


class BatchForm(forms.Form):
    """A production batch."""

    number = forms.CharField(max_length=30, label="Batch number", help_text="as production gave it")
    product = forms.ModelChoiceField(queryset=Product.objects.filter(superseded_by=None), label="Product")
    made_on = DayField(label="Made on")
    size = forms.CharField(max_length=40, label="Size", required=False, help_text="such as 6 000 L")


class SampleForm(forms.Form):
    """What was drawn."""

    number = forms.CharField(max_length=30, label="Sample number", help_text="on the container's label")
    batch = forms.ModelChoiceField(
        queryset=Batch.objects.filter(state__in=[BatchState.TESTING, BatchState.ON_HOLD]), label="From the batch",
        required=False,
    )  # fmt: skip
    control_sample = forms.ModelChoiceField(
        queryset=ControlSample.objects.filter(withdrawn_reason=""),
        label="or from the control sample",
        required=False,
    )
    drawn_at = forms.CharField(
        label="Drawn at",
        widget=forms.DateTimeInput(attrs={"type": "datetime-local"}, format="%Y-%m-%dT%H:%M"),
    )
    drawn_by = forms.CharField(max_length=120, label="Drawn by")
    place = forms.CharField(max_length=120, label="Where", required=False)
    is_urgent = forms.BooleanField(label="Urgent", required=False)

    def clean_drawn_at(self) -> datetime:
        """A moment in the laboratory's zone."""
        text = self.cleaned_data["drawn_at"].strip()
        for form in ("%Y-%m-%dT%H:%M", "%Y-%m-%d %H:%M", "%d %b %Y %H:%M"):
            try:
                return timezone.make_aware(datetime.strptime(text, form))
            except ValueError:
                continue
        raise forms.ValidationError(f"Drawn at is {text!r}; a day and a time such as 24 Nov 2026 09:40 are expected.")


class MethodForm(forms.Form):
    """A test."""

    code = forms.CharField(max_length=20, label="Code", help_text="capital letters, digits and hyphens, such as TA-VIN")
    title = forms.CharField(max_length=120, label="Title")


class VersionForm(EndpointRuleForm):
    """The recipe of a method version, in the order a bench would read it."""

    groups = (
        ("The version", ("reason", "instructions")),
        ("What is titrated", ("titrant", "titration", "excess_titrant", "excess_volume", "sample_by", "sample_amount",
                              "dilutions")),
        ("Endpoint", ENDPOINT),
        ("Which titrations count", COUNTING),
        ("Result", ("expressed_as", "ratio", "quantity", "unit", "places", "basis", "loss_u", "parts")),
        ("Corrections and uncertainty", CORRECTIONS),
    )  # fmt: skip

    reason = forms.CharField(max_length=500, label="Why this version is made")
    titrant = forms.ModelChoiceField(queryset=Titrant.objects.filter(superseded_by=None), label="Titrant")
    expressed_as = forms.ModelChoiceField(
        queryset=Substance.objects.filter(superseded_by=None), label="Result expressed as"
    )
    titration = forms.ChoiceField(choices=MethodVersion._meta.get_field("titration").choices, label="Titration")
    ratio = forms.CharField(
        max_length=12, label="Ratio", help_text="mol of that substance per mol of titrant: 1, 2 or 1/2"
    )
    excess_titrant = forms.ModelChoiceField(
        queryset=Titrant.objects.filter(superseded_by=None),
        label="Excess solution (back titration)",
        required=False,
    )
    excess_volume = NumberField(label="Its volume, mL", required=False)
    sample_by = forms.ChoiceField(choices=[("volume", "volume, mL"), ("mass", "mass, g")], label="Sample by")
    sample_amount = NumberField(label="Nominal sample amount")
    dilutions = forms.CharField(
        label="Dilutions", required=False, widget=forms.Textarea(attrs={"rows": 2}),
        help_text="one line per step: flask and aliquot in mL, such as 100 20",
    )  # fmt: skip
    endpoint = forms.ChoiceField(choices=[("indicator", "indicator"), ("curve", "recorded curve")], label="Endpoint by")
    indicator = forms.CharField(max_length=120, label="Indicator and colour change", required=False)
    indicator_bias = NumberField(label="Indicator past equivalence, mL", required=False)
    indicator_u = NumberField(label="Its standard uncertainty, mL", required=False)
    curve_quantity = forms.ChoiceField(
        choices=[("", "none"), *MethodVersion._meta.get_field("curve_quantity").choices],
        label="Curve of",
        required=False,
    )
    deciding_family = forms.ChoiceField(choices=FAMILIES, label="Deciding family", required=False)
    checking_family = forms.ChoiceField(choices=FAMILIES, label="Checking family", required=False)
    first_fixed_reading = NumberField(
        label="First fixed pH or mV", required=False, help_text="where a curve has two, such as 8.3 before 4.5"
    )
    endpoints_expected = CountField(label="Endpoints expected", initial="1")
    endpoint_chosen = CountField(label="The one that counts", initial="1")
    blanks_needed = CountField(label="Blanks needed", initial="0")
    replicates_needed = CountField(label="Replicates needed", initial="3")
    policy = forms.ChoiceField(choices=MethodVersion._meta.get_field("policy").choices, label="Which replicates count")
    limit = NumberField(label="Limit")
    limit_kind = forms.ChoiceField(choices=MethodVersion._meta.get_field("limit_kind").choices, label="Limit is a")
    quantity = forms.ChoiceField(choices=MethodVersion._meta.get_field("quantity").choices, label="Result quantity")
    unit = forms.CharField(max_length=16, label="Unit", help_text="g/100 mL, mg/L, %, mol/L, ...")
    places = CountField(label="Decimals")
    parts = PartsField(label="Further results of two endpoints")
    basis = forms.ChoiceField(choices=MethodVersion._meta.get_field("basis").choices, label="Basis")
    loss_u = NumberField(label="u of the loss on drying, % (m/m)", required=False, initial="0")
    sample_density = NumberField(
        label="Density of the sample, g/cm³", required=False, help_text="weighings are then corrected for buoyancy"
    )
    coverage = forms.ChoiceField(choices=MethodVersion._meta.get_field("coverage").choices, label="Coverage factor")
    instructions = forms.CharField(
        label="How the method goes", required=False, widget=forms.Textarea(attrs={"rows": 5})
    )

    def clean_dilutions(self) -> list[dict[str, str]]:
        """Steps as flask and aliquot."""
        steps = []
        for place, line in enumerate(self.cleaned_data["dilutions"].replace(",", ".").splitlines(), start=1):
            parts = line.split()
            if not parts:
                continue
            if len(parts) != 2 or not all(part.replace(".", "", 1).isdigit() for part in parts):
                raise forms.ValidationError(
                    f"Dilution {place} is {line!r}; flask and aliquot in mL are expected, such as 100 20."
                )
            steps.append({"flask": parts[0], "aliquot": parts[1]})
        return steps

    def clean(self) -> dict[str, Any]:
        """The sample's unit follows its kind; an empty bias is none."""
        clean = super().clean() or {}
        clean["sample_unit"] = {"volume": "mL", "mass": "g"}.get(clean.get("sample_by", ""), "mL")
        for name in ("indicator_bias", "indicator_u", "loss_u"):
            clean[name] = clean.get(name) or 0
        return clean


class ProductForm(forms.Form):
    """What is made."""

    code = forms.CharField(max_length=20, label="Code")
    name = forms.CharField(max_length=120, label="Name")


class SupersedingProductForm(ProductForm):
    """A product that takes the place of another."""

    reason = forms.CharField(max_length=500, label="Reason")


class SpecificationForm(forms.Form):
    """Why a version is made; its limits are in rows of ``LimitForm``."""

    reason = forms.CharField(max_length=500, label="Why this version is made")


class LimitForm(forms.Form):
    """One test with its limits; a row without a method is left out."""

    method = forms.ModelChoiceField(queryset=Method.objects.all(), label="Test", required=False)
    lower = NumberField(label="Lower limit", required=False)
    upper = NumberField(label="Upper limit", required=False)
    unit = forms.CharField(max_length=16, label="Unit", required=False)
    places = CountField(label="Decimals", required=False)
    figures = CountField(label="or significant figures", required=False)
    rounding = forms.ChoiceField(choices=[("half_up", "half up"), ("half_even", "half even")], label="Rounding")
    rule = forms.ChoiceField(choices=[("simple", "simple acceptance"), ("guard", "guard band")], label="Rule")
    guard_factor = NumberField(label="Guard, times U", required=False, initial="1")

    def clean(self) -> dict[str, Any]:
        """A row with a method says its decimals."""
        clean = super().clean() or {}
        if clean.get("method") and clean.get("places") is None and "places" not in self.errors:
            self.add_error("places", "Decimals: nothing is typed; a whole number is expected.")
        clean["guard_factor"] = clean.get("guard_factor") or 1
        return clean


LimitRows = forms.formset_factory(LimitForm, extra=4, max_num=12, absolute_max=12)


class ControlSampleForm(forms.Form):
    """A stable material."""

    code = forms.CharField(max_length=20, label="Code")
    name = forms.CharField(max_length=120, label="Name")
    method = forms.ModelChoiceField(queryset=Method.objects.all(), label="Watched method")
    assigned_value = NumberField(label="Assigned value")
    assigned_expanded = NumberField(label="Its expanded uncertainty (k = 2)")
    unit = forms.CharField(max_length=16, label="Unit")
    expires_on = DayField(label="Expires on")
