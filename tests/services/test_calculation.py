"""Calculations: asked for, claimed, computed once and stored for ever."""

from __future__ import annotations

import time
from concurrent.futures import ThreadPoolExecutor
from datetime import timedelta
from typing import Any

import pytest
from django.db import DatabaseError, connection, transaction
from django.utils import timezone

from analysis import VERSION
from labrecords.canonical import sha256_of
from labrecords.models import AuditEvent, Calculation, CalculationRequest, Run, Standardization, User
from labrecords.queries.calculation import latest_request
from labrecords.services import audit
from labrecords.services.calculation import (
    MOST_ATTEMPTS,
    ask_for_calculation,
    claim_request,
    overdue_requests,
    record_calculation,
)
from labrecords.services.replicate import exclude_replicate
from labrecords.services.run import correct_run, submit_run, void_run
from tests.factories.bench import (
    TITRES,
    WEIGHED,
    Bench,
    approved_standardization,
    compute,
    fill,
    started_run,
    started_standardization,
)
from tests.factories.people import signed_by
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db
ROWS = [("10.00", titre) for titre in TITRES]


@pytest.fixture
def run(bench: Bench) -> Run:
    approved_standardization(bench)
    return started_run(bench)


@pytest.fixture
def asked(run: Run, analyst: User) -> CalculationRequest:
    """The one request of a sheet that is filled."""
    fill(run, ROWS, by=analyst)
    return CalculationRequest.objects.get(run=run)


def in_its_own_session(request_id: int) -> Calculation | None:
    """What one of several workers does."""
    try:
        return record_calculation(request_id)
    finally:
        connection.close()


def counts() -> tuple[int, int]:
    return Calculation.objects.count(), AuditEvent.objects.count()


def test_every_reading_asks_for_the_same_calculation(asked: CalculationRequest, run: Run) -> None:
    assert (asked.state, asked.attempts, asked.requested_by.username) == ("waiting", 0, "icastell")
    assert (
        asked.requested_at
        == AuditEvent.objects.filter(subject=run.number, action="replicate.record").first().occurred_at
    )


def test_request_belongs_to_who_asked_last(asked: CalculationRequest, run: Run, other_analyst: User) -> None:
    correct_run(run, by=other_analyst, remarks="cloudy")
    again = CalculationRequest.objects.get(run=run)
    assert (again.pk, again.requested_by) == (asked.pk, other_analyst)
    assert again.requested_at > asked.requested_at


def test_asking_sends_the_worker_only_after_commit(
    run: Run, analyst: User, django_capture_on_commit_callbacks: Any
) -> None:
    with django_capture_on_commit_callbacks() as callbacks:
        correct_run(run, by=analyst, remarks="cloudy")
    assert len(callbacks) == 1


def test_claim_request_counts_the_attempt_first(asked: CalculationRequest) -> None:
    assert claim_request(asked.pk)
    assert latest_request(asked.run).attempts == 1


def test_claim_request_gives_up_after_five_attempts(asked: CalculationRequest) -> None:
    assert [claim_request(asked.pk) for _ in range(MOST_ATTEMPTS + 2)] == [True] * 5 + [False, False]
    asked.refresh_from_db()
    assert (asked.state, asked.attempts) == ("failed", 5)
    assert asked.problem == "The worker gave up after five attempts. Tell the administrator."
    assert record_calculation(asked.pk) is None
    assert not Calculation.objects.filter(run=asked.run).exists()


def test_request_that_failed_leaves_room_for_the_next(asked: CalculationRequest, run: Run, analyst: User) -> None:
    for _ in range(MOST_ATTEMPTS + 1):
        claim_request(asked.pk)
    correct_run(run, by=analyst, remarks="cloudy")
    compute(run)
    assert (latest_request(run).state, latest_request(run).attempts) == ("done", 1)


def test_claim_request_refuses_what_is_done_or_unknown(asked: CalculationRequest) -> None:
    compute(asked.run)
    before = all_records()
    assert not claim_request(asked.pk)
    assert not claim_request(asked.pk + 1000)
    assert all_records() == before


