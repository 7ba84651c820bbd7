"""What a titrant and its lots must say."""

from __future__ import annotations

from datetime import date, timedelta

from labrecords.models import LotState, Titrant, TitrantLot, User
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.identifier import objections_to_identifier
from labrecords.rules.method import objections_to_curve, objections_to_ratio, objections_to_volumes
from labrecords.rules.number import plain
from labrecords.rules.readings import day, objections_to_date, objections_to_order
from labrecords.rules.recipe import objections_to_indicator
from labrecords.rules.substance import objections_to_keeping_registers

LONGEST_DAYS = 3650


def objections_to_recording_titrant(titrant: Titrant, *, by: User) -> list[str]:
    """A code of its own, a window about the nominal concentration, and one way to be standardized."""
    found = objections_to_keeping_registers(by) + objections_to_fit(titrant)
    same = Titrant.objects.filter(code__iexact=titrant.code)
    found += objections_to_identifier(titrant.code, field="Code", known=same.values_list("code", flat=True))
    if not titrant.name.strip():
        found.append("Name is empty: write the solution's name, such as sodium hydroxide 0.1 mol/L.")
    if not 0 < titrant.window_low < titrant.nominal < titrant.window_high:
        found.append(
            f"Window is {plain(titrant.window_low)} to {plain(titrant.window_high)} mol/L; it must lie above "
            f"0 and hold the nominal {plain(titrant.nominal)}."
        )
    for field in ("restandardization_days", "shelf_life_days"):
        count = getattr(titrant, field)
        if not 1 <= count <= LONGEST_DAYS:
            name = field.replace("_", " ").capitalize()
            found.append(f"{name} is {count}: whole days from 1 to {LONGEST_DAYS} are expected.")
    return found + _objections_to_standardizing(titrant) + objections_to_ratio(titrant.ratio)


def _objections_to_standardizing(titrant: Titrant) -> list[str]:
    found = []
    if (titrant.standard_substance is None) == (titrant.standard_titrant is None):
        found.append("Standardized against: choose a primary standard or another titrant, one of the two.")
    if titrant.standard_titrant is not None and not (titrant.aliquot and titrant.aliquot > 0):
        found.append("Aliquot is empty: write how many mL of the other titrant are pipetted.")
    if titrant.standard_mass is not None and not titrant.standard_mass > 0:
        found.append(f"Mass of the standard is {plain(titrant.standard_mass)} g: above 0, or left empty.")
    if not 2 <= titrant.replicates_needed <= 20:
        found.append(f"Replicates needed is {titrant.replicates_needed}: from 2 to 20.")
    if not titrant.limit > 0:
        found.append(f"Limit is {plain(titrant.limit)}: a number above 0.")
    found += objections_to_indicator(titrant)
    if titrant.buoyancy and titrant.standard_substance is not None and titrant.standard_substance.density is None:
        found.append(
            f"Buoyancy: {titrant.standard_substance.name} has no density in the register. Supersede it with one."
        )
    if titrant.takes_curve:
        found += objections_to_curve(titrant)
    return found + objections_to_volumes(titrant)


def objections_to_superseding_titrant(titrant: Titrant, *, by: User) -> list[str]:
    """Once only."""
    found = objections_to_keeping_registers(by)
    if titrant.superseded_by is not None:
        found.append(f"{titrant.code} is superseded already. Open {titrant.superseded_by} instead.")
    return found


def objections_to_recording_lot(lot: TitrantLot, *, by: User, today: date) -> list[str]:
    """A number of its own, a day that has come, a reagent lot and a volume."""
    found = [] if by.is_analyst or by.is_supervisor else [_not_their_work(by)]
    found += objections_to_fit(lot)
    same = TitrantLot.objects.filter(number__iexact=lot.number)
    found += objections_to_identifier(lot.number, field="Number", known=same.values_list("number", flat=True))
    if lot.titrant.superseded_by is not None:
        found.append(f"{lot.titrant.code} is superseded. Choose {lot.titrant.superseded_by}.")
    if not (lot.prepared_by.is_analyst or lot.prepared_by.is_supervisor):
        found.append(f"Prepared by is {lot.prepared_by}, who is neither analyst nor supervisor. Choose who made it.")
    if not lot.reagent_lot.strip():
        found.append("Reagent lot is empty: write the lot of the reagent it was made from.")
    if not 0 < lot.volume <= 200_000:
        found.append(f"Volume is {plain(lot.volume)} mL: what was prepared, above 0 and up to 200 000 mL.")
    found += objections_to_date(lot.prepared_on, today=today, field="Prepared on", may_be_future=False)
    return found + _objections_to_lasting(lot)


def _objections_to_lasting(lot: TitrantLot) -> list[str]:
    last = lot.prepared_on + timedelta(days=lot.titrant.shelf_life_days)
    if lot.expires_on > last:
        return [
            f"Expires on is {day(lot.expires_on)}, after the shelf life of {lot.titrant.shelf_life_days} "
            f"days ends on {day(last)}. Write that day or an earlier one."
        ]
    return objections_to_order(lot.prepared_on, lot.expires_on, earlier_field="Prepared on", later_field="Expires on")


def objections_to_expiring_lot(lot: TitrantLot, *, by: User, today: date) -> list[str]:
    """After its shelf life, by those who work with it."""
    found = [] if by.is_analyst or by.is_supervisor else [_not_their_work(by)]
    if lot.expires_on >= today:
        found.append(f"Lot {lot.number} lasts until {day(lot.expires_on)}. Withdraw it to end its use now.")
    if lot.state not in (LotState.IN_USE, LotState.QUARANTINED):
        found.append(f"Lot {lot.number} is {lot.state}; it is out of use already.")
    return found


def objections_to_withdrawing_lot(lot: TitrantLot, *, by: User) -> list[str]:
    """A supervisor, once only."""
    found = []
    if not by.is_supervisor:
        found.append(f"{by.full_name} is not a supervisor. A supervisor withdraws lots.")
    if lot.state == LotState.WITHDRAWN:
        found.append(f"Lot {lot.number} is withdrawn already.")
    return found


def _not_their_work(by: User) -> str:
    return f"{by.full_name} is neither analyst nor supervisor. One of them looks after titrant lots."
