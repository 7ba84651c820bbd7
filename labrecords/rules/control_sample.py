"""What a control sample must say."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

from labrecords.models import ControlSample, Method, User
from labrecords.queries.method import effective_version


def objections_to_recording_control_sample(
    code: str, *, by: User, name: str, method: Method, unit: str, assigned_expanded: Decimal, expires_on: date,
    today: date,
) -> list[str]:  # fmt: skip
    """A supervisor records it, in the unit its method reports, before it expires."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor records control samples."]
    if not code.strip() or ControlSample.objects.filter(code=code).exists():
        found.append(f"Code is {code!r}: write one that is not in use.")
    if not name.strip():
        found.append("Name is empty: write what the material is.")
    version = effective_version(method)
    if version is not None and version.unit != unit:
        found.append(f"{method.code} reports {version.unit}; the assigned value is in {unit}.")
    if assigned_expanded <= 0:
        found.append(f"Uncertainty is {assigned_expanded}: a number above 0.")
    if expires_on < today:
        found.append(f"Expiry is {expires_on:%-d %b %Y}, past; expected a day after {today:%-d %b %Y}.")
    return found
