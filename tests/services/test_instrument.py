"""Instruments and calibrations, and what a withdrawn calibration does to the results under it."""

from __future__ import annotations

from decimal import Decimal as D

import pytest
from django.db import DatabaseError

from labrecords.models import Instrument, InstrumentCalibration, Question, Signature, User
from labrecords.queries.instrument import calibration_at
from labrecords.services.instrument import (
    record_calibration,
    record_instrument,
    supersede_instrument,
    withdraw_calibration,
    withdraw_instrument,
)
from tests.factories.bench import Bench, approved_run, approved_standardization
from tests.factories.people import signed_by
from tests.factories.register import (
    CERTIFICATE,
    INSTRUMENTS,
    calibrated,
    days_ago,
    some_calibration,
    some_instrument,
)
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the weights were the wrong ones"


def supersede(old: Instrument, by: User, **given: object) -> Instrument:
    new = {"identifier": "B-17", "kind": "burette", "unit": "mL"} | INSTRUMENTS["burette"]
    return supersede_instrument(old, by=by, **{"reason": "a new stopcock"} | new | {"identifier": "B-17"} | given)


def withdraw(calibration: InstrumentCalibration, by: User, **given: object) -> InstrumentCalibration:
    said = {"credentials": signed_by(by), "reason": WHY}
    return withdraw_calibration(calibration, by=by, **said | given)


def test_record_instrument_keeps_what_was_typed(administrator: User) -> None:
    with one_event("instrument.record"):
        instrument = some_instrument(administrator)
    stored = Instrument.objects.get(identifier="B-07")
    assert (stored.pk, stored.capacity, stored.tolerance) == (instrument.pk, D("50"), D("0.05"))


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"identifier": ""}, "Identifier is empty"),
        ({"identifier": "B/7"}, "Identifier is “B/7”: letters, digits"),
        ({"identifier": "record"}, "a word that the site uses itself"),
        ({"unit": "g"}, "Unit is “g”; mL is expected"),
        ({"resolution": D("0")}, "Resolution is 0"),
        ({"resolution": D("0.0000001")}, "up to 6 decimals are kept"),
        ({"tolerance": D("-0.1")}, "Tolerance is -0.1"),
        ({"capacity": None}, "Capacity is empty: a burette needs its volume"),
        ({"capacity": D("-50")}, "Capacity is -50"),
        ({"capacity": D("123456789")}, "up to 8 digits before the decimal mark"),
    ],
)
def test_record_instrument_refuses(supervisor: User, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(some_instrument, supervisor, **given)


def test_record_instrument_refuses_a_kind_it_does_not_know(supervisor: User) -> None:
    given = {"identifier": "X-1", "unit": "mL", "resolution": D("1"), "tolerance": D("1")}
    said = refusal_of(record_instrument, by=supervisor, kind="spoon", **given)
    assert "Kind is “spoon”; expected one of burette" in said


def test_record_instrument_refuses_the_same_identifier_in_small_letters(supervisor: User) -> None:
    some_instrument(supervisor)
    assert "B-07 is recorded already" in refusal_of(some_instrument, supervisor, identifier="b-07")


def test_record_instrument_is_no_work_of_an_analyst(analyst: User) -> None:
    assert "neither administrator nor supervisor" in refusal_of(some_instrument, analyst)


def test_supersede_instrument_keeps_the_old_one(supervisor: User) -> None:
    old = some_instrument(supervisor)
    with one_event("instrument.supersede"):
        new = supersede(old, supervisor)
    old.refresh_from_db()
    assert (old.identifier, old.superseded_by) == ("B-07", new)
    assert "B-07 is superseded already. Open B-17" in refusal_of(supersede, old, supervisor, identifier="B-18")


def test_withdraw_instrument_takes_it_out_of_use(supervisor: User) -> None:
    burette = calibrated(supervisor)
    with one_event("instrument.withdraw"):
        withdraw_instrument(burette, by=supervisor, reason="the tip is broken")
    burette.refresh_from_db()
    assert burette.withdrawn_reason == "the tip is broken"
    assert "withdrawn already" in refusal_of(withdraw_instrument, burette, by=supervisor, reason="again and again")
    assert "is not calibrated again" in refusal_of(some_calibration, burette, by=supervisor)


def test_withdraw_instrument_refuses_without_reason(supervisor: User) -> None:
    burette = some_instrument(supervisor)
    assert "Reason is ' '" in refusal_of(withdraw_instrument, burette, by=supervisor, reason=" ")


def test_record_calibration_keeps_corrections_and_certificate(analyst: User, supervisor: User) -> None:
    burette = some_instrument(supervisor)
    with one_event("instrument.calibrate"):
        calibration = some_calibration(
            burette,
            by=analyst,
            corrections=[("10.00", "0.012"), ("20.00", "-0.004")],
            certificate=CERTIFICATE,
        )
    stored = InstrumentCalibration.objects.get(pk=calibration.pk)
    assert stored.corrections == [["10.00", "0.012"], ["20.00", "-0.004"]]
    assert stored.certificate is not None
    assert bytes(stored.certificate.content) == CERTIFICATE[2]


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"calibrated_on": days_ago(-3)}, "Calibrated on is"),
        ({"due_on": days_ago(31)}, "Due on is"),
        ({"due_on": days_ago(-36500)}, "years ahead. Check the year"),
        ({"performed_by": " "}, "Performed by is empty"),
        ({"uncertainty": D("0")}, "Expanded uncertainty is 0"),
        ({"slope_percent": D("9.9")}, "Electrode slope is 9.9 %"),
        ({"corrections": [("10.00",)]}, "Correction 1 is “10.00”: a reading and a correction in mL"),
        ({"corrections": [("nan", "nan")]}, "Correction 1 is “nan nan”"),
        ({"corrections": [("10.00", "12")]}, "Correction 1 is 12 mL; within 1 mL"),
        ({"corrections": [("60.00", "0.01")]}, "a reading from 0 to 50 mL"),
        ({"corrections": [("10.00", "0.01"), ("10.00", "0.02")]}, "Write them upward"),
        ({"certificate": ("a.pdf", "application/pdf", b"MZ no pdf")}, "neither PDF, PNG nor JPEG"),
    ],
)
def test_record_calibration_refuses(supervisor: User, given: dict, sentence: str) -> None:
    burette = some_instrument(supervisor)
    assert sentence in refusal_of(some_calibration, burette, by=supervisor, **given)


