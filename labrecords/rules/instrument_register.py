"""What an instrument and its calibration must say."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import date
from decimal import Decimal, InvalidOperation

from labrecords.models import Instrument, InstrumentCalibration, InstrumentKind, User
from labrecords.rules.readings import objections_to_date, objections_to_order, objections_to_slope
from labrecords.rules.substance import objections_to_keeping_registers

HOLDS_A_VOLUME = (InstrumentKind.BURETTE, InstrumentKind.PIPETTE, InstrumentKind.FLASK)


def objections_to_recording_instrument(instrument: Instrument, *, by: User) -> list[str]:
    """An identifier of its own, a kind, a resolution, and a capacity for glassware."""
    found = objections_to_keeping_registers(by)
    if not instrument.identifier.strip() or len(instrument.identifier) > 20:
        found.append(f"Identifier is {instrument.identifier!r}: write the label on the instrument, 20 characters at most.")
    if Instrument.objects.filter(identifier=instrument.identifier).exists():
        found.append(f"{instrument.identifier} is in the register already. Choose another identifier.")
    if instrument.kind not in InstrumentKind.values:
        found.append(f"Kind is {instrument.kind!r}; expected one of {', '.join(InstrumentKind.values)}.")
    if instrument.resolution is None or instrument.resolution <= 0:
        found.append(f"Resolution is {instrument.resolution}: the smallest difference it is read to, above 0.")
    if instrument.tolerance is None or instrument.tolerance < 0:
        found.append(f"Tolerance is {instrument.tolerance}: the half-width of its class or certificate, 0 or more.")
    if instrument.kind in HOLDS_A_VOLUME and not (instrument.capacity and instrument.capacity > 0):
        found.append(f"Capacity is {instrument.capacity}: a {instrument.get_kind_display()} needs its volume in mL.")
    return found


def objections_to_withdrawing_instrument(instrument: Instrument, *, by: User) -> list[str]:
    """Once only."""
    found = objections_to_keeping_registers(by)
    if instrument.withdrawn_at is not None:
        found.append(f"{instrument.identifier} is withdrawn already.")
    return found


def objections_to_calibrating(
    instrument: Instrument, *, by: User, calibrated_on: date, due_on: date, performed_by: str,
    corrections: Sequence[Sequence[str]], slope_percent: Decimal | None, today: date,
) -> list[str]:  # fmt: skip
    """A calibration has happened, ends later, names who did it, and its table counts upward."""
    found = [] if by.is_supervisor or by.is_administrator or by.is_analyst else ["Ask an analyst or a supervisor."]
    found += objections_to_date(calibrated_on, today=today, field="Calibrated on", may_be_future=False)
    found += objections_to_order(calibrated_on, due_on, earlier_field="Calibrated on", later_field="Due on")
    if instrument.withdrawn_at is not None:
        found.append(f"{instrument.identifier} is withdrawn. It is not calibrated again.")
    if not performed_by.strip():
        found.append("Performed by is empty: name who or which laboratory calibrated it.")
    found += objections_to_slope(slope_percent)
    return found + _objections_to_corrections(corrections)


def _objections_to_corrections(corrections: Sequence[Sequence[str]]) -> list[str]:
    before = Decimal(-1)
    for place, row in enumerate(corrections, start=1):
        try:
            at, correction = (Decimal(text) for text in row)
        except (InvalidOperation, ValueError):
            return [f"Correction {place} is {' '.join(row)!r}: a reading and a correction in mL, such as 10.00 0.012."]
        if at <= before:
            return [f"Correction {place} is at {at} mL, not above the one before it. Write them upward."]
        if abs(correction) > 1:
            return [f"Correction {place} is {correction} mL; within 1 mL is expected."]
        before = at
    return []


def objections_to_withdrawing_calibration(calibration: InstrumentCalibration, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor withdraws calibrations."]
    if calibration.withdrawn_at is not None:
        found.append("This calibration is withdrawn already.")
    return found
