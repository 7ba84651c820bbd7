"""When the trail may be reviewed."""

from __future__ import annotations

from labrecords.models import AuditCheckpoint, User


def objections_to_reviewing_trail(
    checkpoint: AuditCheckpoint | None, *, by: User, start: int, remarks: str
) -> list[str]:
    """An auditor signs for events that are sealed and that no review has reached."""
    found = [] if by.is_auditor else [f"{by.full_name} is not an auditor. An auditor reviews the trail."]
    if checkpoint is None:
        found.append("There is no checkpoint of this size. Open the page again and sign what it shows.")
    elif checkpoint.tree_size <= start:
        found.append("These events were reviewed already. Open the page again and sign what it shows.")
    if not remarks.strip():
        found.append("Remarks are empty: say what was looked at and what was found.")
    return found