def test_record_calibration_is_no_work_of_an_auditor(supervisor: User, auditor: User) -> None:
    burette = some_instrument(supervisor)
    assert "records no calibrations" in refusal_of(some_calibration, burette, by=auditor)


def test_record_calibration_without_a_trail_changes_nothing(supervisor: User, break_trail) -> None:
    burette = some_instrument(supervisor)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        record_calibration(
            burette, by=supervisor, calibrated_on=days_ago(1), due_on=days_ago(-9), performed_by="the bench",
            certificate=CERTIFICATE,
        )  # fmt: skip
    assert all_records() == before


def test_withdraw_calibration_leaves_the_one_before_it_in_force(supervisor: User, bench: Bench) -> None:
    newer = some_calibration(bench.burette, by=supervisor, calibrated_on=days_ago(2))
    with one_event("instrument.withdraw_calibration"):
        withdraw(newer, supervisor)
    newer.refresh_from_db()
    held = calibration_at(bench.burette, at=newer.withdrawn_at)
    assert held is not None
    assert held.calibrated_on == days_ago(30)
    assert Signature.objects.get(noun="calibration").reason == WHY


def test_withdraw_calibration_questions_each_record_once(supervisor: User, bench: Bench) -> None:
    standardization = approved_standardization(bench)
    run = approved_run(bench)
    withdraw(bench.burette.calibrations.get(), supervisor)
    asked = [question.standardization or question.run for question in Question.objects.all()]
    assert asked == [standardization, run]
    assert WHY in Question.objects.earliest("pk").because


def test_withdraw_calibration_of_the_pipette_questions_the_run_alone(supervisor: User, bench: Bench) -> None:
    approved_standardization(bench)
    run = approved_run(bench)
    withdraw(bench.pipette.calibrations.get(), supervisor)
    assert [question.run for question in Question.objects.all()] == [run]


def test_withdraw_calibration_refuses(analyst: User, supervisor: User, bench: Bench) -> None:
    calibration = bench.burette.calibrations.get()
    assert "is not a supervisor" in refusal_of(withdraw, calibration, analyst)
    assert "Reason is ''" in refusal_of(withdraw, calibration, supervisor, reason="")
    wrong = signed_by(supervisor, "wrong horse 42")
    assert "The password is not right" in refusal_of(withdraw, calibration, supervisor, credentials=wrong)
    withdraw(calibration, supervisor)
    assert "withdrawn already" in refusal_of(withdraw, calibration, supervisor)


def test_withdraw_calibration_without_a_trail_changes_nothing(supervisor: User, bench: Bench, break_trail) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        withdraw(bench.burette.calibrations.get(), supervisor)
    assert all_records() == before
