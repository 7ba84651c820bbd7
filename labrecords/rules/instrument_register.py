"""What an instrument and its calibration must say."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import date
from decimal import Decimal

from labrecords.models import Instrument, InstrumentCalibration, InstrumentKind, User
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.identifier import objections_to_identifier
from labrecords.rules.number import parse_number, plain, shortest, shown
from labrecords.rules.readings import objections_to_date, objections_to_order, objections_to_slope
from labrecords.rules.substance import objections_to_keeping_registers

HOLDS_A_VOLUME = (InstrumentKind.BURETTE, InstrumentKind.PIPETTE, InstrumentKind.FLASK)
UNITS = {
    InstrumentKind.BURETTE: ("mL",), InstrumentKind.PIPETTE: ("mL",), InstrumentKind.FLASK: ("mL",),
    InstrumentKind.BALANCE: ("g",), InstrumentKind.THERMOMETER: ("°C",),
    InstrumentKind.ELECTRODE: ("pH", "mV", "µS/cm", "°C"),
}  # fmt: skip


def objections_to_recording_instrument(instrument: Instrument, *, by: User) -> list[str]:
    """An identifier of its own, a kind, a resolution, and a capacity for glassware."""
    found = objections_to_keeping_registers(by) + objections_to_fit(instrument)
    same = Instrument.objects.filter(identifier__iexact=instrument.identifier)
    found += objections_to_identifier(
        instrument.identifier, field="Identifier", known=same.values_list("identifier", flat=True)
    )
    units = UNITS.get(InstrumentKind(instrument.kind), ()) if instrument.kind in InstrumentKind.values else ()
    if units and instrument.unit not in units:
        found.append(f"Unit is {shown(instrument.unit)}; {' or '.join(units)} is expected for its kind.")
    if not instrument.resolution > 0:
        found.append(f"Resolution is {plain(instrument.resolution)}: the smallest difference it is read to, above 0.")
    if not instrument.tolerance >= 0:
        found.append(f"Tolerance is {plain(instrument.tolerance)}: the half-width of its class, 0 or more.")
    if instrument.capacity is not None and not instrument.capacity > 0:
        found.append(f"Capacity is {plain(instrument.capacity)}: above 0, or left empty.")
    if instrument.kind in HOLDS_A_VOLUME and instrument.capacity is None:
        found.append(f"Capacity is empty: a {instrument.get_kind_display()} needs its volume in mL.")
    return found


def objections_to_superseding_instrument(instrument: Instrument, *, by: User) -> list[str]:
    """Once only."""
    found = objections_to_keeping_registers(by)
    if instrument.superseded_by is not None:
        found.append(f"{instrument.identifier} is superseded already. Open {instrument.superseded_by} instead.")
    return found


def objections_to_withdrawing_instrument(instrument: Instrument, *, by: User) -> list[str]:
    """Once only."""
    found = objections_to_keeping_registers(by)
    if instrument.withdrawn_at is not None:
        found.append(f"{instrument.identifier} is withdrawn already.")
    return found


def objections_to_calibrating(calibration: InstrumentCalibration, *, by: User, today: date) -> list[str]:
    """A calibration has happened, ends later, names who did it, and its table counts upward."""
    instrument = calibration.instrument
    found = objections_to_fit(calibration)
    if not (by.is_supervisor or by.is_administrator or by.is_analyst):
        found.append(f"{by.full_name} records no calibrations. Ask an analyst or a supervisor.")
    found += objections_to_date(calibration.calibrated_on, today=today, field="Calibrated on", may_be_future=False)
    found += objections_to_date(calibration.due_on, today=today, field="Due on", may_be_future=True)
    found += objections_to_order(
        calibration.calibrated_on, calibration.due_on, earlier_field="Calibrated on", later_field="Due on"
    )
    if instrument.withdrawn_at is not None:
        found.append(f"{instrument.identifier} is withdrawn. It is not calibrated again.")
    if not calibration.performed_by.strip():
        found.append("Performed by is empty: name who or which laboratory calibrated it.")
    if calibration.uncertainty is not None and not calibration.uncertainty > 0:
        found.append(f"Expanded uncertainty is {plain(calibration.uncertainty)}: above 0, or left empty.")
    found += objections_to_slope(calibration.slope_percent)
    return found + objections_to_corrections(calibration.corrections, instrument=instrument)


def objections_to_corrections(rows: Sequence[Sequence[str]], *, instrument: Instrument) -> list[str]:
    """A reading and what is added to it on every line, upward, within what the instrument shows."""
    unit, before = instrument.unit, Decimal(-1)
    for place, row in enumerate(rows, start=1):
        try:
            at, correction = (parse_number(text) for text in row)
        except ValueError:
            return [
                f"Correction {place} is {shown(' '.join(row))}: a reading and a correction in {unit} "
                "are expected, such as 10.00 0.012."
            ]
        most = instrument.capacity
        if at < 0 or (most is not None and at > most):
            end = f" to {shortest(most)}" if most is not None else " on"
            return [f"Correction {place} is at {plain(at)} {unit}; a reading from 0{end} {unit} is expected."]
        if at <= before:
            return [f"Correction {place} is at {plain(at)} {unit}, not above the one before. Write them upward."]
        if abs(correction) > 1:
            return [f"Correction {place} is {plain(correction)} {unit}; within 1 {unit} is expected."]
        before = at
    return []


def objections_to_withdrawing_calibration(calibration: InstrumentCalibration, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = []
    if not by.is_supervisor:
        found.append(f"{by.full_name} is not a supervisor. A supervisor withdraws calibrations.")
    if calibration.withdrawn_at is not None:
        found.append("This calibration is withdrawn already.")
    return found
