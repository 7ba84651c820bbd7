"""What a substance must say."""

from __future__ import annotations

from labrecords.models import Hazard, Substance, User
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.number import plain

DENSITIES = (0.05, 25)  # g/cm3, from aerogels to osmium


def objections_to_keeping_registers(by: User) -> list[str]:
    """Administrators and supervisors keep the registers of substances, titrants and instruments."""
    if by.is_administrator or by.is_supervisor:
        return []
    return [f"{by.full_name} is neither administrator nor supervisor. Ask one of them."]


def objections_to_recording_substance(substance: Substance, *, by: User) -> list[str]:
    """A name of its own, a density that matter can have, and known hazards."""
    found = objections_to_keeping_registers(by) + objections_to_fit(substance)
    if not substance.name.strip():
        found.append("Name is empty: write the substance's name.")
    if Substance.objects.filter(name=substance.name).exists():
        found.append(f"{substance.name} is in the register already. Supersede it under another name, or open it.")
    density, (low, high) = substance.density, DENSITIES
    if density is not None and not low <= density <= high:
        found.append(f"Density is {plain(density)} g/cm³; {low} to {high} g/cm³ is expected.")
    unknown = [hazard for hazard in substance.hazards if hazard not in Hazard.values]
    found += [f"Hazard {hazard!r} is not known; expected one of {', '.join(Hazard.values)}." for hazard in unknown]
    return found


def objections_to_superseding_substance(substance: Substance, *, by: User) -> list[str]:
    """Once only."""
    found = objections_to_keeping_registers(by)
    if substance.superseded_by is not None:
        found.append(f"{substance.name} is superseded already. Open {substance.superseded_by.name} instead.")
    return found
