"""Methods and their versions: drafts that may change, and effective versions that never do."""

from __future__ import annotations

from decimal import Decimal as D
from typing import Any

import pytest
from django.db import DatabaseError, transaction
from django.utils import timezone

from labrecords.models import Method, MethodVersion, Signature, Substance, User
from labrecords.queries.method import effective_version
from labrecords.services import audit
from labrecords.services.method import correct_version, make_version_effective, record_method, record_version
from labrecords.services.run import start_run
from tests.factories.bench import Bench, approved_standardization, some_sample, some_version
from tests.factories.people import signed_by
from tests.factories.register import some_substance
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "three titrations instead of two"
ACID = {
    "kind": "acid_base", "titrant": "base", "analytes": [{"name": "acetic acid", "pKa": [4.756], "charge": 0}],
    "carbonate": 0.0, "activity": True,
}  # fmt: skip
CURVE = {"endpoint": "curve", "curve_quantity": "pH", "deciding_family": "derivative", "checking_family": "gran"}


@pytest.fixture
def method(supervisor: User) -> Method:
    return record_method(by=supervisor, code="TA", title="Titratable acidity")


@pytest.fixture
def acid(supervisor: User) -> Substance:
    return some_substance(supervisor, name="acetic acid", formula="C2H4O2")


@pytest.fixture
def recipe(bench: Bench, acid: Substance) -> dict[str, Any]:
    return {
        "titrant": bench.titrant, "expressed_as": acid, "ratio": "1", "titration": "direct", "sample_by": "volume",
        "sample_unit": "mL", "sample_amount": D("10"), "quantity": "mass_concentration", "unit": "g/100 mL",
        "places": 3, "replicates_needed": 3, "policy": "all", "limit": D("0.10"), "limit_kind": "range_mL",
        "indicator": "phenolphthalein", "reason": WHY,
    }  # fmt: skip


@pytest.fixture
def draft(method: Method, supervisor: User, recipe: dict[str, Any]) -> MethodVersion:
    return record_version(method, by=supervisor, **recipe)


def sign_in_force(version: MethodVersion, by: User, **given: Any) -> MethodVersion:
    return make_version_effective(version, by=by, **{"credentials": signed_by(by)} | given)


def test_record_method_has_no_recipe_yet(supervisor: User) -> None:
    with one_event("method.record"):
        method = record_method(by=supervisor, code="TA-2", title="Titratable acidity")
    assert (Method.objects.get().code, effective_version(method)) == ("TA-2", None)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"code": "ta"}, "Code is 'ta': capital letters, digits and hyphens, a letter first"),
        ({"code": "2-TA"}, "Code is '2-TA'"),
        ({"code": "T" * 21}, "20 at most"),
        ({"code": "TA"}, "Code TA is in use"),
        ({"title": " "}, "Title is empty: name the test"),
        ({"title": "t" * 121}, "121 characters: up to 120 are kept"),
    ],
)
def test_record_method_refuses(method: Method, supervisor: User, given: dict, sentence: str) -> None:
    said = {"by": supervisor, "code": "TA-2", "title": "Titratable acidity"} | given
    assert sentence in refusal_of(record_method, **said)


def test_methods_are_a_supervisors(draft: MethodVersion, analyst: User, recipe: dict[str, Any]) -> None:
    sentence = "Ines Castell is not a supervisor. A supervisor makes methods."
    assert sentence in refusal_of(record_method, by=analyst, code="TA-2", title="Titratable acidity")
    assert sentence in refusal_of(record_version, draft.method, by=analyst, **recipe)
    assert sentence in refusal_of(correct_version, draft, by=analyst, reason=WHY)
    assert sentence in refusal_of(sign_in_force, draft, analyst)


