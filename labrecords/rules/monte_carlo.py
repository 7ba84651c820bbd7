"""When a result may be checked by drawing its inputs."""

from __future__ import annotations

from labrecords.models import Calculation, User


def objections_to_checking(calculation: Calculation, *, by: User) -> list[str]:
    """Anybody of the laboratory may ask; there must be a result, and one check at a time is enough."""
    may = by.is_analyst or by.is_supervisor or by.is_auditor
    found = [] if may else ["An analyst, a supervisor or an auditor checks results. Ask one of them."]
    if calculation.value is None:
        found.append("This calculation has no result to check. Complete the readings first.")
    if calculation.monte_carlo_checks.filter(state="waiting").exists():
        found.append("This result is being checked already. Wait for the worker.")
    return found
