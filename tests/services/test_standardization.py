"""Standardizations: started, submitted, approved, returned, void, and what stands in the way of each."""

from __future__ import annotations

from datetime import timedelta
from decimal import Decimal as D
from typing import Any

import pytest
from django.db import DatabaseError, transaction

from labrecords.models import AuditEvent, Question, Signature, Standardization, TitrantLot, User
from labrecords.queries.standardization import in_force
from labrecords.services import audit
from labrecords.services.replicate import record_readings
from labrecords.services.standard import withdraw_standard
from labrecords.services.standardization import (
    approve_standardization,
    correct_standardization,
    return_standardization,
    start_standardization,
    submit_standardization,
    void_standardization,
)
from labrecords.services.titrant import withdraw_lot
from tests.factories.bench import (
    WEIGHED,
    Bench,
    approved_run,
    approved_standardization,
    compute,
    fill,
    started_standardization,
)
from tests.factories.people import signed_by
from tests.factories.register import days_ago, issued_standard, some_lot, some_substance, some_titrant
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the balance was not level"
SIGNINGS = [submit_standardization, approve_standardization, return_standardization, void_standardization]


@pytest.fixture
def opened(bench: Bench) -> Standardization:
    return started_standardization(bench)


@pytest.fixture
def computed(opened: Standardization, bench: Bench) -> Standardization:
    fill(opened, WEIGHED, by=bench.analyst)
    compute(opened)
    return opened


@pytest.fixture
def submitted(computed: Standardization, bench: Bench) -> Standardization:
    return sign_off(submit_standardization, computed, bench.analyst)


def start(bench: Bench, by: User | None = None, **given: Any) -> Standardization:
    instruments = {"burette": bench.burette, "balance": bench.balance}
    said = {"by": by or bench.analyst, "instruments": instruments, "reference_standard": bench.standard}
    return start_standardization(**{"lot": bench.lot} | said | given)


def sign_off(service: Any, record: Standardization, by: User, **given: Any) -> Standardization:
    if service in (return_standardization, void_standardization):
        given.setdefault("reason", WHY)
    return service(record, by=by, **{"credentials": signed_by(by)} | given)


def stored(record: Standardization) -> Standardization:
    return Standardization.objects.get(pk=record.pk)


def test_start_standardization_fixes_what_it_rests_on(bench: Bench) -> None:
    with one_event("standardization.start"):
        record = start(bench)
    assert (record.number[:2], record.number[-6:], record.state) == ("S-", "-00001", "open")
    assert (record.basis, record.reference_standard, record.against) == ("mass", bench.standard, None)
    assert record.replicates.filter(kind="sample").count() == 3
    assert record.instruments.get(part="balance").calibration.instrument == bench.balance


def test_start_standardization_refuses_what_was_not_chosen(bench: Bench) -> None:
    said = refusal_of(start, bench, reference_standard=None, instruments={})
    assert "Choose either a reference standard or a lot of the other titrant, one of the two." in said
    assert "Burette: choose one. Pipette: choose one." in said


def test_start_standardization_refuses_the_wrong_person_and_the_wrong_standard(bench: Bench) -> None:
    acid = some_substance(bench.supervisor, name="benzoic acid", formula="C7H6O2")
    other = issued_standard(bench.analyst, acid, supervisor=bench.supervisor, number="BA-26-01")
    said = refusal_of(start, bench, bench.supervisor, reference_standard=other)
    assert "Maren Okafor is not an analyst. An analyst standardizes titrants." in said
    assert "BA-26-01 is benzoic acid; sodium hydroxide 0.1 mol/L needs potassium hydrogen phthalate." in said


def test_start_standardization_refuses_while_one_is_unfinished(opened: Standardization, bench: Bench) -> None:
    assert f"{opened.number} of lot N26-117 is open. Finish that one first." in refusal_of(start, bench)


def test_start_standardization_refuses_instruments_out_of_their_part(bench: Bench, as_enemy: Any) -> None:
    mixed = {"burette": bench.balance, "balance": bench.balance, "pipette": bench.pipette}
    said = refusal_of(start, bench, instruments=mixed)
    assert "Burette W-01 is a" in said
    assert "Pipette P-10 has no part here; leave it out." in said
    as_enemy("UPDATE labrecords_instrumentcalibration SET due_on = current_date - 2")
    assert "B-07 has no calibration that holds today" in refusal_of(start, bench)


def test_start_standardization_refuses_what_lapsed(bench: Bench, as_enemy: Any) -> None:
    as_enemy("UPDATE labrecords_referencestandard SET expires_on = current_date - 2")
    as_enemy("UPDATE labrecords_titrantlot SET prepared_on = current_date - 50, expires_on = current_date - 2")
    said = refusal_of(start, bench)
    assert "Lot N26-117 passed its shelf life on" in said
    assert "Reference standard KHP-26-01 lapsed on" in said


