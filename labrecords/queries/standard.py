"""Reading reference standards."""

from __future__ import annotations

from datetime import date
from typing import Any

from django.db.models import Count, Q, QuerySet

from labrecords.models import LotState, ReferenceStandard, Substance


def standards() -> QuerySet[ReferenceStandard]:
    """All lots with what a list shows."""
    return ReferenceStandard.objects.select_related("substance", "certificate").annotate(
        uses=Count("standardizations", distinct=True)
    ).order_by("number")


def standards_found(*, q: str = "", state: str = "") -> QuerySet[ReferenceStandard]:
    """Lots whose number, substance or supplier's lot has the text, in a state if one is given."""
    found = standards()
    if state:
        found = found.filter(state=state)
    if q:
        found = found.filter(
            Q(number__icontains=q) | Q(substance__name__icontains=q) | Q(supplier_lot__icontains=q)
        )
    return found


def standards_in_use(substance: Substance | None, *, day: date) -> QuerySet[ReferenceStandard]:
    """The lots of a substance that may be used on a day."""
    return ReferenceStandard.objects.filter(
        substance=substance, state=LotState.IN_USE, expires_on__gte=day
    ).select_related("substance")


def standardizations_using(standard: ReferenceStandard) -> list[int]:
    """Ids of the standardizations made by mass of a lot."""
    return list(standard.standardizations.values_list("pk", flat=True))


def as_signed(standard: ReferenceStandard) -> dict[str, Any]:
    """The content of a reference standard that a signature covers."""
    return {
        "noun": "standard",
        "number": standard.number,
        "substance": standard.substance.name,
        "supplier_lot": standard.supplier_lot,
        "purity": standard.purity,
        "purity_expanded": standard.purity_expanded,
        "purity_k": standard.purity_k,
        "expires_on": standard.expires_on,
        "certificate_sha256": standard.certificate.sha256 if standard.certificate else None,
        "state": standard.state,
    }
