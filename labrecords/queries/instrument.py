"""Reading instruments and their calibrations."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import datetime
from decimal import Decimal

from django.db.models import Exists, OuterRef
from django.utils import timezone

from labrecords.models import Instrument, InstrumentCalibration, UsedInstrument


def calibration_at(instrument: Instrument, *, at: datetime) -> InstrumentCalibration | None:
    """The calibration of an instrument that holds at a moment, or None when it is past its due date."""
    day = timezone.localtime(at).date()
    return (
        instrument.calibrations.filter(calibrated_on__lte=day, due_on__gte=day, withdrawn_at__isnull=True)
        .order_by("-calibrated_on", "-id")
        .first()
    )


def instruments_for_parts(
    parts: Mapping[str, Decimal | None], *, kinds: Mapping[str, str], at: datetime
) -> dict[str, list[Instrument]]:
    """For each part, the instruments of its kind and volume that are in use and within their calibration."""
    day = timezone.localtime(at).date()
    holds = InstrumentCalibration.objects.filter(
        instrument=OuterRef("pk"), calibrated_on__lte=day, due_on__gte=day, withdrawn_at__isnull=True
    )
    usable = list(
        Instrument.objects.filter(Exists(holds), withdrawn_at__isnull=True, superseded_by__isnull=True).order_by(
            "identifier"
        )
    )
    return {
        part: [item for item in usable if item.kind == kinds[part] and volume in (None, item.capacity)]
        for part, volume in parts.items()
    }


def calibrations_of(instrument: Instrument) -> list[InstrumentCalibration]:
    """Every calibration of an instrument, withdrawn ones too, the newest first; certificates by name only."""
    found = instrument.calibrations.select_related("certificate").defer("certificate__content")
    return list(found.order_by("-calibrated_on", "-id"))


def records_using(instrument: Instrument, *, most: int = 20) -> list[UsedInstrument]:
    """The last runs and standardizations an instrument had a part in."""
    return list(instrument.uses.select_related("run", "standardization", "calibration").order_by("-id")[:most])
