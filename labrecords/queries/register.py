"""Reading the registers: lists with a search, and what a detail page needs."""

from __future__ import annotations

from typing import Any

from django.db.models import Count, Model, OuterRef, Q, QuerySet, Subquery

from labrecords.models import (
    Batch, ControlSample, Instrument, InstrumentCalibration, Method, Product, ReferenceStandard, Substance, Titrant,
    TitrantLot, User,
)  # fmt: skip


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
    return containing(Substance.objects.select_related("superseded_by"), q, "name", "formula")


def instruments(*, q: str = "") -> QuerySet[Instrument]:
    """Instruments with the due day of their newest calibration."""
    newest = InstrumentCalibration.objects.filter(instrument=OuterRef("pk"), withdrawn_at__isnull=True).order_by("-due_on")
    found = Instrument.objects.annotate(due_on=Subquery(newest.values("due_on")[:1]))
    return containing(found, q, "identifier", "description", "kind")


def titrants(*, q: str = "") -> QuerySet[Titrant]:
    """Titrants with the count of their lots."""
    found = Titrant.objects.select_related("substance", "standard_substance", "standard_titrant").annotate(
        lot_count=Count("lots")
    ).order_by("code")
    return containing(found, q, "code", "name")


def titrant_lots(*, q: str = "", state: str = "") -> QuerySet[TitrantLot]:
    """Lots, newest first."""
    found = TitrantLot.objects.select_related("titrant", "prepared_by").annotate(attempts=Count("standardizations"))
    found = found.order_by("-prepared_on", "-id")
    return containing(found.filter(state=state) if state else found, q, "number", "titrant__name", "titrant__code", "reagent_lot")


def counts() -> dict[str, int]:
    """How many entries each register has."""
    registers: dict[str, type[Model]] = {
        "substance": Substance, "instrument": Instrument, "standard": ReferenceStandard, "titrant": Titrant,
        "titrant_lot": TitrantLot, "method": Method, "product": Product, "control_sample": ControlSample, "user": User,
        "batch": Batch,
    }  # fmt: skip
    return {name: model._default_manager.count() for name, model in registers.items()}
