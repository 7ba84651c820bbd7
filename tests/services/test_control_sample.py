"""Control samples: stable materials with an assigned value."""

from __future__ import annotations

from decimal import Decimal as D
from typing import Any

import pytest
from django.db import DatabaseError
from django.utils import timezone

from labrecords.models import ControlSample, MethodVersion, Sample, User
from labrecords.services.batch import record_sample
from labrecords.services.control_sample import record_control_sample, withdraw_control_sample
from tests.factories.bench import Bench, some_version
from tests.factories.register import days_ago
from tests.support.trail import all_records, one_event, refusal_of

pytestmark = pytest.mark.django_db
WHY = "the last bottle is empty"


@pytest.fixture
def version(bench: Bench) -> MethodVersion:
    return some_version(bench)


@pytest.fixture
def control(version: MethodVersion, supervisor: User) -> ControlSample:
    return record(version, supervisor)


def record(version: MethodVersion, by: User, **given: Any) -> ControlSample:
    said = {
        "code": "CS-B", "name": "acid control", "method": version.method, "assigned_value": D("0.735"),
        "assigned_expanded": D("0.010"), "unit": version.unit, "expires_on": days_ago(-300),
    }  # fmt: skip
    return record_control_sample(by=by, **said | given)


def test_record_control_sample_keeps_its_value(version: MethodVersion, supervisor: User) -> None:
    with one_event("control_sample.record"):
        record(version, supervisor)
    stored = ControlSample.objects.get()
    assert (stored.assigned_value, stored.assigned_expanded, stored.unit) == (D("0.735"), D("0.010"), "g/100 mL")
    assert (stored.expires_on, stored.withdrawn_reason) == (days_ago(-300), "")


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"code": " "}, "Code is empty: write what stands on the label."),
        ({"code": "cs-b"}, "Code: CS-B is recorded already. Open it, or choose another."),
        ({"code": "CS/B"}, "Code is “CS/B”: letters, digits, spaces"),
        ({"code": "C" * 21}, "21 characters: up to 20 are kept."),
        ({"name": "n" * 121}, "121 characters: up to 120 are kept."),
        ({"assigned_value": D("0.1234567")}, "Assigned value is 0.1234567: up to 6 decimals are kept."),
        ({"assigned_value": D("-1")}, "Assigned value is -1: a number not below 0."),
        ({"assigned_expanded": D("0.0000001")}, "Assigned expanded is 0.0000001: up to 6 decimals are kept."),
        ({"name": " "}, "Name is empty: write what the material is."),
        ({"unit": "g/L"}, "TA reports g/100 mL; the assigned value is in g/L."),
        ({"assigned_expanded": D("0")}, "Uncertainty is 0: a number above 0."),
        ({"assigned_expanded": D("-0.1")}, "Uncertainty is -0.1: a number above 0."),
        ({"expires_on": days_ago(1)}, "past; expected a day after"),
    ],
)
def test_record_control_sample_refuses(control: ControlSample, version: MethodVersion, supervisor: User, given: dict,
                                       sentence: str) -> None:  # fmt: skip
    assert sentence in refusal_of(record, version, supervisor, **{"code": "CS-C"} | given)


def test_record_control_sample_is_no_work_of_an_analyst(version: MethodVersion, analyst: User) -> None:
    assert "Ines Castell is not a supervisor. A supervisor records control samples." in refusal_of(
        record, version, analyst
    )


def draw(control: ControlSample, by: User) -> Sample:
    return record_sample(
        by=by, number="CS-B-1", drawn_at=timezone.now(), drawn_by="the bench", control_sample=control
    )  # fmt: skip


def test_nothing_is_drawn_from_what_is_withdrawn_or_lapsed(
    control: ControlSample, supervisor: User, analyst: User, as_enemy: Any
) -> None:
    as_enemy("UPDATE labrecords_controlsample SET expires_on = current_date - 2")
    control.refresh_from_db()
    assert "Control sample CS-B lapsed on" in refusal_of(draw, control, analyst)
    withdraw_control_sample(control, by=supervisor, reason=WHY)
    control.refresh_from_db()
    assert f"Control sample CS-B is withdrawn: {WHY}" in refusal_of(draw, control, analyst)


def test_withdraw_control_sample_says_why(control: ControlSample, supervisor: User) -> None:
    with one_event("control_sample.withdraw"):
        withdraw_control_sample(control, by=supervisor, reason=WHY)
    assert ControlSample.objects.get().withdrawn_reason == WHY


def test_withdraw_control_sample_refuses(control: ControlSample, supervisor: User, analyst: User) -> None:
    said = refusal_of(withdraw_control_sample, control, by=analyst, reason="old")
    assert "A supervisor withdraws control samples." in said
    assert "Reason is 'old': say in a sentence why the control sample is withdrawn." in said
    withdraw_control_sample(control, by=supervisor, reason=WHY)
    assert "CS-B is withdrawn already." in refusal_of(withdraw_control_sample, control, by=supervisor, reason=WHY)


@pytest.mark.parametrize("is_there", [False, True])
def test_control_sample_changes_nothing_when_the_trail_cannot_be_written(
    is_there: bool, version: MethodVersion, supervisor: User, break_trail: Any
) -> None:
    control = record(version, supervisor) if is_there else None
    before = all_records()
    break_trail()
    with pytest.raises(DatabaseError, match="no room for the trail"):
        withdraw_control_sample(control, by=supervisor, reason=WHY) if control else record(version, supervisor)
    assert all_records() == before