def test_record_calculation_stores_what_was_used_and_what_came_out(asked: CalculationRequest) -> None:
    with one_event("calculation.record"):
        calculation = record_calculation(asked.pk)
    stored = Calculation.objects.get(pk=calculation.pk)
    assert (stored.number, stored.engine_version, stored.unit) == (1, VERSION, "g/100 mL")
    assert stored.inputs_sha256 == sha256_of(stored.inputs)
    assert '"end":"12.35"' in stored.inputs
    assert (stored.value, stored.expanded_uncertainty) == (stored.outputs["value"], stored.outputs["U"])
    assert (stored.is_acceptable, stored.needs_person, stored.outcome) == (True, False, "")
    event = AuditEvent.objects.order_by("-id")[0]
    assert (stored.computed_at, stored.requested_by, event.subject) == (
        event.occurred_at,
        event.actor,
        asked.run.number,
    )


def test_record_calculation_agrees_with_the_titre_by_hand(asked: CalculationRequest, bench: Bench) -> None:
    """(mean titre - blank) c M / V; C2H4O2 from the abridged atomic weights 2021 of IUPAC: 60.052 g/mol."""
    concentration = Standardization.objects.get(lot=bench.lot).calculation.value
    by_hand = (36.95 / 3 - 0.05) * concentration * 60.052 / 10.00 / 10
    assert record_calculation(asked.pk).value == pytest.approx(by_hand, rel=1e-9)


def test_record_calculation_of_a_standardization_has_no_outcome(bench: Bench, analyst: User) -> None:
    record = started_standardization(bench)
    fill(record, WEIGHED, by=analyst)
    compute(record)
    calculation = record.calculations.get()
    assert (calculation.run, calculation.unit, calculation.outcome) == (None, "mol/L", "")


def test_second_worker_finds_nothing_to_do(asked: CalculationRequest) -> None:
    first = record_calculation(asked.pk)
    before = counts()
    assert record_calculation(asked.pk) is None
    assert counts() == before
    assert latest_request(asked.run).calculation == first


def test_same_inputs_give_the_same_calculation_and_no_new_row(
    asked: CalculationRequest, run: Run, analyst: User
) -> None:
    first = record_calculation(asked.pk)
    correct_run(run, by=analyst, remarks="the remarks are no input")
    before = counts()
    again = latest_request(run)
    assert record_calculation(again.pk) == first
    assert counts() == before
    again.refresh_from_db()
    assert (again.state, again.calculation) == ("done", first)


def test_new_inputs_give_the_next_number_and_keep_the_first(asked: CalculationRequest, run: Run, analyst: User) -> None:
    first = record_calculation(asked.pk)
    row = run.replicates.filter(kind="sample")[0]
    exclude_replicate(row, by=analyst, cause="spill", sentence="A drop ran down the outside of the flask.")
    compute(run)
    assert list(run.calculations.order_by("number").values_list("number", "is_acceptable")) == [(1, True), (2, False)]
    assert Calculation.objects.get(pk=first.pk).outputs == first.outputs


@pytest.mark.parametrize("state", ["submitted", "void"])
def test_record_calculation_leaves_a_record_that_is_no_longer_open(
    state: str, asked: CalculationRequest, run: Run, analyst: User, as_enemy: Any
) -> None:
    compute(run)
    close = submit_run if state == "submitted" else void_run
    reason = {} if state == "submitted" else {"reason": "the burette leaked"}
    close(run, by=analyst, credentials=signed_by(analyst), **reason)
    as_enemy("UPDATE labrecords_calculationrequest SET state = 'waiting' WHERE id = %s", asked.pk)
    before = counts()
    assert record_calculation(asked.pk) is None
    asked.refresh_from_db()
    assert (counts(), asked.state) == (before, "failed")
    assert asked.problem == f"{run.number} is {state}; it is not computed again."