def test_start_standardization_refuses_what_is_withdrawn(bench: Bench) -> None:
    by, signed = bench.supervisor, signed_by(bench.supervisor)
    withdraw_standard(bench.standard, by=by, credentials=signed, reason="recalled by its maker")
    withdraw_lot(bench.lot, by=by, credentials=signed, reason="it is cloudy", is_doubtful=False)
    said = refusal_of(start, bench)
    assert "Lot N26-117 is withdrawn. Prepare a new lot." in said
    assert "Reference standard KHP-26-01 is withdrawn. Choose one in use." in said


def acid_lot(bench: Bench) -> TitrantLot:
    """A lot of the acid that is standardized against the lot of the bench."""
    acid = some_substance(bench.supervisor, name="hydrochloric acid", formula="HCl")
    rule = {"code": "HCl-0.1", "name": "hydrochloric acid 0.1 mol/L", "standard_titrant": bench.titrant}
    titrant = some_titrant(bench.supervisor, acid, None, **rule, aliquot=D("10"), standard_mass=None)
    return some_lot(titrant, by=bench.analyst, number="H26-020")


def test_start_standardization_against_a_lot_that_has_its_concentration(bench: Bench) -> None:
    given = {"lot": acid_lot(bench), "reference_standard": None, "against": bench.lot,
             "instruments": {"burette": bench.burette, "pipette": bench.pipette}}  # fmt: skip
    assert "Lot N26-117 has no approved standardization on" in refusal_of(start, bench, **given)
    assert "is standardized against NaOH-0.1, not by mass" in refusal_of(
        start, bench, **given | {"against": None, "reference_standard": bench.standard}
    )
    first = approved_standardization(bench)
    record = start(bench, **given)
    assert (record.basis, record.against, record.reference_standard) == ("titrant", first, None)


def test_start_standardization_by_mass_refuses_another_lot(bench: Bench) -> None:
    approved_standardization(bench)
    said = refusal_of(start, bench, reference_standard=None, against=bench.lot)
    assert "is standardized by mass, not against another titrant" in said


def test_correct_standardization_writes_the_remarks(opened: Standardization, bench: Bench) -> None:
    with one_event("standardization.correct"):
        correct_standardization(opened, by=bench.analyst, remarks="warm room")
    assert stored(opened).remarks == "warm room"
    refused = refusal_of(correct_standardization, opened, by=bench.supervisor, remarks="cold room")
    assert "an analyst changes it while it is open" in refused


def test_submit_standardization_signs_what_was_read(submitted: Standardization) -> None:
    signature = Signature.objects.get(noun="standardization", record_id=submitted.pk)
    assert (signature.meaning, signature.printed_name) == ("performed by", "Ines Castell")
    assert '"amount":"0.4210"' in signature.content
    assert (stored(submitted).state, stored(submitted).calculation) == ("submitted", submitted.calculations.get())


def test_submit_standardization_refuses_before_the_result_is_there(opened: Standardization, bench: Bench) -> None:
    assert "has no result yet" in refusal_of(sign_off, submit_standardization, opened, bench.analyst)
    fill(opened, WEIGHED, by=bench.analyst)
    assert "is waiting for the worker" in refusal_of(sign_off, submit_standardization, opened, bench.analyst)
    compute(opened)
    assert "Maren Okafor is not an analyst" in refusal_of(sign_off, submit_standardization, opened, bench.supervisor)


def test_submit_standardization_refuses_replicates_that_scatter(opened: Standardization, bench: Bench) -> None:
    fill(opened, [*WEIGHED[:2], ("0.4223", "21.70")], by=bench.analyst)
    compute(opened)
    assert "0.25" in refusal_of(sign_off, submit_standardization, opened, bench.analyst)


def test_approve_standardization_gives_the_lot_its_concentration(submitted: Standardization, bench: Bench) -> None:
    with one_event("standardization.approve"):
        sign_off(approve_standardization, submitted, bench.supervisor)
    record, event = stored(submitted), AuditEvent.objects.order_by("-id")[0]
    assert (record.state, record.in_force_from, record.in_force_until) == ("approved", event.occurred_at, days_ago(-14))
    assert TitrantLot.objects.get(pk=bench.lot.pk).state == "in use"
    assert in_force(bench.lot, at=event.occurred_at) == record
    assert Signature.objects.filter(record_id=record.pk, meaning="reviewed by", signer=bench.supervisor).count() == 1


def test_approve_standardization_ends_with_the_shelf_life_of_the_lot(bench: Bench) -> None:
    bench.lot = some_lot(bench.titrant, by=bench.analyst, number="N26-118", expires_on=days_ago(-5))
    assert approved_standardization(bench).in_force_until == days_ago(-5)


def test_approve_standardization_takes_over_from_the_one_before(bench: Bench) -> None:
    first, second = approved_standardization(bench), approved_standardization(bench)
    assert stored(first).superseded_at == second.in_force_from
    assert in_force(bench.lot, at=second.in_force_from + timedelta(seconds=1)) == second
    assert in_force(bench.lot, at=second.in_force_from - timedelta(microseconds=1)) == first


