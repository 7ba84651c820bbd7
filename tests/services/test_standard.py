"""Reference standards from quarantine to their withdrawal."""

from __future__ import annotations

from decimal import Decimal as D
from typing import Any

import pytest
from django.db import DatabaseError

from labrecords.models import LotState, Question, ReferenceStandard, Signature, User
from labrecords.queries.standard import standards_in_use
from labrecords.services import audit
from labrecords.services.standard import (
    correct_standard,
    issue_standard,
    supersede_standard,
    withdraw_standard,
)
from tests.factories.bench import Bench, approved_run, approved_standardization, started_standardization
from tests.factories.people import signed_by
from tests.factories.register import CERTIFICATE, days_ago, issued_standard, phthalate, some_standard
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the certificate was recalled"
VALUES: dict[str, Any] = {
    "supplier_lot": "L2609-41", "purity": D("0.9995"), "purity_expanded": D("0.0004"), "purity_k": D("2"),
    "received_on": days_ago(60), "expires_on": days_ago(-600),
}  # fmt: skip


@pytest.fixture
def standard(analyst: User, supervisor: User) -> ReferenceStandard:
    return some_standard(analyst, phthalate(supervisor))


def correct(standard: ReferenceStandard, by: User, **given: Any) -> ReferenceStandard:
    return correct_standard(standard, by=by, **VALUES | {"reason": "typed from the wrong page"} | given)


def supersede(standard: ReferenceStandard, by: User, **given: Any) -> ReferenceStandard:
    said = VALUES | {
        "number": "KHP-26-02",
        "substance": standard.substance,
        "reason": "a corrected certificate",
    }
    return supersede_standard(standard, by=by, **said | given)


def withdraw(standard: ReferenceStandard, by: User, **given: Any) -> ReferenceStandard:
    return withdraw_standard(standard, by=by, **{"credentials": signed_by(by), "reason": WHY} | given)


def test_record_standard_starts_in_quarantine(analyst: User, supervisor: User) -> None:
    khp = phthalate(supervisor)
    with one_event("standard.record"):
        standard = some_standard(analyst, khp)
    assert standard.state == LotState.QUARANTINED
    assert not standards_in_use(khp, day=days_ago(0)).exists()


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"number": " "}, "Number is empty"),
        ({"number": "../KHP"}, "Number is “../KHP”"),
        ({"purity": D("99.98")}, "99.98 % is written 0.9998"),
        ({"purity": D("0.99980001")}, "up to 7 decimals are kept"),
        ({"purity_expanded": D("0")}, "U of the purity is 0"),
        ({"purity_expanded": D("1")}, "above 0 and below the purity"),
        ({"purity_k": D("0.5")}, "Coverage factor is 0.5"),
        ({"supplier_lot": ""}, "Supplier's lot is empty"),
        ({"received_on": days_ago(-3)}, "Received on is"),
        ({"expires_on": days_ago(60)}, "Expires on is"),
        ({"expires_on": days_ago(-36500)}, "years ahead"),
        ({"certificate": ("a.exe", "application/pdf", b"MZ")}, "neither PDF, PNG nor JPEG"),
        (
            {"certificate": ("a.pdf", "application/pdf", b"%PDF-" + bytes(5 * 1024 * 1024))},
            "larger than 5 MB",
        ),
    ],
)
def test_record_standard_refuses(analyst: User, supervisor: User, given: dict, sentence: str) -> None:
    khp = phthalate(supervisor)
    assert sentence in refusal_of(some_standard, analyst, khp, **given)


def test_record_standard_refuses_a_number_twice(standard: ReferenceStandard, analyst: User) -> None:
    given = {"number": "khp-26-01"}
    assert "KHP-26-01 is recorded already" in refusal_of(some_standard, analyst, standard.substance, **given)


def test_record_standard_is_no_work_of_an_administrator(administrator: User, supervisor: User) -> None:
    khp = phthalate(supervisor)
    assert "neither analyst nor supervisor" in refusal_of(some_standard, administrator, khp)


def test_record_standard_without_a_trail_changes_nothing(analyst: User, supervisor: User, break_trail) -> None:
    khp = phthalate(supervisor)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        some_standard(analyst, khp)
    assert all_records() == before


def test_issue_standard_puts_it_in_use(standard: ReferenceStandard, supervisor: User) -> None:
    with one_event("standard.issue"):
        issue_standard(standard, by=supervisor)
    assert list(standards_in_use(standard.substance, day=days_ago(0))) == [standard]
    assert not standards_in_use(standard.substance, day=days_ago(-601)).exists()


def test_issue_standard_refuses(analyst: User, supervisor: User) -> None:
    khp = phthalate(supervisor)
    bare = some_standard(analyst, khp, certificate=None)
    assert "has no certificate" in refusal_of(issue_standard, bare, by=supervisor)
    old = some_standard(analyst, khp, number="KHP-25-09", expires_on=days_ago(1))
    assert "lapsed on" in refusal_of(issue_standard, old, by=supervisor)
    good = some_standard(analyst, khp, number="KHP-26-03")
    assert "is not a supervisor" in refusal_of(issue_standard, good, by=analyst)
    issue_standard(good, by=supervisor)
    assert "Only a lot in quarantine" in refusal_of(issue_standard, good, by=supervisor)


