"""Batches and their samples: recorded under the limits of the day, and decided on by a second person."""

from __future__ import annotations

from dataclasses import replace
from datetime import timedelta
from typing import Any

import pytest
from django.db import DatabaseError, transaction
from django.utils import timezone

from labrecords.models import Batch, MethodVersion, Product, Question, Sample, Signature, User
from labrecords.queries.batch import required_tests
from labrecords.rules.batch import is_ready
from labrecords.services import audit
from labrecords.services.batch import (
    hold_batch,
    record_batch,
    record_sample,
    reject_batch,
    release_batch,
    void_sample,
)
from labrecords.services.product import make_specification_effective, record_product, record_specification
from labrecords.services.question import answer_question
from labrecords.services.run import start_run, void_run
from labrecords.services.standard import withdraw_standard
from tests.factories.bench import Bench, approved_standardization, some_sample, some_version
from tests.factories.people import signed_by
from tests.factories.products import approved_run_of, some_batch, some_product, submitted_run_of
from tests.factories.register import days_ago
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the seal of the tank was broken"


@pytest.fixture
def version(bench: Bench) -> MethodVersion:
    approved_standardization(bench)
    return some_version(bench)


@pytest.fixture
def product(bench: Bench, version: MethodVersion) -> Product:
    return some_product(bench, version)


@pytest.fixture
def batch(bench: Bench, product: Product) -> Batch:
    return some_batch(bench, product)


def record(product: Product, by: User, **given: Any) -> Batch:
    return record_batch(**{"by": by, "number": "TV-2611-05", "product": product, "made_on": days_ago(1)} | given)


def draw(batch: Batch, by: User, **given: Any) -> Sample:
    said = {"number": "TV-S-9", "drawn_at": timezone.now(), "drawn_by": "the filling line", "batch": batch}
    return record_sample(by=by, **said | given)


def decide(service: Any, batch: Batch, by: User, **given: Any) -> Batch:
    return service(batch, by=by, **{"credentials": signed_by(by), "reason": WHY} | given)


def status_of(batch: Batch) -> str:
    return required_tests(batch)[0].status


def test_record_batch_takes_the_limits_of_the_day(product: Product, bench: Bench) -> None:
    with one_event("batch.record"):
        batch = record(product, bench.analyst)
    assert (batch.state, batch.specification.number, batch.disposed_by) == ("testing", 1, None)
    limits = [{"method": each.method, "upper": each.upper, "unit": each.unit, "places": 2, "rounding": "half_up",
               "rule": "simple"} for each in batch.specification.limits.all()]  # fmt: skip
    newer = record_specification(product, by=bench.supervisor, reason="no lower limit", limits=limits)
    make_specification_effective(newer, by=bench.supervisor, credentials=signed_by(bench.supervisor))
    assert Batch.objects.get(pk=batch.pk).specification.number == 1
    assert record(product, bench.analyst, number="TV-2611-06").specification.number == 2


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"number": " "}, "Number is empty: write what stands on the label"),
        ({"number": "tv-2611-04"}, "TV-2611-04 is recorded already"),
        ({"number": "TV/2611"}, "Number is “TV/2611”: letters, digits, spaces"),
        ({"number": "T" * 31}, "31 characters: up to 30 are kept"),
        ({"size": "L" * 41}, "41 characters: up to 40 are kept"),
        ({"made_on": days_ago(-2)}, "in the future; expected a day up to"),
    ],
)
def test_record_batch_refuses(batch: Batch, bench: Bench, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(record, batch.product, bench.analyst, **given)


def test_record_batch_needs_effective_limits_and_somebody_of_the_bench(bench: Bench, auditor: User) -> None:
    product = record_product(by=bench.supervisor, code="AV", name="apple vinegar")
    said = refusal_of(record, product, auditor)
    assert "apple vinegar has no effective specification. Make one effective first." in said
    assert "Rhea Lindqvist is neither analyst nor supervisor" in said


def test_record_sample_keeps_what_was_drawn(batch: Batch, bench: Bench) -> None:
    with one_event("sample.record"):
        sample = draw(batch, bench.analyst, place="tank 3", is_urgent=True)
    stored = Sample.objects.get(pk=sample.pk)
    assert (stored.batch, stored.recorded_by, stored.place, stored.is_urgent) == (batch, bench.analyst, "tank 3", True)


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"number": ""}, "Number is empty: write what stands on the label"),
        ({"number": "tv-2611-04-1"}, "TV-2611-04-1 is recorded already"),
        ({"number": "S?1"}, "Number is “S?1”"),
        ({"place": "p" * 121}, "121 characters: up to 120 are kept"),
        ({"drawn_at": timezone.now() + timedelta(days=1)}, "in the future; expected a time up to now"),
        ({"drawn_by": " "}, "Drawn by is empty"),
    ],
)
def test_record_sample_refuses(batch: Batch, bench: Bench, given: dict, sentence: str) -> None:
    assert sentence in refusal_of(draw, batch, bench.analyst, **given)


