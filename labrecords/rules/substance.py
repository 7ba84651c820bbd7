"""What a substance must say."""

from __future__ import annotations

from collections.abc import Sequence

from labrecords.models import Hazard, Substance, User


def objections_to_keeping_registers(by: User) -> list[str]:
    """Administrators and supervisors keep the registers of substances, titrants and instruments."""
    if by.is_administrator or by.is_supervisor:
        return []
    return [f"{by.full_name} is neither administrator nor supervisor. Ask one of them."]


def objections_to_recording_substance(name: str, *, by: User, hazards: Sequence[str]) -> list[str]:
    """A name of its own and known hazards."""
    found = objections_to_keeping_registers(by)
    if not name.strip():
        found.append("Name is empty: write the substance's name.")
    if Substance.objects.filter(name=name).exists():
        found.append(f"{name} is in the register already. Supersede it, or choose another name.")
    unknown = [hazard for hazard in hazards if hazard not in Hazard.values]
    found += [f"Hazard {hazard!r} is not known; expected one of {', '.join(Hazard.values)}." for hazard in unknown]
    return found
