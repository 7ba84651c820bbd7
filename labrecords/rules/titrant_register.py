"""What a titrant and its lots must say."""

from __future__ import annotations

from datetime import date

from labrecords.models import LotState, Titrant, TitrantLot, User
from labrecords.rules.method import objections_to_ratio
from labrecords.rules.readings import objections_to_date, objections_to_order
from labrecords.rules.substance import objections_to_keeping_registers


def objections_to_recording_titrant(titrant: Titrant, *, by: User) -> list[str]:
    """A code of its own, a window about the nominal concentration, and one way to be standardized."""
    found = objections_to_keeping_registers(by)
    if not titrant.code.strip() or len(titrant.code) > 20:
        found.append(f"Code is {titrant.code!r}: a short code, 20 characters at most.")
    if Titrant.objects.filter(code=titrant.code).exists():
        found.append(f"{titrant.code} is in the register already. Choose another code.")
    if not titrant.window_low < titrant.nominal < titrant.window_high:
        found.append(
            f"Window is {titrant.window_low} to {titrant.window_high} mol/L; it must hold the nominal {titrant.nominal}."
        )
    if (titrant.standard_substance is None) == (titrant.standard_titrant is None):
        found.append("Standardized against: choose a primary standard or another titrant, one of the two.")
    if titrant.standard_titrant is not None and not titrant.aliquot:
        found.append("Aliquot is empty: write how many mL of the other titrant are pipetted.")
    if not 2 <= titrant.replicates_needed <= 20:
        found.append(f"Replicates needed is {titrant.replicates_needed}: from 2 to 20.")
    if not titrant.limit > 0:
        found.append(f"Limit is {titrant.limit}: a number above 0.")
    if titrant.restandardization_days < 1 or titrant.shelf_life_days < 1:
        found.append("Intervals: restandardization and shelf life are whole days, 1 or more.")
    return found + objections_to_ratio(titrant.ratio)


def objections_to_recording_lot(lot: TitrantLot, *, by: User, today: date) -> list[str]:
    """A number of its own, a day that has come, a reagent lot and a volume."""
    found = [] if by.is_analyst or by.is_supervisor else ["An analyst or a supervisor records titrant lots."]
    if not lot.number.strip():
        found.append("Number is empty: write the number on the bottle's label.")
    if TitrantLot.objects.filter(number=lot.number).exists():
        found.append(f"Lot {lot.number} is recorded already. Open it, or choose another number.")
    if lot.titrant.superseded_by_id is not None:
        found.append(f"{lot.titrant.code} is superseded. Choose the titrant that took its place.")
    if not lot.reagent_lot.strip():
        found.append("Reagent lot is empty: write the lot of the reagent it was made from.")
    if not 0 < lot.volume <= 200_000:
        found.append(f"Volume is {lot.volume} mL: what was prepared, above 0 and up to 200 000 mL.")
    found += objections_to_date(lot.prepared_on, today=today, field="Prepared on", may_be_future=False)
    return found + objections_to_order(
        lot.prepared_on, lot.expires_on, earlier_field="Prepared on", later_field="Expires on"
    )


def objections_to_withdrawing_lot(lot: TitrantLot, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor withdraws lots."]
    if lot.state == LotState.WITHDRAWN:
        found.append(f"Lot {lot.number} is withdrawn already.")
    return found