def test_record_calculation_keeps_the_sentence_of_what_cannot_be_computed(
    asked: CalculationRequest, as_enemy: Any
) -> None:
    as_enemy("UPDATE labrecords_methodversion SET unit = 'kelvin'")
    assert record_calculation(asked.pk) is None
    asked.refresh_from_db()
    assert asked.state == "failed"
    assert "kelvin" in asked.problem
    assert not asked.run.calculations.exists()


def test_record_calculation_without_a_trail_leaves_the_request_waiting(asked: CalculationRequest, break_trail) -> None:
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        record_calculation(asked.pk)
    assert all_records() == before


def test_overdue_requests_are_those_that_waited_too_long(asked: CalculationRequest) -> None:
    assert overdue_requests(seconds=600) == []
    CalculationRequest.objects.filter(pk=asked.pk).update(requested_at=timezone.now() - timedelta(seconds=601))
    assert overdue_requests(seconds=600) == [asked.pk]
    record_calculation(asked.pk)
    assert overdue_requests(seconds=600) == []


@pytest.mark.parametrize(
    "statement", ["UPDATE labrecords_calculation SET value = 1", "DELETE FROM labrecords_calculation"]
)
def test_calculation_is_never_changed(statement: str, asked: CalculationRequest, analyst: User) -> None:
    record_calculation(asked.pk)
    with (
        pytest.raises(DatabaseError, match=r"permission denied|only ever added"),
        transaction.atomic(),
        audit.event("calculation.correct", by=analyst),
        connection.cursor() as cursor,
    ):
        cursor.execute(statement)


def test_calculation_is_not_added_to_a_submitted_run(asked: CalculationRequest, run: Run, analyst: User) -> None:
    compute(run)
    submit_run(run, by=analyst, credentials=signed_by(analyst))
    forged = Calculation.objects.get(run=run)
    forged.pk, forged.number, forged._state.adding = None, 2, True
    with (
        pytest.raises(DatabaseError, match="belongs to a record that is submitted"),
        transaction.atomic(),
        audit.event("calculation.record", by=analyst),
    ):
        forged.save()


def test_many_workers_at_once_compute_one_request_once(worker: Any, bench: Bench) -> None:
    worker.kill()  # these six do its work
    record = started_standardization(bench)
    fill(record, WEIGHED, by=bench.analyst)
    request = latest_request(record)
    with ThreadPoolExecutor(6) as pool:
        found = [calculation for calculation in pool.map(in_its_own_session, [request.pk] * 6) if calculation]
    assert found == [record.calculations.get()]
    assert AuditEvent.objects.filter(action="calculation.record").count() == 1


def test_worker_waits_for_who_changes_the_record(worker: Any, bench: Bench, other_analyst: User) -> None:
    worker.kill()  # this test is the worker
    record = started_standardization(bench)
    fill(record, WEIGHED, by=bench.analyst)
    with ThreadPoolExecutor(1) as pool:
        with transaction.atomic():
            Standardization.objects.select_for_update(of=("self",)).get(pk=record.pk)
            found = pool.submit(in_its_own_session, latest_request(record).pk)
            time.sleep(0.5)
            ask_for_calculation(record, by=other_analyst, at=timezone.now())
        assert found.result().requested_by == other_analyst


def test_worker_computes_what_was_read(worker: Any, bench: Bench) -> None:
    record = started_standardization(bench)
    fill(record, WEIGHED, by=bench.analyst)
    worker.wait_until(lambda: latest_request(record).state == "done")
    assert record.calculations.order_by("-number")[0].is_acceptable


def test_worker_finds_what_a_lost_message_left_waiting(worker: Any, bench: Bench) -> None:
    record = started_standardization(bench)
    worker.kill()
    fill(record, WEIGHED, by=bench.analyst)
    worker.forget()
    worker.start()
    assert latest_request(record).state == "waiting"
    CalculationRequest.objects.update(requested_at=timezone.now() - timedelta(seconds=11))
    worker.send("labrecords.tasks.sweep_waiting")
    worker.wait_until(lambda: latest_request(record).state == "done")
    assert record.calculations.get().is_acceptable
