"""Reading replicates, blanks and the instruments of a record."""

from __future__ import annotations

from typing import Any

from django.db.models import QuerySet

from labrecords.models import Replicate, Run, Standardization, UsedInstrument

Record = Run | Standardization
LATER = ("first_end", "drift", "minutes")  # readings that few methods take: signed where they were taken


def replicates_of(record: Record) -> QuerySet[Replicate]:
    """Blanks and replicates of a record in the order of the sheet: blanks first, then by number."""
    return record.replicates.select_related("curve__file", "entered_by", "excluded_by").order_by("kind", "number")


def instruments_of(record: Record) -> dict[str, UsedInstrument]:
    """The instruments of a record by the part they play."""
    used = record.instruments.select_related("instrument", "calibration")
    return {item.part: item for item in used}


def next_replicate_number(record: Record, *, kind: str) -> int:
    """The number the next replicate or blank of a record gets."""
    last = record.replicates.filter(kind=kind).order_by("-number").values_list("number", flat=True).first()
    return (last or 0) + 1


def replicates_as_signed(record: Record) -> list[dict[str, Any]]:
    """Readings exactly as typed, exclusions and curve files by their hash."""
    return [
        {
            "kind": item.kind,
            "number": item.number,
            "amount": item.amount,
            "start": item.start,
            "end": item.end,
            "temperature": item.temperature,
            "observation": item.observation,
            "curve_sha256": item.curve.file.sha256 if item.curve else None,
            **{name: value for name in LATER if (value := getattr(item, name)) is not None},
            "entered_by": item.entered_by.username,
            "excluded": item.is_excluded,
            "exclusion_cause": item.exclusion_cause,
            "exclusion_sentence": item.exclusion_sentence,
        }
        for item in replicates_of(record)
    ]


def used_instruments_as_signed(record: Record) -> list[dict[str, Any]]:
    """The instruments with the calibration day that held."""
    return [
        {
            "part": part,
            "instrument": used.instrument.identifier,
            "calibrated_on": used.calibration.calibrated_on,
        }
        for part, used in sorted(instruments_of(record).items())
    ]
