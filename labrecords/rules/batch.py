"""When a batch may be recorded, sampled, released, rejected or held."""

from __future__ import annotations

from datetime import date, datetime

from django.utils import timezone

from labrecords.models import Batch, BatchState, Sample, Specification, User
from labrecords.queries.audit import contributor_ids
from labrecords.queries.batch import RequiredTest, required_tests, runs_of_batch
from labrecords.rules.control_sample import objections_to_drawing
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.identifier import objections_to_identifier


def objections_to_recording_batch(
    batch: Batch, *, by: User, specification: Specification | None, today: date
) -> list[str]:
    """A batch has a number of its own, a day that has come, and a product with effective limits."""
    found = _objections_to_recorder(by) + objections_to_fit(batch)
    same = Batch.objects.filter(number__iexact=batch.number)
    found += objections_to_identifier(batch.number, field="Number", known=same.values_list("number", flat=True))
    if specification is None:
        found.append(f"{batch.product.name} has no effective specification. Make one effective first.")
    if batch.product.superseded_by is not None:
        found.append(f"{batch.product.name} is superseded. Choose {batch.product.superseded_by.name}.")
    if batch.made_on > today:
        found.append(f"Made on is {batch.made_on:%-d %b %Y}, in the future; expected a day up to {today:%-d %b %Y}.")
    return found


def objections_to_recording_sample(sample: Sample, *, by: User, now: datetime) -> list[str]:
    """A sample has a number of its own, one source, who drew it and when."""
    found = _objections_to_recorder(by) + objections_to_fit(sample)
    same = Sample.objects.filter(number__iexact=sample.number)
    found += objections_to_identifier(sample.number, field="Number", known=same.values_list("number", flat=True))
    if (sample.batch is None) == (sample.control_sample is None):
        found.append("A sample comes from a batch or from a control sample: choose one of the two.")
    if sample.batch is not None and sample.batch.state in (BatchState.RELEASED, BatchState.REJECTED):
        found.append(f"Batch {sample.batch.number} is {sample.batch.state}. Nothing more is drawn from it.")
    if sample.control_sample is not None:
        found += objections_to_drawing(sample.control_sample, today=timezone.localtime(now).date())
    if sample.drawn_at > now:
        found.append(f"Drawn at is {sample.drawn_at:%-d %b %Y %H:%M}, in the future; expected a time up to now.")
    if not sample.drawn_by.strip():
        found.append("Drawn by is empty: name who drew the sample.")
    return found


def objections_to_releasing(batch: Batch, *, by: User) -> list[str]:
    """Released only by a second person, with every required test approved, within limits and unquestioned."""
    found = _objections_to_deciding(batch, by=by)
    for test in required_tests(batch):
        found += _objections_to_test(test)
    return found


def objections_to_rejecting(batch: Batch, *, by: User) -> list[str]:
    """A batch may be rejected whatever its tests say, but not while an investigation runs."""
    found = _objections_to_deciding(batch, by=by)
    for test in required_tests(batch):
        if test.status == "under investigation":
            found += _objections_to_test(test)
    return found


def objections_to_holding(batch: Batch, *, by: User) -> list[str]:
    """A batch in testing may be held at any time."""
    found = _objections_to_role(by)
    if batch.state != BatchState.TESTING:
        found.append(f"Batch {batch.number} is {batch.state}. Only a batch in testing is put on hold.")
    return found


def is_ready(tests: list[RequiredTest]) -> bool:
    """Whether every required test is approved within its limits."""
    return bool(tests) and all(test.status == "approved" for test in tests)


def _objections_to_test(test: RequiredTest) -> list[str]:
    code, run = test.limit.method.code, test.run
    sentences = {
        "missing": f"{code} is missing. Run the test on a sample of this batch.",
        "open": f"{code}: {run} is open. Its analyst submits it first.",
        "submitted": f"{code}: {run} waits for review. A second person approves or returns it.",
        "in question": f"{code}: {run} is in question. A supervisor re-evaluates it.",
        "under investigation": f"{code}: {run} is under investigation. Conclude the investigation.",
        "out of limits": f"{code}: {run} is out of limits. The batch may be rejected or held, not released.",
        "inconclusive": f"{code}: {run} lies in the guard band. The batch may be rejected or held, not released.",
    }
    return [sentences[test.status]] if test.status in sentences else []


def _objections_to_deciding(batch: Batch, *, by: User) -> list[str]:
    found = _objections_to_role(by)
    if batch.state not in (BatchState.TESTING, BatchState.ON_HOLD):
        found.append(f"Batch {batch.number} is {batch.state} already. A disposition is not changed.")
    performed = [run.number for run in runs_of_batch(batch) if by.pk in contributor_ids(run)]
    if performed:
        found.append(f"You performed or entered {', '.join(performed)}. Another supervisor decides on the batch.")
    return found


def _objections_to_role(by: User) -> list[str]:
    return [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor decides on batches."]


def _objections_to_recorder(by: User) -> list[str]:
    if by.is_analyst or by.is_supervisor:
        return []
    return [f"{by.full_name} is neither analyst nor supervisor. Ask one of them."]
