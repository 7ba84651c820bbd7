"""Products and the versions of their specifications."""

from __future__ import annotations

from decimal import Decimal as D
from typing import Any

import pytest
from django.db import DatabaseError, transaction
from django.utils import timezone

from labrecords.models import MethodVersion, Product, Signature, Specification, SpecificationLimit, User
from labrecords.queries.product import effective_specification
from labrecords.services import audit
from labrecords.services.product import (
    make_specification_effective,
    record_product,
    record_specification,
    supersede_product,
)
from tests.factories.bench import Bench, some_version
from tests.factories.people import signed_by
from tests.factories.products import some_batch
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the customer asked for narrower limits"


@pytest.fixture
def version(bench: Bench) -> MethodVersion:
    return some_version(bench)


@pytest.fixture
def product(supervisor: User) -> Product:
    return record_product(by=supervisor, code="TV", name="table vinegar")


@pytest.fixture
def draft(product: Product, version: MethodVersion, supervisor: User) -> Specification:
    return specify(product, supervisor, [limit_of(version)])


def limit_of(version: MethodVersion, **given: Any) -> dict[str, Any]:
    """The limits of acidity, unless told otherwise."""
    return {
        "method": version.method, "lower": D("0.70"), "upper": D("0.78"), "unit": version.unit, "places": 2,
        "rounding": "half_up", "rule": "simple", "guard_factor": D(1),
    } | given  # fmt: skip


def specify(product: Product, by: User, limits: list[dict[str, Any]], reason: str = WHY) -> Specification:
    return record_specification(product, by=by, reason=reason, limits=limits)


def sign_in_force(specification: Specification, by: User, **given: Any) -> Specification:
    return make_specification_effective(specification, by=by, **{"credentials": signed_by(by)} | given)


def test_record_product_has_no_limits_yet(supervisor: User) -> None:
    with one_event("product.record"):
        product = record_product(by=supervisor, code="AV", name="apple vinegar")
    assert (str(Product.objects.get()), effective_specification(product)) == ("apple vinegar", None)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"code": "tv"}, "Code is 'tv': capital letters, digits and hyphens, a letter first"),
        ({"code": "T" * 21}, "20 at most"),
        ({"code": "TV"}, "Code TV is in use. Choose another."),
        ({"name": " "}, "Name is empty: write the product's name."),
        ({"name": "n" * 121}, "121 characters: up to 120 are kept."),
    ],
)
def test_record_product_refuses(product: Product, supervisor: User, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(record_product, **{"by": supervisor, "code": "AV", "name": "apple vinegar"} | given)


def test_products_are_a_supervisors(draft: Specification, version: MethodVersion, analyst: User) -> None:
    sentence, named = (
        "Ines Castell is not a supervisor. A supervisor makes specifications.",
        {"code": "AV", "name": "x"},
    )
    assert sentence in refusal_of(record_product, by=analyst, **named)
    assert sentence in refusal_of(supersede_product, draft.product, by=analyst, **named, reason=WHY)
    assert sentence in refusal_of(specify, draft.product, analyst, [limit_of(version)])
    assert sentence in refusal_of(sign_in_force, draft, analyst)


def test_supersede_product_keeps_the_old_one(product: Product, supervisor: User) -> None:
    named = {"code": "TV-5", "name": "table vinegar 5 %"}
    assert "Reason is empty: say why the product is superseded." in refusal_of(
        supersede_product, product, by=supervisor, **named, reason=" "
    )
    with one_event("product.supersede"):
        new = supersede_product(product, by=supervisor, **named, reason=WHY)
    assert Product.objects.get(code="TV").superseded_by == new
    assert "TV is superseded already." in refusal_of(
        supersede_product, product, by=supervisor, code="TV-6", name="table vinegar 6 %", reason=WHY
    )


def test_record_specification_numbers_on_and_is_a_draft(
    product: Product, version: MethodVersion, supervisor: User
) -> None:
    with one_event("specification.record"):
        first = specify(product, supervisor, [limit_of(version)])
    second = specify(product, supervisor, [limit_of(version, lower=None)])
    assert [(each.number, each.state) for each in (first, second)] == [(1, "draft"), (2, "draft")]
    assert (first.limits.get().lower, second.limits.get().lower) == (D("0.70"), None)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"lower": None, "upper": None}, "TA has no limit: give a lower limit, an upper limit or both."),
        ({"lower": D("0.80")}, "TA: lower limit 0.80 is not below upper limit 0.78."),
        ({"lower": D("0.78")}, "TA: lower limit 0.78 is not below upper limit 0.78."),
        ({"figures": 0}, "TA: significant figures are 0; from 1 to 15, or left empty."),
        ({"figures": 16}, "TA: significant figures are 16"),
        ({"unit": "g/L"}, "TA reports g/100 mL; the limit is in g/L."),
        ({"places": 9}, "TA: Places is 9: decimals from 0 to 8 are expected."),
        ({"figures": 99999}, "TA: Figures is 99999: a whole number from 0 to 32767 is expected."),
        ({"upper": D("1000000")}, "TA: Upper is 1000000: up to 6 digits before the decimal mark are kept."),
        ({"lower": D("0.1234567")}, "TA: Lower is 0.1234567: up to 6 decimals are kept."),
        ({"guard_factor": D("-1")}, "TA: Guard factor is -1: a number not below 0."),
        ({"rule": "luck"}, "TA: Rule is “luck”; expected one of simple, guard."),
        ({"rounding": "down"}, "TA: Rounding is “down”; expected one of half_up, half_even."),
    ],
)
def test_record_specification_refuses(
    product: Product, version: MethodVersion, supervisor: User, given: dict, sentence: str
) -> None:
    assert sentence in refusal_of(specify, product, supervisor, [limit_of(version, **given)])


