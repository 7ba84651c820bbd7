"""Reading standardizations: which one is in force, and what a signature covers."""

from __future__ import annotations

from datetime import datetime
from functools import reduce
from operator import or_
from typing import Any

from django.db.models import Count, Q, QuerySet
from django.utils import timezone

from labrecords.models import RecordState, Standardization, TitrantLot
from labrecords.queries.replicate import replicates_as_signed, used_instruments_as_signed


def standardizations() -> QuerySet[Standardization]:
    """All standardizations with what a list shows, newest first."""
    return (
        Standardization.objects.select_related(
            "lot__titrant", "reference_standard__substance", "against__lot", "started_by", "calculation"
        )
        .annotate(open_questions=Count("questions", filter=Q(questions__answered_at__isnull=True)))
        .order_by("-started_at", "-id")
    )


def standardizations_found(*, q: str = "", state: str = "") -> QuerySet[Standardization]:
    """Standardizations whose number, lot, titrant or standard has the text, in a state if one is given."""
    found = standardizations()
    if state:
        found = found.filter(state=state)
    if not q:
        return found
    places = (
        "number",
        "lot__number",
        "lot__titrant__name",
        "reference_standard__number",
        "against__lot__number",
    )
    return found.filter(reduce(or_, (Q(**{f"{place}__icontains": q}) for place in places)))


def approved_for_lot(lot: TitrantLot, *, at: datetime) -> QuerySet[Standardization]:
    """Approved standardizations of a lot that hold at a moment, the one in force first."""
    day = timezone.localtime(at).date()
    return (
        Standardization.objects.filter(
            Q(superseded_at__isnull=True) | Q(superseded_at__gt=at),
            lot=lot, state=RecordState.APPROVED, in_force_from__lte=at, in_force_until__gte=day,
        )
        .select_related("lot__titrant", "calculation")
        .order_by("-in_force_from", "-id")
    )  # fmt: skip


def in_force(lot: TitrantLot, *, at: datetime) -> Standardization | None:
    """The standardization that gives a lot its concentration at a moment, or None."""
    return approved_for_lot(lot, at=at).first()


def attempts_on_lot(lot: TitrantLot) -> int:
    """How many standardizations were started on a lot, whatever became of them."""
    return Standardization.objects.filter(lot=lot).count()


def as_signed(standardization: Standardization) -> dict[str, Any]:
    """The content of a standardization that a signature covers."""
    calculation = standardization.calculation
    return {
        "noun": "standardization",
        "number": standardization.number,
        "lot": standardization.lot.number,
        "titrant": standardization.lot.titrant.code,
        "basis": standardization.basis,
        "reference_standard": str(standardization.reference_standard or ""),
        "against": str(standardization.against or ""),
        "remarks": standardization.remarks,
        "started_by": standardization.started_by.username,
        "started_at": standardization.started_at,
        "replicates": replicates_as_signed(standardization),
        "instruments": used_instruments_as_signed(standardization),
        "calculation": calculation_as_signed(calculation),
    }


def calculation_as_signed(calculation: Any) -> dict[str, Any] | None:
    """What a signature says about the calculation it rests on."""
    if calculation is None:
        return None
    return {
        "number": calculation.number,
        "inputs_sha256": calculation.inputs_sha256,
        "engine_version": calculation.engine_version,
        "value": calculation.value,
        "standard_uncertainty": calculation.standard_uncertainty,
        "expanded_uncertainty": calculation.expanded_uncertainty,
        "unit": calculation.unit,
        "outcome": calculation.outcome,
    }