def test_record_version_numbers_on_and_is_a_draft(method: Method, supervisor: User, recipe: dict[str, Any]) -> None:
    with one_event("method_version.record"):
        first = record_version(method, by=supervisor, **recipe)
    second = record_version(method, by=supervisor, **recipe)
    assert [(each.number, each.state) for each in (first, second)] == [(1, "draft"), (2, "draft")]
    assert effective_version(method) is None


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"ratio": "two"}, "Ratio is 'two': a number or a fraction"),
        ({"ratio": "1/0"}, "Ratio is '1/0'"),
        ({"ratio": "-1"}, "Ratio is -1: a number above 0"),
        ({"indicator": " "}, "Indicator is empty: name it and its colour change"),
        ({"titration": "back"}, "name the excess solution and the volume that is pipetted"),
        ({"titration": "blank_difference"}, "at least one blank is needed"),
        ({"sample_amount": D("0")}, "Sample amount is 0: a number above 0 in mL"),
        ({"limit": D("0")}, "Limit for the replicates is 0"),
        ({"replicates_needed": 0}, "Replicates needed is 0: from 1 to 20"),
        ({"replicates_needed": 21}, "Replicates needed is 21"),
        ({"reason": " "}, "Reason is empty: say why this version is made"),
        ({"temperature_within": D("16")}, "Temperature known within is 16 °C: from 0 to 15"),
        ({"drift_u": D("101")}, "u of the drift is 101 µL/min: from 0 to 100"),
        ({"agreement_limit": D("0")}, "Families may differ by 0"),
        ({"sample_density": D("998")}, "Density of the sample is 998 g/cm³: from 0.1 to 25. Is it in kg/m³?"),
        ({"sample_density": D("1")}, "is for weighings; this sample is by volume"),
        ({"loss_u": D("6")}, "u of the loss on drying is 6 %: from 0 to 5"),
        ({"unit": "furlong"}, "Unit is 'furlong'; a mass concentration is in g/L, mg/L"),
        ({"quantity": "luck"}, "Quantity is “luck”; expected one of amount_concentration"),
        ({"quantity": "titrant_equivalent", "unit": "mg KOH/g"}, "Unit is 'mg KOH/g'; a titrant equivalent is in"),
        ({"policy": "best"}, "Policy is “best”; expected one of concordance, all"),
        ({"places": 9}, "Places is 9: decimals from 0 to 8"),
        ({"blanks_needed": 99999}, "Blanks needed is 99999: a whole number from 0 to 32767"),
        ({"sample_amount": D("1.23456")}, "Sample amount is 1.23456: up to 4 decimals are kept"),
        ({"sample_amount": D("9999999")}, "Sample amount is 9999999: up to 6 digits before the decimal mark"),
        ({"sample_by": "mass"}, "Sample unit is mL; a sample by mass is in g"),
        ({"indicator_bias": D("2")}, "Indicator is 2 mL past equivalence"),
        ({"indicator_u": D("-0.1")}, "u -0.1 mL; within 1 mL, u not below 0"),
        ({"titration": "back", "excess_volume": D("-3")}, "Excess volume is -3 mL: a number above 0"),
        ({"dilutions": [{"flask": "10", "aliquot": "100"}]}, "Dilution 1 takes 100 mL from a flask of 10 mL"),
        ({"dilutions": [{"flask": "0", "aliquot": "0"}]}, "Dilution 1 takes 0 mL from a flask of 0 mL: above 0"),
    ],
)
def test_record_version_refuses(
    method: Method, supervisor: User, recipe: dict[str, Any], given: dict, sentence: str
) -> None:
    assert sentence in refusal_of(record_version, method, by=supervisor, **recipe | given)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"deciding_family": "eye"}, "Deciding family is 'eye': one of model, gran"),
        ({"deciding_family": ""}, "Deciding family is ''"),
        ({"checking_family": "derivative"}, "Deciding and checking family are both derivative"),
        ({"deciding_family": "fixed"}, "Fixed reading is empty"),
        ({"checking_family": "model"}, "Chemistry is empty: the family model needs its analytes"),
        ({"system": ACID | {"kind": "alchemy"}}, "Chemistry for the model:"),
        ({"curve_quantity": ""}, "Curve quantity is empty"),
        ({"curve_quantity": "colour"}, "Curve quantity is “colour”; expected one of pH, mV"),
        ({"endpoints_expected": 0}, "Endpoints expected is 0: from 1 to 10"),
        ({"endpoint_chosen": 2}, "The one that counts is 2, of 1 expected"),
        ({"initial_volume": D("-5")}, "Volume at the start is -5 mL: above 0"),
    ],
)
def test_record_version_by_curve_refuses(
    method: Method, supervisor: User, recipe: dict[str, Any], given: dict, sentence: str
) -> None:
    assert sentence in refusal_of(record_version, method, by=supervisor, **recipe | CURVE | given)


def test_record_version_by_curve_needs_no_indicator(method: Method, supervisor: User, recipe: dict[str, Any]) -> None:
    by_curve = CURVE | {"deciding_family": "model", "system": ACID, "indicator": ""}
    version = record_version(method, by=supervisor, **recipe | by_curve)
    assert MethodVersion.objects.get(pk=version.pk).system == ACID


