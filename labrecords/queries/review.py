"""What waits for a second person, riskiest first, with the reasons in words."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from django.utils import timezone

from labrecords.models import ControlChart, RecordState, Run, Standardization
from labrecords.queries.control_chart import effective_limits
from labrecords.queries.run import runs
from labrecords.queries.standardization import standardizations

LATE_HOURS = 24
NEAR_END_DAYS = 1


@dataclass(frozen=True, slots=True)
class Waiting:
    """One submitted record with what a reviewer must look at."""

    record: Run | Standardization
    noun: str
    subject: str
    reasons: Sequence[str]


def waiting_for_review() -> list[Waiting]:
    """Submitted runs and standardizations; the ones with most reasons first, then the oldest."""
    found = [
        Waiting(run, "run", f"{run.method_version.method.title}, sample {run.sample.number}", reasons_of(run))
        for run in runs().filter(state=RecordState.SUBMITTED).prefetch_related("replicates")
    ]
    found += [
        Waiting(item, "standardization", f"{item.lot.titrant.name}, lot {item.lot.number}", reasons_of(item))
        for item in standardizations().filter(state=RecordState.SUBMITTED).prefetch_related("replicates")
    ]
    return sorted(found, key=lambda item: (-len(item.reasons), item.record.started_at))


def reasons_of(record: Run | Standardization) -> list[str]:
    """Why a record wants a closer look, each in words."""
    found, calculation = [], record.calculation
    replicates = list(record.replicates.all())
    if calculation is not None and calculation.outcome == "does_not_conform":
        found.append("out of specification")
    if calculation is not None and calculation.outcome == "inconclusive":
        found.append("within the guard band")
    if calculation is not None and calculation.needs_person:
        found.append("the curve needs a person")
    excluded = sum(item.is_excluded for item in replicates)
    if excluded:
        found.append(f"{excluded} excluded")
    corrected = sum(item.corrections for item in replicates)
    if corrected:
        found.append(f"{corrected} readings corrected")
    if record.questions.filter(answered_at__isnull=True).exists():
        found.append("in question")
    return found + _reasons_of_what_it_rests_on(record) + _reasons_of_time(record)


def _reasons_of_what_it_rests_on(record: Run | Standardization) -> list[str]:
    """A titrant near the end of its time, a control sample whose chart signals."""
    if not isinstance(record, Run):
        return []
    found, until = [], record.standardization.in_force_until
    if until is not None and (until - timezone.localtime(record.started_at).date()).days <= NEAR_END_DAYS:
        found.append("titrant near the end of its time")
    if record.sample.control_sample is not None and _signals(record):
        found.append("its control chart signals")
    return found


def _signals(run: Run) -> bool:
    """Whether the result would break a rule of a chart of its control sample."""
    charts = ControlChart.objects.filter(control_sample=run.sample.control_sample)
    limits = [found for chart in charts if (found := effective_limits(chart)) is not None]
    value = run.calculation.value if run.calculation else None
    return value is not None and any(abs(value - each.centre) > 3 * each.sigma for each in limits)


def _reasons_of_time(record: Run | Standardization) -> list[str]:
    calculation = record.calculation
    if calculation is None:
        return []
    hours = (calculation.computed_at - record.started_at).total_seconds() / 3600
    found = [f"entered over {hours:.0f} hours"] if hours > LATE_HOURS else []
    outcomes = set(record.calculations.values_list("outcome", flat=True)) - {""}
    if "does_not_conform" in outcomes and calculation.outcome == "conforms":
        found.append("was out of specification before a change")
    return found
