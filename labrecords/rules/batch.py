"""When a batch may be recorded, sampled, released, rejected or held."""

from __future__ import annotations

from datetime import date, datetime

from labrecords.models import Batch, BatchState, Product, Sample, Specification, User
from labrecords.queries.audit import contributor_ids
from labrecords.queries.batch import RequiredTest, required_tests, runs_of_batch


def objections_to_recording_batch(
    number: str,
    *,
    by: User,
    product: Product,
    specification: Specification | None,
    made_on: date,
    today: date,
) -> list[str]:
    """A batch has a number of its own, a day that has come, and a product with effective limits."""
    found = _objections_to_recorder(by)
    if not number.strip():
        found.append("Number is empty: write the batch number as production gave it.")
    if Batch.objects.filter(number=number).exists():
        found.append(f"Batch {number} is recorded already. Open it, or correct the number.")
    if specification is None:
        found.append(f"{product.name} has no effective specification. Make one effective first.")
    if made_on > today:
        found.append(f"Made on is {made_on:%-d %b %Y}, in the future; expected a day up to {today:%-d %b %Y}.")
    return found


def objections_to_recording_sample(
    number: str,
    *,
    by: User,
    batch: Batch | None,
    has_control: bool,
    drawn_at: datetime,
    drawn_by: str,
    now: datetime,
) -> list[str]:
    """A sample has a number of its own, one source, who drew it and when."""
    found = _objections_to_recorder(by)
    if not number.strip():
        found.append("Number is empty: write the number on the sample's label.")
    if Sample.objects.filter(number=number).exists():
        found.append(f"Sample {number} is recorded already. Open it, or correct the number.")
    if (batch is None) == (not has_control):
        found.append("A sample comes from a batch or from a control sample: choose one of the two.")
    if batch is not None and batch.state in (BatchState.RELEASED, BatchState.REJECTED):
        found.append(f"Batch {batch.number} is {batch.state}. Nothing more is drawn from it.")
    if drawn_at > now:
        found.append(f"Drawn at is {drawn_at:%-d %b %Y %H:%M}, in the future; expected a time up to now.")
    if not drawn_by.strip():
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