def test_issue_standard_without_a_trail_changes_nothing(
    standard: ReferenceStandard, supervisor: User, break_trail
) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        issue_standard(standard, by=supervisor)
    assert all_records() == before


def test_correct_standard_changes_a_lot_in_quarantine(standard: ReferenceStandard, analyst: User) -> None:
    with one_event("standard.correct"):
        correct(standard, analyst)
    standard.refresh_from_db()
    assert standard.purity == D("0.9995")
    assert standard.certificate is not None


def test_correct_standard_takes_another_certificate(standard: ReferenceStandard, analyst: User) -> None:
    correct(standard, analyst, certificate=("better.png", "image/png", b"\x89PNG\r\n\x1a\n..."))
    standard.refresh_from_db()
    assert standard.certificate.name == "better.png"


def test_correct_standard_refuses(standard: ReferenceStandard, analyst: User, auditor: User, supervisor: User) -> None:
    assert "neither analyst nor supervisor" in refusal_of(correct, standard, auditor)
    assert "Reason is ''" in refusal_of(correct, standard, analyst, reason="")
    assert "99.95 % is written 0.9995" in refusal_of(correct, standard, analyst, purity=D("99.95"))
    issue_standard(standard, by=supervisor)
    assert "only a lot in quarantine is corrected" in refusal_of(correct, standard, analyst)


def test_database_freezes_the_purity_of_an_issued_standard(standard: ReferenceStandard, supervisor: User) -> None:
    issue_standard(standard, by=supervisor)
    with pytest.raises(DatabaseError, match="its purity is frozen"), audit.event("x.y", by=supervisor):
        ReferenceStandard.objects.filter(pk=standard.pk).update(purity=D("0.5"))


def test_supersede_standard_uses_the_old_one_for_nothing_new(bench: Bench) -> None:
    with one_event("standard.supersede"):
        new = supersede(bench.standard, bench.supervisor, certificate=CERTIFICATE)
    assert new.state == LotState.QUARANTINED
    assert not standards_in_use(new.substance, day=days_ago(0)).exists()
    assert "is superseded by KHP-26-02. Choose that one" in refusal_of(started_standardization, bench)


def test_supersede_standard_refuses(standard: ReferenceStandard, analyst: User, supervisor: User) -> None:
    assert "is not a supervisor" in refusal_of(supersede, standard, analyst)
    assert "KHP-26-01 is recorded already" in refusal_of(supersede, standard, supervisor, number="KHP-26-01")
    assert "Reason is ''" in refusal_of(supersede, standard, supervisor, reason="")
    supersede(standard, supervisor)
    assert "superseded already. Open KHP-26-02" in refusal_of(supersede, standard, supervisor, number="KHP-26-03")
    assert "Issue that one" in refusal_of(issue_standard, standard, by=supervisor)


def test_withdraw_standard_questions_what_rests_on_it(bench: Bench) -> None:
    standardization = approved_standardization(bench)
    run = approved_run(bench)
    with one_event("standard.withdraw"):
        withdraw(bench.standard, bench.supervisor)
    asked = [question.standardization or question.run for question in Question.objects.all()]
    assert asked == [standardization, run]
    signature = Signature.objects.get(noun="standard")
    assert (signature.meaning, signature.record_number) == ("withdrawn by", "KHP-26-01")


def test_withdraw_standard_stops_a_titration_on_it(bench: Bench) -> None:
    withdraw(bench.standard, bench.supervisor)
    assert "KHP-26-01 is withdrawn. Choose one in use" in refusal_of(started_standardization, bench)


def test_withdraw_standard_refuses(bench: Bench) -> None:
    assert "is not a supervisor" in refusal_of(withdraw, bench.standard, bench.analyst)
    assert "Reason is 'no'" in refusal_of(withdraw, bench.standard, bench.supervisor, reason="no")
    other = signed_by(bench.analyst)
    assert "Sign with your own name" in refusal_of(withdraw, bench.standard, bench.supervisor, credentials=other)
    withdraw(bench.standard, bench.supervisor)
    assert "is withdrawn already" in refusal_of(withdraw, bench.standard, bench.supervisor)


def test_withdraw_standard_without_a_trail_changes_nothing(bench: Bench, break_trail) -> None:
    approved_standardization(bench)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        withdraw(bench.standard, bench.supervisor)
    assert all_records() == before


def test_issued_standard_of_another_substance_is_not_offered(bench: Bench) -> None:
    issued_standard(bench.analyst, bench.titrant.substance, supervisor=bench.supervisor, number="X-1")
    assert list(standards_in_use(bench.standard.substance, day=days_ago(0))) == [bench.standard]
