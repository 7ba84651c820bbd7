"""Reading batches: each required test against its limits."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import reduce
from operator import or_
from typing import Any

from django.db.models import Count, Prefetch, Q, QuerySet

from labrecords.models import (
    Batch,
    Conclusion,
    Investigation,
    InvestigationState,
    Question,
    RecordState,
    Run,
    Sample,
    SpecificationLimit,
)
from labrecords.models.batch import BatchState


@dataclass(frozen=True, slots=True)
class RequiredTest:
    """One test that a batch's specification asks for, and where it stands.

    ``status`` is one of: missing, open, submitted, in question, under investigation, out of limits, inconclusive,
    approved. Only "approved" and "out of limits" and "inconclusive" are final.
    """

    limit: SpecificationLimit
    runs: Sequence[Run]
    status: str
    run: Run | None

    @property
    def is_settled(self) -> bool:
        return self.status in ("approved", "out of limits", "inconclusive")


def batches() -> QuerySet[Batch]:
    """All batches with what a list shows, newest first."""
    return (
        Batch.objects.select_related("product", "specification", "disposed_by")
        .annotate(sample_count=Count("samples", distinct=True))
        .order_by("-made_on", "-id")
    )


def samples() -> QuerySet[Sample]:
    """All samples with where they come from, newest first."""
    return Sample.objects.select_related("batch__product", "control_sample__method", "recorded_by")


def samples_waiting() -> QuerySet[Sample]:
    """Samples without a single live run, urgent and oldest first."""
    live = ~Q(runs__state=RecordState.VOID) & Q(runs__isnull=False)
    return (
        samples()
        .annotate(live_runs=Count("runs", filter=live, distinct=True))
        .filter(Q(batch__state__in=[BatchState.TESTING, BatchState.ON_HOLD]) | Q(control_sample__isnull=False))
        .filter(live_runs=0, void_reason="")
        .order_by("-is_urgent", "drawn_at", "pk")
    )


def required_tests(batch: Batch) -> list[RequiredTest]:
    """Every test of the batch's specification with its runs and its status."""
    limits = batch.specification.limits.select_related("method").order_by("method__code")
    by_method: dict[int, list[Run]] = {}
    for run in runs_of_batch(batch):
        by_method.setdefault(run.method_version.method_id, []).append(run)
    return [_required_test(limit, by_method.get(limit.method_id, [])) for limit in limits]


def runs_of_batch(batch: Batch) -> QuerySet[Run]:
    """The runs on a batch's samples with their open questions and investigations, oldest first."""
    return (
        Run.objects.filter(sample__batch=batch)
        .select_related("sample", "method_version__method", "standardization__lot", "calculation", "retest_for")
        .prefetch_related(
            Prefetch(
                "questions",
                queryset=Question.objects.filter(answered_at__isnull=True),
                to_attr="open_questions",
            ),
            Prefetch(
                "investigations",
                queryset=Investigation.objects.exclude(state=InvestigationState.CLOSED),
                to_attr="open_investigations",
            ),
            Prefetch(
                "investigations",
                queryset=Investigation.objects.filter(state=InvestigationState.CLOSED),
                to_attr="concluded",
            ),
        )
        .order_by("started_at", "id")
    )


def _required_test(limit: SpecificationLimit, runs: list[Run]) -> RequiredTest:
    doubtful = [run for run in runs if run.open_investigations]  # type: ignore[attr-defined]
    live = [run for run in runs if run.state != RecordState.VOID or _is_confirmed(run)]
    if doubtful:
        return RequiredTest(limit=limit, runs=runs, status="under investigation", run=doubtful[-1])
    if not live:
        return RequiredTest(limit=limit, runs=runs, status="missing", run=None)
    for status, chosen in (
        ("open", [run for run in live if run.state == RecordState.OPEN]),
        ("submitted", [run for run in live if run.state == RecordState.SUBMITTED]),
        ("in question", [run for run in live if run.open_questions]),  # type: ignore[attr-defined]
        ("out of limits", [run for run in live if _is_outside(run)]),
        ("inconclusive", [run for run in live if _outcome(run) == "inconclusive"]),
    ):
        if chosen:
            return RequiredTest(limit=limit, runs=runs, status=status, run=chosen[-1])
    return RequiredTest(limit=limit, runs=runs, status="approved", run=live[-1])


def _is_outside(run: Run) -> bool:
    """Out of limits, unless an investigation's planned retests did not confirm it; confirmed, even when it is void."""
    if _is_confirmed(run):
        return True
    return _outcome(run) == "does_not_conform" and Conclusion.NOT_CONFIRMED not in _conclusions(run)


def _is_confirmed(run: Run) -> bool:
    return Conclusion.CONFIRMED in _conclusions(run)


def _conclusions(run: Run) -> list[str]:
    return [investigation.conclusion for investigation in run.concluded]  # type: ignore[attr-defined]


def _outcome(run: Run) -> str:
    return run.calculation.outcome if run.calculation else ""


def as_signed(batch: Batch) -> dict[str, Any]:
    """The content of a batch that a signature covers: its limits and every run with its result."""
    return {
        "noun": "batch",
        "number": batch.number,
        "product": batch.product.code,
        "specification": batch.specification.number,
        "made_on": batch.made_on,
        "state": batch.state,
        "reason": batch.disposition_reason,
        "tests": [
            {
                "method": test.limit.method.code,
                "lower": test.limit.lower,
                "upper": test.limit.upper,
                "status": test.status,
                "runs": [
                    {
                        "number": run.number,
                        "state": run.state,
                        "value": run.calculation.value if run.calculation else None,
                        "outcome": _outcome(run),
                    }
                    for run in test.runs
                ],
            }
            for test in required_tests(batch)
        ],
    }


def batches_found(*, q: str = "", state: str = "") -> QuerySet[Batch]:
    """Batches whose number or product has the text, in a state if one is given."""
    found = batches()
    if state:
        found = found.filter(state=state)
    if q:
        found = found.filter(Q(number__icontains=q) | Q(product__name__icontains=q) | Q(product__code__icontains=q))
    return found


def samples_found(*, q: str = "") -> QuerySet[Sample]:
    """Samples whose number, batch, product or control sample has the text."""
    found = samples()
    if q:
        places = ("number", "batch__number", "batch__product__name", "control_sample__code")
        found = found.filter(reduce(or_, (Q(**{f"{place}__icontains": q}) for place in places)))
    return found
