"""Reading runs."""

from __future__ import annotations

from functools import reduce
from operator import or_
from typing import Any

from django.db.models import Count, Q, QuerySet

from labrecords.models import Investigation, RecordState, Run, Sample, Standardization
from labrecords.queries.replicate import replicates_as_signed, used_instruments_as_signed
from labrecords.queries.standardization import calculation_as_signed


def runs() -> QuerySet[Run]:
    """All runs with what a list shows, newest first."""
    return Run.objects.select_related(
        "sample__batch__product", "sample__control_sample", "method_version__method",
        "standardization__lot__titrant", "started_by", "calculation", "specification_limit",
    ).annotate(
        open_questions=Count("questions", filter=Q(questions__answered_at__isnull=True), distinct=True),
        open_investigations=Count("investigations", filter=~Q(investigations__state="closed"), distinct=True),
    ).order_by("-started_at", "-id")  # fmt: skip


def runs_found(*, q: str = "", state: str = "") -> QuerySet[Run]:
    """Runs whose number, sample, batch, product, lot or method has the text, in a state if one is given."""
    found = runs()
    if state:
        found = found.filter(state=state)
    if not q:
        return found
    places = (
        "number",
        "sample__number",
        "sample__batch__number",
        "sample__batch__product__name",
        "standardization__lot__number",
        "method_version__method__code",
        "method_version__method__title",
    )
    return found.filter(reduce(or_, (Q(**{f"{place}__icontains": q}) for place in places)))


def unfinished_runs_of(sample: Sample, *, method_id: int, apart_from: Investigation | None = None) -> QuerySet[Run]:
    """Runs of a sample under a method that are open or wait for review, without the one that is investigated."""
    found = Run.objects.filter(
        sample=sample,
        method_version__method_id=method_id,
        state__in=[RecordState.OPEN, RecordState.SUBMITTED],
    )
    return found if apart_from is None else found.exclude(pk=apart_from.run_id)


def review_count() -> int:
    """How many runs and standardizations wait for a second person."""
    runs_waiting = Run.objects.filter(state=RecordState.SUBMITTED).count()
    return runs_waiting + Standardization.objects.filter(state=RecordState.SUBMITTED).count()


def as_signed(run: Run) -> dict[str, Any]:
    """The content of a run that a signature covers."""
    return {
        "noun": "run",
        "number": run.number,
        "sample": run.sample.number,
        "method": run.method_version.method.code,
        "method_version": run.method_version.number,
        "lot": run.standardization.lot.number,
        "standardization": run.standardization.number,
        "excess_standardization": str(run.excess_standardization or ""),
        "specification": str(run.specification_limit.specification) if run.specification_limit else "",
        "loss_percent": run.loss_percent,
        "remarks": run.remarks,
        "started_by": run.started_by.username,
        "started_at": run.started_at,
        "replicates": replicates_as_signed(run),
        "instruments": used_instruments_as_signed(run),
        "calculation": calculation_as_signed(run.calculation),
    }
