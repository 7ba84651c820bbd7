"""Checks by drawing: asked for by a person, done by the worker with progress; they change no result."""

from __future__ import annotations

import json
from datetime import timedelta
from typing import Any

from django.db import transaction
from django.utils import timezone

from analysis.determination_monte_carlo import check_by_monte_carlo
from labrecords.background import after_commit
from labrecords.errors import refuse_if
from labrecords.models import Calculation, MonteCarloCheck, User
from labrecords.rules.monte_carlo import objections_to_checking

EVERY = 100_000  # draws between two words of progress


@transaction.atomic(durable=True)
def ask_for_check(calculation: Calculation, *, by: User) -> MonteCarloCheck:
    """Write the row that says "waiting" and send the worker after it."""
    refuse_if(objections_to_checking(calculation, by=by))
    asked = {"requested_by": by, "requested_at": timezone.now()}
    check, _ = MonteCarloCheck.objects.get_or_create(calculation=calculation, state="waiting", defaults=asked)
    after_commit("labrecords.tasks.check_by_monte_carlo", check_id=check.pk)
    return check


def do_check(check_id: int) -> None:
    """Draw the inputs of a waiting check and keep what came of it; safe to run twice.

    Progress is written as it is made, so this is no single transaction.
    """
    check = MonteCarloCheck.objects.select_related("calculation").filter(pk=check_id, state="waiting").first()
    if check is None:
        return

    def progress(draws: int) -> None:
        if draws % EVERY == 0:
            MonteCarloCheck.objects.filter(pk=check_id, state="waiting").update(draws=draws)

    try:
        outputs = check_by_monte_carlo(json.loads(check.calculation.inputs), seed=check_id, progress=progress)
        _finish(check_id, state="done", outputs=outputs, draws=outputs["draws"])
    except ValueError as problem:
        _finish(check_id, state="failed", problem=str(problem))


def overdue_checks(*, seconds: int = 30) -> list[int]:
    """Ids of the checks that a lost message left waiting."""
    since = timezone.now() - timedelta(seconds=seconds)
    waiting = MonteCarloCheck.objects.filter(state="waiting", requested_at__lte=since)
    return list(waiting.values_list("pk", flat=True)[:50])


def _finish(check_id: int, **found: Any) -> None:
    MonteCarloCheck.objects.filter(pk=check_id, state="waiting").update(**found)