def test_record_specification_has_each_test_once_and_a_reason(
    product: Product, version: MethodVersion, supervisor: User
) -> None:
    said = refusal_of(specify, product, supervisor, [limit_of(version)] * 2, reason=" ")
    assert "TA stands twice; each test has one line." in said
    assert "Reason is empty: say why this version is made." in said
    assert "a specification has at least one test" in refusal_of(specify, product, supervisor, [])


def test_make_specification_effective_signs_the_limits(draft: Specification, supervisor: User) -> None:
    with one_event("specification.make_effective"):
        sign_in_force(draft, supervisor)
    stored, signature = Specification.objects.get(), Signature.objects.get(noun="specification")
    assert (stored.state, stored.effective_from) == ("effective", timezone.localdate())
    assert (signature.meaning, signature.record_id, signature.reason) == ("made effective by", draft.pk, WHY)
    for said in ('"product":"TV"', '"method":"TA"', '"lower":"0.700000"', '"rule":"simple"'):
        assert said in signature.content


def test_make_specification_effective_supersedes_the_one_before(
    draft: Specification, version: MethodVersion, supervisor: User
) -> None:
    sign_in_force(draft, supervisor)
    second = sign_in_force(specify(draft.product, supervisor, [limit_of(version, upper=D("0.76"))]), supervisor)
    assert Specification.objects.get(pk=draft.pk).state == "superseded"
    assert effective_specification(draft.product) == second
    assert "TV, specification 1 is superseded. Only a draft is made effective." in refusal_of(
        sign_in_force, draft, supervisor
    )


def test_batch_keeps_the_limits_it_was_made_under(
    draft: Specification, version: MethodVersion, bench: Bench, supervisor: User
) -> None:
    batch = some_batch(bench, sign_in_force(draft, supervisor).product)
    sign_in_force(specify(draft.product, supervisor, [limit_of(version, upper=D("0.76"))]), supervisor)
    batch.refresh_from_db()
    assert batch.specification.limits.get().upper == D("0.78")


def test_make_specification_effective_needs_the_own_password_and_the_trail(
    draft: Specification, supervisor: User, break_trail: Any
) -> None:
    wrong = signed_by(supervisor, "guess")
    assert "The password is not right" in refusal_of(sign_in_force, draft, supervisor, credentials=wrong)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        sign_in_force(draft, supervisor)
    assert all_records() == before


@pytest.mark.parametrize("change", [{"state": "draft"}, {"reason": "x"}, {"number": 9}])
def test_effective_specification_is_frozen_by_the_database(
    change: dict, draft: Specification, supervisor: User
) -> None:
    sign_in_force(draft, supervisor)
    with (
        pytest.raises(DatabaseError, match=r"frozen|cannot go"),
        transaction.atomic(),
        audit.event("specification.correct", by=supervisor),
    ):
        Specification.objects.filter(pk=draft.pk).update(**change)


@pytest.mark.parametrize("is_new", [True, False])
def test_limits_of_an_effective_specification_are_frozen_by_the_database(
    is_new: bool, draft: Specification, supervisor: User
) -> None:
    sign_in_force(draft, supervisor)
    row = SpecificationLimit.objects.get()
    row.upper = D("0.90")
    if is_new:
        row.pk, row._state.adding = None, True
    with (
        pytest.raises(DatabaseError, match="its limits are frozen"),
        transaction.atomic(),
        audit.event("specification.correct", by=supervisor),
    ):
        row.save()
