"""The bench: an analyst's first page."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils import timezone
from django.views.decorators.http import require_GET

from labrecords.figures.fitness_line import fitness_line
from labrecords.queries.batch import samples_waiting
from labrecords.queries.bench import LotInUse, calibrations_due, lots_in_use, open_sheets_of
from labrecords.views.access import signed_in


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """Samples waiting, my open sheets, lots in use, what is due."""
    now = timezone.now()
    runs, standardizations = open_sheets_of(request.user)
    lots = lots_in_use(at=now)
    context = {
        "samples": samples_waiting()[:40],
        "runs": runs,
        "standardizations": standardizations,
        "lots": [{"item": item, "fitness": _fitness(item)} for item in lots if item.standardization],
        "waiting_lots": [item for item in lots if not item.standardization],
        "calibrations": calibrations_due(at=now),
    }
    return render(request, "bench/list.html", context)


def _fitness(item: LotInUse) -> str:
    if item.days_left is None:
        return ""
    return fitness_line(item.fraction_used, label=f"{item.days_left} days left")
