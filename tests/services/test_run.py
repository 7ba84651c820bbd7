"""Runs: started, submitted, approved, returned, void, and what stands in the way of each."""

from __future__ import annotations

from decimal import Decimal as D

import pytest
from django.db import DatabaseError, transaction

from labrecords.errors import Refused
from labrecords.models import AuditEvent, Investigation, Run, Signature
from labrecords.services.replicate import record_readings
from labrecords.services.run import approve_run, correct_run, return_run, start_run, submit_run, void_run
from labrecords.services.titrant import withdraw_lot
from tests.factories.bench import Bench, approved_standardization, compute, fill, set_up_bench, started_run
from tests.factories.people import signed_by

pytestmark = pytest.mark.django_db
WHY = "the burette leaked at its tap"


@pytest.fixture
def bench(analyst, supervisor) -> Bench:
    bench = set_up_bench(analyst, supervisor)
    approved_standardization(bench)
    return bench


@pytest.fixture
def run(bench) -> Run:
    return started_run(bench)


@pytest.fixture
def computed(run, analyst) -> Run:
    fill(run, [("10.00", "12.30"), ("10.00", "12.35"), ("10.00", "12.30")], by=analyst)
    compute(run)
    return run


@pytest.fixture
def submitted(computed, analyst) -> Run:
    return submit_run(computed, by=analyst, credentials=signed_by(analyst))


def last_event() -> AuditEvent:
    return AuditEvent.objects.order_by("-id")[0]


def test_start_run_reserves_a_number_and_fixes_what_it_rests_on(run, bench):
    assert run.number.startswith("R-")
    assert run.number.endswith("-00001")
    assert run.standardization.lot == bench.lot
    assert run.replicates.filter(kind="sample").count() == 3
    assert run.instruments.get(part="burette").calibration.instrument == bench.burette


def test_start_run_refuses_another_while_one_is_open(run, bench):
    with pytest.raises(Refused, match="Finish that one first"):
        start_run(
            run.sample, by=bench.analyst, method_version=run.method_version, lot=bench.lot,
            instruments={"burette": bench.burette, "pipette": bench.pipette},
        )  # fmt: skip


def test_start_run_refuses_a_withdrawn_lot_with_every_reason(run, bench, analyst):
    void_run(run, by=analyst, credentials=signed_by(analyst), reason=WHY)
    withdraw_lot(
        bench.lot,
        by=bench.supervisor,
        credentials=signed_by(bench.supervisor),
        reason="it is cloudy",
        is_doubtful=False,
    )
    with pytest.raises(Refused) as refusal:
        start_run(run.sample, by=analyst, method_version=run.method_version, lot=bench.lot, instruments={})
    assert "Choose a lot in use" in str(refusal.value)
    assert "Burette: choose one" in str(refusal.value)


def test_submit_run_signs_what_was_read(submitted, analyst):
    signature = Signature.objects.get(noun="run", record_id=submitted.pk)
    assert (signature.meaning, signature.printed_name) == ("performed by", "Ines Castell")
    assert '"end":"12.30"' in signature.content
    assert submitted.state == "submitted"
    assert submitted.calculation is not None


def test_submit_run_refuses_before_the_result_is_there(run, analyst):
    with pytest.raises(Refused, match="has no result yet"):
        submit_run(run, by=analyst, credentials=signed_by(analyst))


def test_submit_run_refuses_a_result_older_than_its_readings(computed, analyst):
    row = computed.replicates.filter(kind="sample")[0]
    record_readings(row, by=analyst, values={"temperature": D("21.5")})
    with pytest.raises(Refused, match="waiting for the worker"):
        submit_run(computed, by=analyst, credentials=signed_by(analyst))


def test_submit_run_refuses_a_wrong_password_and_changes_nothing(computed, analyst):
    with pytest.raises(Refused, match="The password is not right"):
        submit_run(computed, by=analyst, credentials=signed_by(analyst, "guessed"))
    assert Run.objects.get(pk=computed.pk).state == "open"


def test_submit_run_changes_nothing_when_the_trail_cannot_be_written(computed, analyst, break_trail):
    break_trail()
    with pytest.raises(DatabaseError):
        submit_run(computed, by=analyst, credentials=signed_by(analyst))
    assert Run.objects.get(pk=computed.pk).state == "open"


def test_approve_run_takes_a_second_person(submitted, supervisor):
    approve_run(submitted, by=supervisor, credentials=signed_by(supervisor))
    assert Run.objects.get(pk=submitted.pk).state == "approved"
    assert (last_event().action, last_event().actor) == ("run.approve", supervisor)


def test_approve_run_refuses_the_supervisor_who_entered_a_reading(run, analyst, other_supervisor):
    fill(run, [("10.00", "12.30")] * 3, by=other_supervisor)
    compute(run)
    submit_run(run, by=analyst, credentials=signed_by(analyst))
    with pytest.raises(Refused, match="Another supervisor reviews it"):
        approve_run(run, by=other_supervisor, credentials=signed_by(other_supervisor))


def test_approve_run_refuses_an_analyst_and_an_open_run(computed, analyst, supervisor):
    with pytest.raises(Refused, match="not a supervisor"):
        approve_run(computed, by=analyst, credentials=signed_by(analyst))
    with pytest.raises(Refused, match="Only a submitted record is reviewed"):
        approve_run(computed, by=supervisor, credentials=signed_by(supervisor))


def test_return_run_gives_it_back_with_the_reason(submitted, supervisor):
    with pytest.raises(Refused, match="say in a sentence why"):
        return_run(submitted, by=supervisor, credentials=signed_by(supervisor), reason="")
    return_run(submitted, by=supervisor, credentials=signed_by(supervisor), reason=WHY)
    again = Run.objects.get(pk=submitted.pk)
    assert (again.state, again.returned_reason) == ("open", WHY)


def test_void_run_stays_visible_with_its_reason(computed, analyst):
    void_run(computed, by=analyst, credentials=signed_by(analyst), reason=WHY)
    assert Run.objects.get(pk=computed.pk).void_reason == WHY
    assert not Investigation.objects.exists()


def test_correct_run_keeps_the_digits_of_a_loss(run, analyst):
    correct_run(run, by=analyst, remarks="cloudy", loss_percent=D("1.20"))
    assert str(Run.objects.get(pk=run.pk).loss_percent) == "1.20"


@pytest.mark.parametrize("column", ["remarks = 'x'", "started_by_id = sample_id", "number = 'R-1'", "state = 'open'"])
def test_approved_run_is_frozen_by_the_database(submitted, supervisor, column):
    approve_run(submitted, by=supervisor, credentials=signed_by(supervisor))
    with pytest.raises(DatabaseError, match=r"frozen|cannot go"), transaction.atomic():
        Run.objects.raw(f"UPDATE labrecords_run SET {column} RETURNING id")[0]
