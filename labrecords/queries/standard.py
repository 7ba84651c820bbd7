"""Reading reference standards."""

from __future__ import annotations

from datetime import date
from typing import Any

from django.db.models import Case, CharField, Count, F, Q, QuerySet, Value, When

from labrecords.models import LotState, ReferenceStandard, Substance


def standards(*, day: date) -> QuerySet[Any]:
    """All lots with what a list shows; one past its expiry on the day is shown as expired."""
    return (
        ReferenceStandard.objects.select_related("substance", "certificate", "superseded_by")
        .defer("certificate__content")
        .annotate(
            uses=Count("standardizations", distinct=True),
            shown_state=shown_state(day),
            purity_percent=F("purity") * 100,
            purity_u_percent=F("purity_expanded") * 100,
        )
        .order_by("number")
    )


def shown_state(day: date) -> Case:
    """The state of a lot as it is on a day: time alone takes a lot out of use."""
    lapsed = Q(expires_on__lt=day, state__in=[LotState.QUARANTINED, LotState.IN_USE])
    return Case(When(lapsed, then=Value(LotState.EXPIRED.value)), default=F("state"), output_field=CharField())


def standards_found(*, day: date, q: str = "", state: str = "") -> QuerySet[Any]:
    """Lots whose number, substance or supplier's lot has the text, in a state if one is given."""
    found = standards(day=day)
    if state:
        found = found.filter(shown_state=state)
    if q:
        found = found.filter(Q(number__icontains=q) | Q(substance__name__icontains=q) | Q(supplier_lot__icontains=q))
    return found


def standards_in_use(substance: Substance | None, *, day: date) -> QuerySet[ReferenceStandard]:
    """The lots of a substance that may be used on a day."""
    return ReferenceStandard.objects.filter(
        substance=substance, state=LotState.IN_USE, expires_on__gte=day, superseded_by__isnull=True
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
