"""What stands in the way of a standardization."""

from __future__ import annotations

from datetime import datetime

from django.utils import timezone

from labrecords.models import (
    LotState,
    RecordState,
    ReferenceStandard,
    Standardization,
    TitrantLot,
    User,
)  # fmt: skip
from labrecords.rules.calculation import objections_to_latest_calculation
from labrecords.rules.replicate import objections_to_working_on
from labrecords.rules.titrant import objections_to_using_lot


def objections_to_starting_standardization(
    lot: TitrantLot,
    *,
    by: User,
    reference_standard: ReferenceStandard | None,
    against: TitrantLot | None,
    at: datetime,
) -> list[str]:
    """Everything that stands in the way of a new standardization, each with what to do."""
    day = timezone.localtime(at).date()
    found = [] if by.is_analyst else [f"{by.full_name} is not an analyst. An analyst standardizes titrants."]
    if lot.state not in (LotState.QUARANTINED, LotState.IN_USE):
        found.append(f"Lot {lot.number} is {lot.state}. Prepare a new lot.")
    if lot.expires_on < day:
        found.append(f"Lot {lot.number} passed its shelf life on {lot.expires_on:%-d %b %Y}. Prepare a new lot.")
    unfinished = lot.standardizations.filter(state__in=[RecordState.OPEN, RecordState.SUBMITTED]).first()
    if unfinished is not None:
        found.append(f"{unfinished.number} of lot {lot.number} is {unfinished.state}. Finish that one first.")
    if reference_standard is not None and against is None:
        return found + objections_to_using_standard(reference_standard, lot=lot, at=at)
    if against is not None and reference_standard is None:
        return found + _objections_to_other_lot(against, lot=lot, at=at)
    return [*found, "Choose either a reference standard or a lot of the other titrant, one of the two."]


def objections_to_using_standard(standard: ReferenceStandard, *, lot: TitrantLot, at: datetime) -> list[str]:
    """A standard of the titrant's substance, in use, and not past its expiry."""
    day, wanted = timezone.localtime(at).date(), lot.titrant.standard_substance
    found = []
    if wanted is None:
        found.append(f"{lot.titrant.name} is standardized against {lot.titrant.standard_titrant}, not by mass.")
    elif standard.substance_id != wanted.pk:
        found.append(f"{standard.number} is {standard.substance.name}; {lot.titrant.name} needs {wanted.name}.")
    if standard.state != LotState.IN_USE:
        found.append(f"Reference standard {standard.number} is {standard.state}. Choose one in use.")
    if standard.expires_on < day:
        found.append(f"Reference standard {standard.number} lapsed on {standard.expires_on:%-d %b %Y}. Choose another.")
    if standard.superseded_by_id is not None:
        found.append(
            f"Reference standard {standard.number} is superseded by {standard.superseded_by}. Choose that one."
        )
    return found


def _objections_to_other_lot(against: TitrantLot, *, lot: TitrantLot, at: datetime) -> list[str]:
    wanted = lot.titrant.standard_titrant
    if wanted is None:
        return [f"{lot.titrant.name} is standardized by mass, not against another titrant."]
    return objections_to_using_lot(against, titrant=wanted, at=at)


def objections_to_submitting_standardization(standardization: Standardization, *, by: User) -> list[str]:
    """Submitted by an analyst on an acceptable calculation of exactly the present readings."""
    return [
        *objections_to_working_on(standardization, by=by),
        *objections_to_latest_calculation(standardization),
    ]


def objections_to_approving_standardization(standardization: Standardization, *, by: User) -> list[str]:
    """What it rests on must still hold, and the concentration must lie in the titrant's window."""
    found = [
        f"{standardization.number} is in question: {question.because} A supervisor answers the question first."
        for question in standardization.questions.filter(answered_at__isnull=True)
    ]
    lot, calculation = standardization.lot, standardization.calculation
    if lot.state not in (LotState.QUARANTINED, LotState.IN_USE):
        found.append(f"Lot {lot.number} is {lot.state}. Void the standardization.")
    standard = standardization.reference_standard
    if standard is not None and standard.state == LotState.WITHDRAWN:
        found.append(f"Reference standard {standard.number} is withdrawn. Void the standardization.")
    if standardization.against is not None and standardization.against.state != RecordState.APPROVED:
        found.append(f"{standardization.against.number} is {standardization.against.state}. Void this one.")
    if calculation is not None and calculation.value is not None:
        low, high = float(lot.titrant.window_low), float(lot.titrant.window_high)
        if not low <= calculation.value <= high:
            found.append(
                f"The concentration {calculation.value:.5f} mol/L is outside the window "
                f"{low:g} to {high:g} mol/L. Adjust the solution or prepare a new lot."
            )
    return found


def objections_to_voiding_standardization(standardization: Standardization, *, by: User) -> list[str]:
    """An open or submitted one by an analyst or supervisor; an approved one by a supervisor only."""
    found = []
    if standardization.state == RecordState.VOID:
        found.append(f"{standardization.number} is void already.")
    if standardization.state == RecordState.APPROVED and not by.is_supervisor:
        found.append(f"{standardization.number} is approved. A supervisor may void it.")
    if not (by.is_analyst or by.is_supervisor):
        found.append(f"{by.full_name} is neither analyst nor supervisor. Ask one of them.")
    return found
