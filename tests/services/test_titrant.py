"""Titrants and their lots."""

from __future__ import annotations

from datetime import date
from decimal import Decimal as D
from typing import Any

import pytest
from django.db import DatabaseError, connection

from labrecords.models import LotState, Question, Signature, Titrant, TitrantLot, User
from labrecords.services.titrant import expire_lot, supersede_titrant, withdraw_lot
from tests.factories.bench import Bench, approved_run, approved_standardization, started_standardization
from tests.factories.people import signed_by
from tests.factories.register import days_ago, phthalate, rule_of, some_lot, some_substance, some_titrant
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the bottle stood open over night"


def supersede(titrant: Titrant, by: User, **given: Any) -> Titrant:
    rule = rule_of(titrant.substance, titrant.standard_substance, code="NaOH-0.1b", restandardization_days=7)
    return supersede_titrant(titrant, by=by, **{"reason": "it drifts within a week"} | rule | given)


def withdraw(lot: TitrantLot, by: User, **given: Any) -> TitrantLot:
    return withdraw_lot(lot, by=by, **{"credentials": signed_by(by), "reason": WHY, "is_doubtful": True} | given)


def lot_that_lapsed(bench: Bench, as_owner) -> TitrantLot:
    """Recorded under a simulated clock, a year ago, like the demo's history."""
    with as_owner(), connection.cursor() as cursor:
        cursor.execute("SELECT set_config('labrecords.simulated_clock', (now() - interval '1 year')::text, false)")
        return some_lot(bench.titrant, by=bench.analyst, number="N25-001", prepared_on=days_ago(370))


def test_record_titrant_keeps_its_rule(supervisor: User) -> None:
    alkali, khp = some_substance(supervisor), phthalate(supervisor)
    with one_event("titrant.record"):
        some_titrant(supervisor, alkali, khp)
    stored = Titrant.objects.get(code="NaOH-0.1")
    assert (stored.nominal, stored.standard_substance, stored.shelf_life_days) == (D("0.1"), khp, 45)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"code": ""}, "Code is empty"),
        ({"name": " "}, "Name is empty"),
        ({"window_low": D("0.2")}, "Window is 0.2 to 0.105 mol/L"),
        ({"window_low": D("-0.1")}, "it must lie above 0"),
        ({"restandardization_days": 0}, "Restandardization days is 0"),
        ({"shelf_life_days": 999_999}, "whole days from 1 to 3650"),
        ({"standard_substance": None}, "choose a primary standard or another titrant"),
        ({"standard_mass": D("0")}, "Mass of the standard is 0 g"),
        ({"replicates_needed": 1}, "Replicates needed is 1"),
        ({"limit": D("0")}, "Limit is 0"),
        ({"limit_kind": "feeling"}, "Limit kind is “feeling”"),
        ({"ratio": "two"}, "Ratio is 'two'"),
        ({"indicator_bias": D("2")}, "Indicator is 2 mL past equivalence"),
        ({"nominal": D("0.1000001")}, "up to 6 decimals are kept"),
    ],
)
def test_record_titrant_refuses(supervisor: User, given: dict, sentence: str) -> None:
    alkali, khp = some_substance(supervisor), phthalate(supervisor)
    assert sentence in refusal_of(some_titrant, supervisor, alkali, khp, **given)


def test_record_titrant_against_another_needs_an_aliquot(bench: Bench) -> None:
    acid = some_substance(bench.supervisor, name="hydrochloric acid", formula="HCl")
    given = {"code": "HCl-0.1", "standard_titrant": bench.titrant, "aliquot": None}
    assert "Aliquot is empty" in refusal_of(some_titrant, bench.supervisor, acid, None, **given)


def test_record_titrant_is_no_work_of_an_analyst(analyst: User, supervisor: User) -> None:
    alkali, khp = some_substance(supervisor), phthalate(supervisor)
    assert "neither administrator nor supervisor" in refusal_of(some_titrant, analyst, alkali, khp)


def test_supersede_titrant_keeps_the_rule_of_its_lots(bench: Bench) -> None:
    with one_event("titrant.supersede"):
        new = supersede(bench.titrant, bench.supervisor)
    bench.lot.refresh_from_db()
    assert bench.lot.titrant == bench.titrant
    assert "is superseded. Choose NaOH-0.1b" in refusal_of(some_lot, bench.lot.titrant, by=bench.analyst, number="N2")
    assert some_lot(new, by=bench.analyst, number="N26-118").titrant == new


def test_supersede_titrant_refuses_twice(bench: Bench) -> None:
    supersede(bench.titrant, bench.supervisor)
    assert "superseded already. Open NaOH-0.1b" in refusal_of(supersede, bench.titrant, bench.supervisor, code="N3")


