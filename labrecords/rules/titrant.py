"""Which titrant lots may be used."""

from __future__ import annotations

from datetime import datetime

from django.utils import timezone

from labrecords.models import LotState, Titrant, TitrantLot
from labrecords.queries.standardization import in_force


def objections_to_using_lot(lot: TitrantLot, *, titrant: Titrant, at: datetime) -> list[str]:
    """A lot of the right titrant, in use, not past its shelf life, with a standardization in force."""
    day = timezone.localtime(at).date()
    found = []
    if lot.titrant_id != titrant.pk:
        found.append(f"Lot {lot.number} is {lot.titrant.name}; the method needs {titrant.name}.")
    if lot.state != LotState.IN_USE:
        found.append(f"Lot {lot.number} is {lot.state}. Choose a lot in use.")
    if lot.expires_on < day:
        found.append(f"Lot {lot.number} passed its shelf life on {lot.expires_on:%-d %b %Y}. Choose another lot.")
    standardization = in_force(lot, at=at)
    if standardization is None:
        found.append(
            f"Lot {lot.number} has no approved standardization on {day:%-d %b %Y}. "
            "Standardize it, or choose another lot."
        )
    elif standardization.questions.filter(answered_at__isnull=True).exists():
        found.append(
            f"Lot {lot.number} rests on {standardization.number}, which is in question. "
            "A supervisor answers the question, or you choose another lot."
        )
    return found