def test_record_sample_has_one_source_and_somebody_of_the_bench(
    batch: Batch, version: MethodVersion, bench: Bench, auditor: User
) -> None:
    control = some_sample(bench, version).control_sample
    assert "choose one of the two" in refusal_of(draw, batch, bench.analyst, control_sample=control)
    unsourced = {"number": "S-9", "drawn_at": timezone.now(), "drawn_by": "the bench"}
    assert "choose one of the two" in refusal_of(record_sample, by=bench.analyst, **unsourced)
    assert "neither analyst nor supervisor" in refusal_of(draw, batch, auditor)


def test_void_sample_says_why(batch: Batch, bench: Bench) -> None:
    with one_event("sample.void"):
        void_sample(batch.samples.get(), by=bench.analyst, reason=WHY)
    assert batch.samples.get().void_reason == WHY


def test_void_sample_refuses_a_sample_with_runs(
    batch: Batch, version: MethodVersion, bench: Bench, auditor: User
) -> None:
    sample = batch.samples.get()
    assert "say in a sentence why the sample is void" in refusal_of(void_sample, sample, by=bench.analyst, reason=" ")
    assert "An analyst or a supervisor voids samples" in refusal_of(void_sample, sample, by=auditor, reason=WHY)
    run = submitted_run_of(bench, batch, version)
    assert "has runs; void those first" in refusal_of(void_sample, sample, by=bench.analyst, reason=WHY)
    void_run(run, by=bench.analyst, credentials=signed_by(bench.analyst), reason=WHY)
    assert void_sample(sample, by=bench.analyst, reason=WHY).void_reason == WHY


def test_batch_is_ready_only_when_its_test_is_approved(batch: Batch, version: MethodVersion, bench: Bench) -> None:
    assert (status_of(batch), is_ready(required_tests(batch))) == ("missing", False)
    run = submitted_run_of(bench, batch, version)
    assert (status_of(batch), is_ready(required_tests(batch))) == ("submitted", False)
    void_run(run, by=bench.analyst, credentials=signed_by(bench.analyst), reason=WHY)
    assert status_of(batch) == "missing"
    approved_run_of(bench, batch, version)
    assert (status_of(batch), is_ready(required_tests(batch))) == ("approved", True)


def test_release_batch_is_signed_over_every_result(batch: Batch, version: MethodVersion, bench: Bench) -> None:
    run = approved_run_of(bench, batch, version)
    with one_event("batch.release"):
        decide(release_batch, batch, bench.supervisor, reason="")
    stored, signature = Batch.objects.get(pk=batch.pk), Signature.objects.get(noun="batch")
    assert (stored.state, stored.disposed_by) == ("released", bench.supervisor)
    assert (signature.meaning, signature.record_id) == ("released by", batch.pk)
    assert f'"number":"{run.number}"' in signature.content
    assert '"outcome":"conforms"' in signature.content


def test_release_batch_refuses_a_missing_and_an_unreviewed_test(
    batch: Batch, version: MethodVersion, bench: Bench
) -> None:
    assert "TA is missing. Run the test on a sample" in refusal_of(decide, release_batch, batch, bench.supervisor)
    run = submitted_run_of(bench, batch, version)
    assert f"TA: {run.number} waits for review" in refusal_of(decide, release_batch, batch, bench.supervisor)


def test_release_batch_refuses_an_open_run_beside_an_approved_one(
    batch: Batch, version: MethodVersion, bench: Bench
) -> None:
    approved_run_of(bench, batch, version)
    again = start_run(batch.samples.get(), by=bench.analyst, method_version=version, lot=bench.lot,
                      instruments={"burette": bench.burette, "pipette": bench.pipette})  # fmt: skip
    assert f"{again.number} is open. Its analyst submits it" in refusal_of(
        decide, release_batch, batch, bench.supervisor
    )


def test_release_batch_refuses_while_a_result_is_investigated(
    batch: Batch, version: MethodVersion, bench: Bench
) -> None:
    run = submitted_run_of(bench, batch, version, "15.00")
    sentence = f"TA: {run.number} is under investigation. Conclude the investigation."
    assert sentence in refusal_of(decide, release_batch, batch, bench.supervisor)
    assert sentence in refusal_of(decide, reject_batch, batch, bench.supervisor)
    assert decide(hold_batch, batch, bench.supervisor).state == "on hold"


