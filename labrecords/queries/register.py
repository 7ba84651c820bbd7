"""Reading the registers: lists with a search, and the counts of the front page."""

from __future__ import annotations

from datetime import date
from typing import Any

from django.db.models import Count, Model, OuterRef, Q, QuerySet, Subquery

from labrecords.models import (
    Batch,
    ControlSample,
    Instrument,
    InstrumentCalibration,
    Method,
    Product,
    ReferenceStandard,
    Substance,
    Titrant,
    TitrantLot,
    User,
)
from labrecords.queries.standard import shown_state

REGISTERS: dict[str, type[Model]] = {
    "substance": Substance, "instrument": Instrument, "standard": ReferenceStandard, "titrant": Titrant,
    "titrant_lot": TitrantLot, "method": Method, "product": Product, "control_sample": ControlSample,
    "user": User,
    "batch": Batch,
}  # fmt: skip


def containing(found: QuerySet[Any], q: str, *places: str) -> QuerySet[Any]:
    """Rows in which one of the columns has the text."""
    if not q:
        return found
    wanted = Q()
    for place in places:
        wanted |= Q(**{f"{place}__icontains": q})
    return found.filter(wanted)


def substances(*, q: str = "") -> QuerySet[Substance]:
    """Substances by name."""
    return containing(Substance.objects.select_related("superseded_by").order_by("name"), q, "name", "formula")


def instruments(*, day: date, q: str = "", kind: str = "") -> QuerySet[Instrument]:
    """Instruments with the last day of the calibration that reaches furthest; none begins after the day."""
    newest = InstrumentCalibration.objects.filter(
        instrument=OuterRef("pk"), withdrawn_at__isnull=True, calibrated_on__lte=day
    ).order_by("-due_on")
    found = Instrument.objects.annotate(due_on=Subquery(newest.values("due_on")[:1])).order_by("identifier")
    return containing(found.filter(kind=kind) if kind else found, q, "identifier", "description", "place")


def titrants(*, q: str = "") -> QuerySet[Titrant]:
    """Titrants with the count of their lots."""
    found = (
        Titrant.objects.select_related("substance", "standard_substance", "standard_titrant", "superseded_by")
        .annotate(lot_count=Count("lots"))
        .order_by("code")
    )
    return containing(found, q, "code", "name")


def titrant_lots(*, day: date, q: str = "", state: str = "") -> QuerySet[TitrantLot]:
    """Lots, newest first; one past its shelf life is shown as expired."""
    found = (
        TitrantLot.objects.select_related("titrant__substance", "prepared_by")
        .annotate(attempts=Count("standardizations"), shown_state=shown_state(day))
        .order_by("-prepared_on", "-id")
    )
    found = found.filter(shown_state=state) if state else found
    return containing(found, q, "number", "titrant__name", "titrant__code", "reagent_lot")


def people(*, q: str = "") -> QuerySet[User]:
    """Everybody with an account, closed ones too."""
    return containing(User.objects.order_by("full_name", "username"), q, "full_name", "username")


def counts() -> dict[str, int]:
    """How many entries each register has."""
    return {name: model._default_manager.count() for name, model in REGISTERS.items()}
