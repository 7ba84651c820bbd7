"""The second person."""

from __future__ import annotations

from labrecords.models import RecordState, Run, Standardization, User
from labrecords.queries.audit import contributor_ids


def objections_to_reviewing(record: Run | Standardization, *, by: User) -> list[str]:
    """Only a supervisor who entered, corrected and computed no part of it reviews a submitted record."""
    found = []
    if not by.is_supervisor:
        found.append(f"{by.full_name} is not a supervisor. A supervisor of the laboratory reviews {record.number}.")
    if record.state != RecordState.SUBMITTED:
        found.append(f"{record.number} is {record.state}, not submitted. Only a submitted record is reviewed.")
    if by.pk in contributor_ids(record):
        found.append(f"You performed or entered a part of {record.number}. Another supervisor reviews it.")
    return found


def objections_to_reason(reason: str, *, what: str) -> list[str]:
    """A decision against a record needs its reason in words."""
    return [] if len(reason.strip()) >= 5 else [f"Reason is {reason!r}: say in a sentence why {what}."]
