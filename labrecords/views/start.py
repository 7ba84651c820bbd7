"""The forms that start a run or a standardization, with only what may be used today."""

from __future__ import annotations

from typing import Any

from django.http import QueryDict
from django.urls import reverse
from django.utils import timezone

from labrecords.forms.start import StartForm
from labrecords.models import MethodVersion, TitrantLot
from labrecords.queries.bench import lots_of_titrant
from labrecords.queries.instrument import instruments_for_parts
from labrecords.queries.standard import standards_in_use
from labrecords.rules.cautions import cautions_for
from labrecords.rules.instrument import kind_of_part, parts_of_method, parts_of_standardization


def run_form(version: MethodVersion, *, data: QueryDict | None) -> StartForm:
    """Lots in force of the method's titrant, and instruments within their calibration, per part."""
    now = timezone.now()
    parts = parts_of_method(version)
    lots = {"titrant lot": [item.lot for item in lots_of_titrant(version.titrant_id, at=now)]}
    if version.excess_titrant_id:
        lots["excess lot"] = [item.lot for item in lots_of_titrant(version.excess_titrant_id, at=now)]
    kinds = {part: kind_of_part(part) for part in parts}
    return StartForm(data, parts=parts, lots=lots, instruments=instruments_for_parts(parts, kinds=kinds, at=now))


def standardization_form(lot: TitrantLot, *, data: QueryDict | None) -> StartForm:
    """Standards in use, or lots of the other titrant in force, and the instruments."""
    now, titrant = timezone.now(), lot.titrant
    basis = "mass" if titrant.standard_substance_id else "titrant"
    parts = parts_of_standardization(basis, titrant=titrant)
    kinds = {part: kind_of_part(part) for part in parts}
    instruments = instruments_for_parts(parts, kinds=kinds, at=now)
    if titrant.standard_titrant_id:
        lots = {"lot of the other titrant": [item.lot for item in lots_of_titrant(titrant.standard_titrant_id, at=now)]}
        return StartForm(data, parts=parts, lots=lots, instruments=instruments)
    standards = standards_in_use(titrant.standard_substance, day=timezone.localtime(now).date())
    return StartForm(data, parts=parts, lots={}, instruments=instruments, standards=standards, needs_standard=True)


def run_choices(version: MethodVersion) -> dict[str, Any]:
    """What the page that starts a run shows beside the form: lots in force and the cautions of the reagents."""
    titrants = [version.titrant, *([version.excess_titrant] if version.excess_titrant else [])]
    now = timezone.now()
    return {
        "lots": [item for titrant in titrants for item in lots_of_titrant(titrant.pk, at=now)],
        "lots_url": reverse("titrant-detail", args=[version.titrant.code]),
        "cautions": cautions_for(sorted({hazard for titrant in titrants for hazard in titrant.substance.hazards})),
    }