def test_approve_standardization_takes_a_second_person(
    submitted: Standardization, bench: Bench, other_supervisor: User
) -> None:
    assert "not a supervisor" in refusal_of(sign_off, approve_standardization, submitted, bench.analyst)
    sign_off(return_standardization, submitted, bench.supervisor)
    row = submitted.replicates.filter(kind="sample")[0]
    record_readings(row, by=other_supervisor, values={"temperature": D("21.5")})
    compute(submitted)
    assert "is open, not submitted" in refusal_of(sign_off, approve_standardization, submitted, bench.supervisor)
    sign_off(submit_standardization, submitted, bench.analyst)
    said = refusal_of(sign_off, approve_standardization, submitted, other_supervisor)
    assert f"You performed or entered a part of {submitted.number}. Another supervisor reviews it." in said


def test_approve_standardization_refuses_a_concentration_outside_the_window(
    opened: Standardization, bench: Bench
) -> None:
    fill(opened, [("0.4210", "18.02"), ("0.4198", "17.97"), ("0.4223", "18.07")], by=bench.analyst)
    compute(opened)
    sign_off(submit_standardization, opened, bench.analyst)
    said = refusal_of(sign_off, approve_standardization, opened, bench.supervisor)
    assert "mol/L is outside the window 0.095 to 0.105 mol/L" in said


def test_approve_standardization_refuses_what_became_doubtful(submitted: Standardization, bench: Bench) -> None:
    by, signed = bench.supervisor, signed_by(bench.supervisor)
    withdraw_standard(bench.standard, by=by, credentials=signed, reason="recalled by its maker")
    withdraw_lot(bench.lot, by=by, credentials=signed, reason="it is cloudy", is_doubtful=False)
    said = refusal_of(sign_off, approve_standardization, submitted, by)
    assert f"{submitted.number} is in question" in said
    assert "Lot N26-117 is withdrawn. Void the standardization." in said
    assert "Reference standard KHP-26-01 is withdrawn. Void the standardization." in said


def test_return_standardization_gives_it_back_with_the_reason(submitted: Standardization, bench: Bench) -> None:
    assert "why the standardization is returned" in refusal_of(
        sign_off, return_standardization, submitted, bench.supervisor, reason=""
    )
    with one_event("standardization.return"):
        sign_off(return_standardization, submitted, bench.supervisor)
    assert (stored(submitted).state, stored(submitted).returned_reason) == ("open", WHY)
    assert "is open, not submitted" in refusal_of(sign_off, return_standardization, submitted, bench.supervisor)


def test_void_standardization_that_is_open_questions_nothing(computed: Standardization, bench: Bench) -> None:
    with one_event("standardization.void"):
        sign_off(void_standardization, computed, bench.analyst)
    assert (stored(computed).state, stored(computed).void_reason) == ("void", WHY)
    assert not Question.objects.exists()
    assert "is void already" in refusal_of(sign_off, void_standardization, computed, bench.analyst)


def test_void_standardization_questions_what_rests_on_it(bench: Bench, auditor: User) -> None:
    record, run = approved_standardization(bench), approved_run(bench)
    assert "is approved. A supervisor may void it" in refusal_of(sign_off, void_standardization, record, bench.analyst)
    assert "neither analyst nor supervisor" in refusal_of(sign_off, void_standardization, record, auditor)
    with one_event("standardization.void"):
        sign_off(void_standardization, record, bench.supervisor)
    question = Question.objects.get()
    assert (question.run, question.because) == (run, f"Standardization {record.number} is void: {WHY}")
    assert in_force(bench.lot, at=AuditEvent.objects.order_by("-id")[0].occurred_at) is None


@pytest.mark.parametrize("service", SIGNINGS)
def test_signing_needs_the_own_password_and_the_trail(
    service: Any, computed: Standardization, bench: Bench, break_trail: Any
) -> None:
    by = bench.analyst
    if service is not submit_standardization:
        sign_off(submit_standardization, computed, by)
        by = bench.supervisor
    assert "password is not right" in refusal_of(sign_off, service, computed, by, credentials=signed_by(by, "guess"))
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        sign_off(service, computed, by)
    assert all_records() == before


@pytest.mark.parametrize(
    "change", [{"state": "open"}, {"remarks": "x"}, {"in_force_until": days_ago(-99)}, {"calculation": None}]
)
def test_approved_standardization_is_frozen_by_the_database(bench: Bench, change: dict) -> None:
    record = approved_standardization(bench)
    with (
        pytest.raises(DatabaseError, match=r"frozen|cannot go"),
        transaction.atomic(),
        audit.event("standardization.correct", by=bench.analyst),
    ):
        Standardization.objects.filter(pk=record.pk).update(**change)