def test_release_batch_refuses_a_questioned_run_until_it_is_answered(
    batch: Batch, version: MethodVersion, bench: Bench
) -> None:
    run, by = approved_run_of(bench, batch, version), bench.supervisor
    withdraw_standard(bench.standard, by=by, credentials=signed_by(by), reason="moisture in part of the lot")
    assert f"TA: {run.number} is in question" in refusal_of(decide, release_batch, batch, by)
    said = "Our bottle was dried before use and its control results are good."
    for question in Question.objects.all():
        answer_question(question, by=by, credentials=signed_by(by), answer=said)
    assert decide(release_batch, batch, by).state == "released"


def test_release_batch_is_no_work_of_an_analyst_nor_of_who_performed_it(
    batch: Batch, version: MethodVersion, bench: Bench, other_supervisor: User
) -> None:
    run = approved_run_of(replace(bench, analyst=other_supervisor), batch, version)
    assert "Ines Castell is not a supervisor" in refusal_of(decide, release_batch, batch, bench.analyst)
    for service in (release_batch, reject_batch):
        said = refusal_of(decide, service, batch, other_supervisor)
        assert f"You performed or entered {run.number}. Another supervisor decides on the batch." in said


@pytest.mark.parametrize("service", [release_batch, reject_batch, hold_batch])
def test_decision_needs_the_own_password_and_the_trail(
    service: Any, batch: Batch, version: MethodVersion, bench: Bench, break_trail
) -> None:
    approved_run_of(bench, batch, version)
    by = bench.supervisor
    assert "The password is not right" in refusal_of(decide, service, batch, by, credentials=signed_by(by, "guess"))
    foreign = signed_by(bench.analyst)
    assert "Sign with your own name" in refusal_of(decide, service, batch, by, credentials=foreign)
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        decide(service, batch, by)
    assert all_records() == before


def test_reject_batch_may_be_done_before_every_test(batch: Batch, bench: Bench) -> None:
    assert "say in a sentence why the batch is rejected" in refusal_of(
        decide, reject_batch, batch, bench.supervisor, reason="bad"
    )
    with one_event("batch.reject"):
        decide(reject_batch, batch, bench.supervisor)
    stored = Batch.objects.get(pk=batch.pk)
    assert (stored.state, stored.disposition_reason) == ("rejected", WHY)
    assert Signature.objects.get(noun="batch").meaning == "rejected by"


def test_hold_batch_leaves_the_decision_open(batch: Batch, version: MethodVersion, bench: Bench) -> None:
    said = refusal_of(decide, hold_batch, batch, bench.analyst, reason="")
    assert "is not a supervisor" in said
    assert "say in a sentence why the batch is held" in said
    with one_event("batch.hold"):
        decide(hold_batch, batch, bench.supervisor)
    assert "is on hold. Only a batch in testing is put on hold" in refusal_of(
        decide, hold_batch, batch, bench.supervisor
    )
    approved_run_of(bench, batch, version)
    assert decide(release_batch, batch, bench.supervisor).state == "released"


@pytest.mark.parametrize(("service", "state"), [(release_batch, "released"), (reject_batch, "rejected")])
def test_disposition_is_final(service: Any, state: str, batch: Batch, version: MethodVersion, bench: Bench) -> None:
    approved_run_of(bench, batch, version)
    decide(service, batch, bench.supervisor)
    for other in (release_batch, reject_batch):
        said = refusal_of(decide, other, batch, bench.supervisor)
        assert f"TV-2611-04 is {state} already. A disposition is not changed." in said
    batch.refresh_from_db()
    assert f"is {state}. Nothing more is drawn from it" in refusal_of(draw, batch, bench.analyst)
    assert f"is {state}. Only a batch in testing" in refusal_of(decide, hold_batch, batch, bench.supervisor)


@pytest.mark.parametrize(
    "change", [{"state": "testing"}, {"number": "TV-1"}, {"made_on": days_ago(9)}, {"disposition_reason": "fine"}]
)
def test_released_batch_is_frozen_by_the_database(
    change: dict, batch: Batch, version: MethodVersion, bench: Bench
) -> None:
    approved_run_of(bench, batch, version)
    decide(release_batch, batch, bench.supervisor)
    with (
        pytest.raises(DatabaseError, match=r"frozen|cannot go"),
        transaction.atomic(),
        audit.event("batch.correct", by=bench.supervisor),
    ):
        Batch.objects.filter(pk=batch.pk).update(**change)