PART = {"name": "carbonate", "takes": "first", "ratio": "1"}


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"parts": [PART | {"takes": "third"}]}, "carbonate takes 'third': one of first, second"),
        ({"parts": [PART | {"ratio": "none"}]}, "Ratio is 'none'"),
        ({"parts": [PART], "titration": "blank_difference", "blanks_needed": 1}, "need a direct titration"),
        ({"parts": [PART], **CURVE}, "The one that counts is 1: with further results it is the second, 2"),
        (
            {"parts": [PART], **CURVE, "deciding_family": "fixed", "fixed_reading": D("4.5"), "endpoint_chosen": 2},
            "First fixed reading is empty",
        ),
        (
            {**CURVE, "fixed_reading": D("4.5"), "first_fixed_reading": D("4.5")},
            "Both fixed readings are 4.5: two different ones",
        ),
    ],
)
def test_record_version_refuses_further_results(
    method: Method, supervisor: User, recipe: dict[str, Any], given: dict, sentence: str
) -> None:
    assert sentence in refusal_of(record_version, method, by=supervisor, **recipe | given)


def test_correct_version_changes_a_draft_with_its_reason(draft: MethodVersion, supervisor: User) -> None:
    assert "Limit for the replicates is -1" in refusal_of(
        correct_version, draft, by=supervisor, reason=WHY, limit=D("-1")
    )
    with one_event("method_version.correct"):
        correct_version(draft, by=supervisor, reason="wider after the trial", limit=D("0.15"))
    stored = MethodVersion.objects.get()
    assert (stored.limit, stored.reason, stored.number) == (D("0.15"), "wider after the trial", 1)


def test_make_version_effective_signs_every_column(draft: MethodVersion, supervisor: User) -> None:
    with one_event("method_version.make_effective"):
        sign_in_force(draft, supervisor)
    stored, signature = MethodVersion.objects.get(), Signature.objects.get(noun="method_version")
    assert (stored.state, stored.effective_from) == ("effective", timezone.localdate())
    assert (signature.meaning, signature.reason, signature.record_number) == (
        "made effective by", WHY, "TA, version 1",
    )  # fmt: skip
    for said in (
        '"titrant":"NaOH-0.1"',
        '"expressed_as":"acetic acid"',
        '"limit":"0.1',
        '"indicator":"phenolphthalein"',
    ):
        assert said in signature.content


def test_make_version_effective_supersedes_the_one_before(draft: MethodVersion, supervisor: User, recipe: dict) -> None:
    sign_in_force(draft, supervisor)
    second = sign_in_force(record_version(draft.method, by=supervisor, **recipe), supervisor)
    assert MethodVersion.objects.get(pk=draft.pk).state == "superseded"
    assert effective_version(draft.method) == second
    assert "TA, version 1 is superseded. Only a draft is made effective." in refusal_of(
        sign_in_force, draft, supervisor
    )


def test_superseded_version_starts_no_run(bench: Bench) -> None:
    approved_standardization(bench)
    first = some_version(bench)
    sample = some_sample(bench, first)
    values = {field.name: getattr(first, field.name) for field in MethodVersion._meta.concrete_fields}
    for name in ("id", "method", "number", "state", "effective_from"):
        values.pop(name)
    sign_in_force(record_version(first.method, by=bench.supervisor, **values), bench.supervisor)
    first.refresh_from_db()
    given = {"method_version": first, "lot": bench.lot, "instruments": {}}
    assert "TA, version 1 is superseded. Choose the effective version of TA." in refusal_of(
        start_run, sample, by=bench.analyst, **given
    )


def test_make_version_effective_needs_the_own_password_and_the_trail(
    draft: MethodVersion, supervisor: User, break_trail: Any
) -> None:
    wrong = signed_by(supervisor, "guess")
    assert "The password is not right" in refusal_of(sign_in_force, draft, supervisor, credentials=wrong)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        sign_in_force(draft, supervisor)
    assert all_records() == before


def test_effective_version_is_never_corrected(draft: MethodVersion, supervisor: User) -> None:
    sign_in_force(draft, supervisor)
    assert "is effective; an effective version never changes. Record a new version." in refusal_of(
        correct_version, draft, by=supervisor, reason=WHY, limit=D("0.2")
    )


@pytest.mark.parametrize("change", [{"state": "draft"}, {"ratio": "2"}, {"limit": D("1")}, {"instructions": "x"}])
def test_effective_version_is_frozen_by_the_database(change: dict, draft: MethodVersion, supervisor: User) -> None:
    sign_in_force(draft, supervisor)
    with (
        pytest.raises(DatabaseError, match=r"frozen|cannot go"),
        transaction.atomic(),
        audit.event("method_version.correct", by=supervisor),
    ):
        MethodVersion.objects.filter(pk=draft.pk).update(**change)
