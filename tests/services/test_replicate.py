"""Replicates: kept as typed, corrected with a reason, excluded with a cause."""

from __future__ import annotations

from decimal import Decimal as D

import pytest
from django.db import DatabaseError

from labrecords.errors import Refused
from labrecords.models import AuditChange, AuditEvent, CalculationRequest, Replicate
from labrecords.services.replicate import add_replicate, exclude_replicate, record_readings
from tests.factories.bench import approved_standardization, compute, fill, set_up_bench, started_run

pytestmark = pytest.mark.django_db
SENTENCE = "The tap was closed late and the solution was deep magenta."


@pytest.fixture
def run(analyst, supervisor):
    bench = set_up_bench(analyst, supervisor)
    approved_standardization(bench)
    return started_run(bench)


@pytest.fixture
def row(run) -> Replicate:
    return run.replicates.filter(kind="sample")[0]


@pytest.mark.parametrize("typed", ["12.3", "12.30", "12.35"])
def test_record_readings_keeps_the_places_typed(row, analyst, typed):
    record_readings(row, by=analyst, values={"start": D("0.00"), "end": D(typed)})
    assert str(Replicate.objects.get(pk=row.pk).end) == typed


def test_record_readings_asks_the_worker_after_commit(row, analyst, django_capture_on_commit_callbacks):
    with django_capture_on_commit_callbacks() as callbacks:
        record_readings(row, by=analyst, values={"end": D("12.30")})
    assert len(callbacks) == 1
    assert CalculationRequest.objects.filter(run=row.run, state="waiting").count() == 1


def test_kept_reading_changes_only_with_a_reason(row, analyst):
    record_readings(row, by=analyst, values={"end": D("12.30")})
    with pytest.raises(Refused, match="Say in a sentence why"):
        record_readings(row, by=analyst, values={"end": D("12.35")})
    record_readings(row, by=analyst, values={"end": D("12.35")}, reason="misread the meniscus")
    assert Replicate.objects.get(pk=row.pk).corrections == 1
    change = AuditChange.objects.order_by("-id").filter(table_name="labrecords_replicate")[0]
    assert (change.before["end"], change.after["end"]) == ("12.30", "12.35")


def test_same_value_again_writes_nothing(row, analyst):
    record_readings(row, by=analyst, values={"end": D("12.30")})
    events = AuditEvent.objects.count()
    record_readings(row, by=analyst, values={"end": D("12.30")})
    assert AuditEvent.objects.count() == events


@pytest.mark.parametrize(
    ("values", "sentence"),
    [
        ({"start": D("10.00"), "end": D("9.00")}, "9.00"),
        ({"end": D("60.00")}, "50"),
        ({"amount": D("-1")}, "-1"),
        ({"amount": D("5000")}, "5000"),
        ({"temperature": D("90")}, "90"),
        ({"colour": "pink"}, "Field is 'colour'"),
        ({"first_end": D("4.00")}, "this sheet reads one endpoint"),
        ({"drift": D("4")}, "not corrected for drift"),
        ({"minutes": D("4")}, "not corrected for drift"),
    ],
)
def test_record_readings_refuses_what_cannot_be(row, analyst, values, sentence):
    with pytest.raises(Refused, match=sentence):
        record_readings(row, by=analyst, values=values)


def test_only_an_analyst_types_readings(row, supervisor):
    with pytest.raises(Refused, match="not an analyst"):
        record_readings(row, by=supervisor, values={"end": D("12.30")})


def test_add_replicate_numbers_on(run, analyst):
    assert add_replicate(run, by=analyst, kind="sample").number == 4
    assert add_replicate(run, by=analyst, kind="blank").number == 2
    with pytest.raises(Refused, match="expected sample or blank"):
        add_replicate(run, by=analyst, kind="other")


def test_excluded_titration_stays_with_the_result_with_and_without_it(run, row, analyst):
    add_replicate(run, by=analyst, kind="sample")
    fill(run, [("10.00", "13.40"), *[("10.00", "12.30")] * 3], by=analyst)
    exclude_replicate(row, by=analyst, cause="overrun", sentence=SENTENCE)
    compute(run)
    outputs = run.calculations.order_by("-number")[0].outputs
    assert outputs["titrations"][1]["excluded"]
    assert outputs["value_with_all"] > outputs["value"]


def test_exclude_replicate_refuses_without_cause_or_sentence(row, analyst):
    with pytest.raises(Refused) as refusal:
        exclude_replicate(row, by=analyst, cause="outlier", sentence="odd")
    assert len(refusal.value.reasons) == 2


def test_excluded_titration_stays_as_it_is(row, analyst):
    exclude_replicate(row, by=analyst, cause="spill", sentence=SENTENCE)
    with pytest.raises(Refused, match="stays as it is"):
        record_readings(row, by=analyst, values={"end": D("12.30")})
    with pytest.raises(Refused, match="excluded already"):
        exclude_replicate(row, by=analyst, cause="spill", sentence=SENTENCE)


def test_reading_is_not_kept_when_the_trail_cannot_be_written(row, analyst, break_trail):
    break_trail()
    with pytest.raises(DatabaseError):
        record_readings(row, by=analyst, values={"end": D("12.30")})
    assert Replicate.objects.get(pk=row.pk).end is None
