"""What waits on the bench: samples, open sheets, lots in use, what is due."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, datetime, timedelta

from django.db.models import OuterRef, Q, QuerySet, Subquery
from django.utils import timezone

from labrecords.models import (
    InstrumentCalibration,
    LotState,
    MethodVersion,
    RecordState,
    Run,
    Sample,
    Standardization,
    TitrantLot,
    User,
)  # fmt: skip
from labrecords.models.instrument import Instrument


@dataclass(frozen=True, slots=True)
class LotInUse:
    """A lot with the standardization that gives it its concentration now, if one does."""

    lot: TitrantLot
    standardization: Standardization | None
    days_left: int | None
    fraction_used: float

    @property
    def is_due(self) -> bool:
        return self.days_left is None or self.days_left <= 3


@dataclass(frozen=True, slots=True)
class CalibrationDue:
    """An instrument whose calibration ends soon or has ended."""

    instrument: Instrument
    due_on: date | None
    days_left: int | None


def open_sheets_of(user: User) -> tuple[QuerySet[Run], QuerySet[Standardization]]:
    """Open runs and standardizations that a person started."""
    runs = Run.objects.filter(started_by=user, state=RecordState.OPEN).select_related(
        "sample__batch__product", "sample__control_sample", "method_version__method"
    )
    standardizations = Standardization.objects.filter(started_by=user, state=RecordState.OPEN).select_related(
        "lot__titrant"
    )
    return runs, standardizations


def lots_in_use(*, at: datetime) -> list[LotInUse]:
    """Lots in use or in quarantine with their concentration and the days it still holds."""
    day = timezone.localtime(at).date()
    held = Standardization.objects.filter(
        Q(superseded_at__isnull=True) | Q(superseded_at__gt=at),
        lot=OuterRef("pk"), state=RecordState.APPROVED, in_force_from__lte=at, in_force_until__gte=day,
    ).order_by("-in_force_from", "-id")  # fmt: skip
    lots = list(
        TitrantLot.objects.filter(state__in=[LotState.IN_USE, LotState.QUARANTINED], expires_on__gte=day)
        .select_related("titrant")
        .annotate(held_id=Subquery(held.values("pk")[:1]))
        .order_by("titrant__code", "number")
    )
    by_id = Standardization.objects.select_related("calculation").in_bulk([lot.held_id for lot in lots if lot.held_id])
    return [_lot_in_use(lot, by_id.get(lot.held_id), day=day) for lot in lots]


def lots_for(version: MethodVersion, *, at: datetime) -> list[LotInUse]:
    """The lots a run under a method version may use: of its titrant, and with a concentration in force."""
    return [item for item in lots_in_use(at=at) if item.lot.titrant_id == version.titrant_id and item.standardization]


def lots_of_titrant(titrant_id: int, *, at: datetime) -> list[LotInUse]:
    """The lots of one titrant that have a concentration in force."""
    return [item for item in lots_in_use(at=at) if item.lot.titrant_id == titrant_id and item.standardization]


def calibrations_due(*, at: datetime, within: timedelta = timedelta(days=30)) -> list[CalibrationDue]:
    """Instruments in use whose newest calibration ends soon, the most urgent first."""
    day = timezone.localtime(at).date()
    newest = InstrumentCalibration.objects.filter(instrument=OuterRef("pk"), withdrawn_at__isnull=True).order_by(
        "-due_on", "-id"
    )
    instruments = Instrument.objects.filter(withdrawn_at__isnull=True, superseded_by__isnull=True).annotate(
        due=Subquery(newest.values("due_on")[:1])
    )
    due = [item for item in instruments if item.due is None or item.due <= day + within]
    due.sort(key=lambda item: item.due or date.min)
    return [
        CalibrationDue(instrument=item, due_on=item.due, days_left=(item.due - day).days if item.due else None)
        for item in due
    ]


def tests_for_sample(sample: Sample) -> Sequence[MethodVersion]:
    """The effective method versions that a sample is to be run under."""
    from_batch = Q(method__in=sample.batch.specification.limits.values("method")) if sample.batch else Q()
    from_control = Q(method=sample.control_sample.method_id) if sample.control_sample else Q()
    versions = MethodVersion.objects.filter(from_batch & from_control, state="effective")
    return list(versions.select_related("method", "titrant", "expressed_as").order_by("method__code"))


def _lot_in_use(lot: TitrantLot, standardization: Standardization | None, *, day: date) -> LotInUse:
    if standardization is None or standardization.in_force_until is None or standardization.in_force_from is None:
        return LotInUse(lot=lot, standardization=None, days_left=None, fraction_used=1.0)
    begin = timezone.localtime(standardization.in_force_from).date()
    whole = max((standardization.in_force_until - begin).days, 1)
    used = (day - begin).days / whole
    return LotInUse(
        lot=lot, standardization=standardization, days_left=(standardization.in_force_until - day).days,
        fraction_used=min(max(used, 0.0), 1.0),
    )  # fmt: skip
