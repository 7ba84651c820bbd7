"""Forms of the registers: clean values as the services take them."""

from __future__ import annotations

from decimal import Decimal as D

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from labrecords.forms.instrument import CalibrationForm
from labrecords.forms.register import initial_of
from labrecords.forms.standard import CorrectingStandardForm, StandardForm, initial_of_standard
from labrecords.forms.substance import SubstanceForm, SupersedingSubstanceForm
from labrecords.forms.titrant import LotForm, TitrantForm
from labrecords.models import User
from tests.factories.bench import Bench
from tests.factories.register import phthalate, some_substance

CALIBRATION = {"calibrated_on": "2026-11-24", "due_on": "24 Nov 2027", "performed_by": "the bench"}


def test_calibration_form_reads_a_table_line_by_line() -> None:
    form = CalibrationForm(CALIBRATION | {"corrections": "10.00 0.012\n\n 20,00   -0,004 \n"})
    assert form.is_valid(), form.errors
    assert form.cleaned_data["corrections"] == [("10.00", "0.012"), ("20.00", "-0.004")]


def test_calibration_form_needs_neither_table_nor_certificate() -> None:
    form = CalibrationForm(CALIBRATION)
    assert form.is_valid(), form.errors
    assert (form.cleaned_data["corrections"], form.cleaned_data["certificate"]) == ([], None)


@pytest.mark.django_db
def test_standard_form_takes_percent_and_gives_fractions(supervisor: User) -> None:
    typed = {
        "number": "KHP-26-01", "substance": phthalate(supervisor).pk, "supplier_lot": "L1", "purity": "99,98",
        "purity_expanded": "0,03", "purity_k": "2", "received_on": "2026-11-24", "expires_on": "2027-11-24",
    }  # fmt: skip
    form = StandardForm(typed, {"certificate": SimpleUploadedFile("c.pdf", b"%PDF-1.4")})
    assert form.is_valid(), form.errors
    assert (form.cleaned_data["purity"], form.cleaned_data["purity_expanded"]) == (D("0.9998"), D("0.0003"))


@pytest.mark.django_db
def test_correcting_form_starts_with_percentages(bench: Bench) -> None:
    bench.standard.refresh_from_db()
    initial = initial_of_standard(bench.standard, CorrectingStandardForm)
    assert (initial["purity"], initial["purity_expanded"], initial["purity_k"]) == ("99.98", "0.03", "2")
    assert "number" not in initial


@pytest.mark.django_db
def test_superseding_form_starts_with_the_values_of_the_record(bench: Bench) -> None:
    bench.titrant.refresh_from_db()
    initial = initial_of(bench.titrant, TitrantForm)
    assert (initial["nominal"], initial["substance"], initial["policy"]) == (
        "0.1",
        bench.titrant.substance,
        "all",
    )


@pytest.mark.django_db
def test_forms_offer_no_superseded_substance_and_no_auditor(bench: Bench, auditor: User) -> None:
    assert set(LotForm().fields["prepared_by"].queryset) == {bench.analyst, bench.supervisor}
    form = LotForm({"prepared_by": auditor.pk})
    assert form.errors["prepared_by"] == ["Prepared by: what was chosen is not in the list any more. Choose again."]


def test_superseding_form_asks_for_a_reason_last() -> None:
    form = SupersedingSubstanceForm({"name": "salt", "formula": "NaCl"})
    assert list(form.fields) == [*SubstanceForm.base_fields, "reason"]
    assert form.errors["reason"] == ["Reason is empty: words are expected."]


@pytest.mark.django_db
def test_substance_form_needs_no_hazard(supervisor: User) -> None:
    form = SubstanceForm({"name": "salt", "formula": "NaCl", "density": "2,165"})
    assert form.is_valid(), form.errors
    assert some_substance(supervisor, **form.cleaned_data).density == D("2.165")
