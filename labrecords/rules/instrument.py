"""Which instruments a run or a standardization may use."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import datetime
from decimal import Decimal

from labrecords.models import Basis, Instrument, InstrumentKind, MethodVersion, Titrant
from labrecords.queries.instrument import calibration_at

KINDS = {
    "burette": InstrumentKind.BURETTE,
    "balance": InstrumentKind.BALANCE,
    "pipette": InstrumentKind.PIPETTE,
    "excess pipette": InstrumentKind.PIPETTE,
    "electrode": InstrumentKind.ELECTRODE,
    "flask": InstrumentKind.FLASK,
    "aliquot": InstrumentKind.PIPETTE,
}


def parts_of_method(version: MethodVersion) -> dict[str, Decimal | None]:
    """The parts a run under a method version needs, with the volume that glassware in that part must have."""
    parts: dict[str, Decimal | None] = {"burette": None}
    if version.sample_by == "mass":
        parts["balance"] = None
    else:
        parts["pipette"] = version.sample_amount
    for position, step in enumerate(version.dilutions, start=1):
        parts[f"flask {position}"] = Decimal(step["flask"])
        parts[f"aliquot {position}"] = Decimal(step["aliquot"])
    if version.titration == "back":
        parts["excess pipette"] = version.excess_volume
    if version.takes_curve:
        parts["electrode"] = None
    return parts


def parts_of_standardization(basis: str, *, titrant: Titrant) -> dict[str, Decimal | None]:
    """The parts a standardization needs."""
    parts: dict[str, Decimal | None] = {"burette": None}
    parts |= {"balance": None} if basis == Basis.MASS else {"pipette": titrant.aliquot}
    return parts | ({"electrode": None} if titrant.takes_curve else {})


def kind_of_part(part: str) -> str:
    """The kind of instrument that plays a part: "flask 2" is a flask."""
    return KINDS[part if part in KINDS else part.rstrip(" 0123456789")]


def objections_to_instruments(
    instruments: Mapping[str, Instrument], *, parts: Mapping[str, Decimal | None], at: datetime
) -> list[str]:
    """Each part is played by an instrument of its kind, of the right volume, in use and within its calibration."""
    found = [f"{part.capitalize()}: choose one." for part in parts if part not in instruments]
    for part, instrument in instruments.items():
        if part not in parts:
            found.append(f"{part.capitalize()} {instrument.identifier} has no part here; leave it out.")
            continue
        found += _objections_to_one(part, instrument, volume=parts[part], at=at)
    return found


def _objections_to_one(part: str, instrument: Instrument, *, volume: Decimal | None, at: datetime) -> list[str]:
    found = []
    if instrument.kind != kind_of_part(part):
        found.append(f"{part.capitalize()} {instrument.identifier} is a {instrument.get_kind_display()}.")
    if instrument.withdrawn_at is not None:
        found.append(f"{instrument.identifier} is withdrawn: {instrument.withdrawn_reason} Choose another.")
    if instrument.superseded_by_id is not None:
        found.append(f"{instrument.identifier} is superseded by {instrument.superseded_by}. Choose that one.")
    if volume is not None and instrument.capacity != volume:
        found.append(
            f"{part.capitalize()} {instrument.identifier} holds {instrument.capacity:g} {instrument.unit}; "
            f"{volume:g} mL are expected."
        )
    if calibration_at(instrument, at=at) is None:
        found.append(f"{instrument.identifier} has no calibration that holds today. Calibrate it, or choose another.")
    return found
