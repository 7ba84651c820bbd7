"""Reading calculations and what waits for the worker."""

from __future__ import annotations

from datetime import datetime, timedelta

from django.db.models import QuerySet

from labrecords.models import Calculation, CalculationRequest, MonteCarloCheck, Run, Standardization

Record = Run | Standardization


def latest_calculation(record: Record) -> Calculation | None:
    """The newest calculation of a run or a standardization."""
    return record.calculations.order_by("-number").first()


def latest_request(record: Record) -> CalculationRequest | None:
    """The newest request for a calculation of a record: waiting, done or failed."""
    return record.requests.order_by("-id").first()


def waiting_requests(*, older_than: timedelta, now: datetime) -> QuerySet[CalculationRequest]:
    """Requests nobody has done yet though they have waited for some time."""
    return CalculationRequest.objects.filter(state="waiting", requested_at__lte=now - older_than).order_by("id")


def latest_check(calculation: Calculation | None) -> MonteCarloCheck | None:
    """The newest check by drawing of a calculation, or None."""
    return calculation.monte_carlo_checks.order_by("-id").first() if calculation else None