def test_record_lot_starts_in_quarantine_and_lasts_its_shelf_life(bench: Bench) -> None:
    with one_event("titrant_lot.record"):
        lot = some_lot(bench.titrant, by=bench.analyst, number="N26-118", prepared_on=days_ago(3))
    assert (lot.state, lot.expires_on) == (LotState.QUARANTINED, days_ago(3 - 45))


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"number": ""}, "Number is empty"),
        ({"number": "n26-117"}, "N26-117 is recorded already"),
        ({"number": "N" * 31}, "31 characters: up to 30"),
        ({"prepared_on": days_ago(-3)}, "Prepared on is"),
        ({"prepared_on": date(1926, 1, 1)}, "years ago. Check the year"),
        ({"expires_on": days_ago(-60)}, "after the shelf life of 45 days"),
        ({"expires_on": days_ago(2)}, "Expires on is"),
        ({"reagent_lot": " "}, "Reagent lot is empty"),
        ({"volume": D("0")}, "Volume is 0 mL"),
        ({"volume": D("12.34")}, "up to 1 decimals are kept"),
    ],
)
def test_record_lot_refuses(bench: Bench, given: dict, sentence: str) -> None:
    said = {"number": "N26-118"} | given
    assert sentence in refusal_of(some_lot, bench.titrant, by=bench.analyst, **said)


def test_record_lot_names_somebody_who_prepares_solutions(bench: Bench, auditor: User) -> None:
    said = {"number": "N26-118", "prepared_by": auditor}
    assert "Prepared by is Rhea Lindqvist" in refusal_of(some_lot, bench.titrant, by=bench.analyst, **said)
    assert "One of them looks after titrant lots" in refusal_of(some_lot, bench.titrant, by=auditor, number="N9")


def test_record_lot_without_a_trail_changes_nothing(bench: Bench, break_trail) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        some_lot(bench.titrant, by=bench.analyst, number="N26-118")
    assert all_records() == before


def test_lot_comes_into_use_with_its_first_approved_standardization(bench: Bench) -> None:
    assert bench.lot.state == LotState.QUARANTINED
    approved_standardization(bench)
    assert bench.lot.state == LotState.IN_USE


def test_withdraw_lot_that_is_doubtful_questions_what_rests_on_it(bench: Bench) -> None:
    standardization = approved_standardization(bench)
    run = approved_run(bench)
    with one_event("titrant_lot.withdraw"):
        withdraw(bench.lot, bench.supervisor)
    asked = [question.standardization or question.run for question in Question.objects.all()]
    assert asked == [standardization, run]
    assert Signature.objects.get(noun="titrant_lot").reason == WHY


def test_withdraw_lot_that_is_empty_questions_nothing(bench: Bench) -> None:
    approved_standardization(bench)
    withdraw(bench.lot, bench.supervisor, is_doubtful=False, reason="the bottle is empty")
    bench.lot.refresh_from_db()
    assert bench.lot.state == LotState.WITHDRAWN
    assert not Question.objects.exists()
    assert "is withdrawn. Prepare a new lot" in refusal_of(started_standardization, bench)


def test_withdraw_lot_refuses(bench: Bench) -> None:
    assert "is not a supervisor" in refusal_of(withdraw, bench.lot, bench.analyst)
    assert "Reason is ''" in refusal_of(withdraw, bench.lot, bench.supervisor, reason="")
    wrong = signed_by(bench.supervisor, "wrong horse 42")
    assert "The password is not right" in refusal_of(withdraw, bench.lot, bench.supervisor, credentials=wrong)
    withdraw(bench.lot, bench.supervisor)
    assert "withdrawn already" in refusal_of(withdraw, bench.lot, bench.supervisor)


def test_withdraw_lot_without_a_trail_changes_nothing(bench: Bench, break_trail) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        withdraw(bench.lot, bench.supervisor)
    assert all_records() == before


def test_expire_lot_after_its_shelf_life(bench: Bench, as_owner) -> None:
    lot = lot_that_lapsed(bench, as_owner)
    with one_event("titrant_lot.expire"):
        expire_lot(lot, by=bench.analyst)
    lot.refresh_from_db()
    assert lot.state == LotState.EXPIRED
    assert "is expired; it is out of use already" in refusal_of(expire_lot, lot, by=bench.analyst)


def test_expire_lot_refuses_before_its_time(bench: Bench, auditor: User) -> None:
    assert "Withdraw it to end its use now" in refusal_of(expire_lot, bench.lot, by=bench.analyst)
    assert "neither analyst nor supervisor" in refusal_of(expire_lot, bench.lot, by=auditor)
