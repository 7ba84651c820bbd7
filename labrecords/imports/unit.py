"""Units and names as they stand in the headings of recorded tables."""

from __future__ import annotations

import re

# Written forms, in small letters, and the unit they mean.
UNITS = {
    "ml": "mL", "millilitre": "mL", "milliliter": "mL", "cm3": "mL", "cm³": "mL",
    "ul": "µL", "l": "L",
    "ph": "pH", "mv": "mV", "v": "V",
    "us/cm": "µS/cm", "ms/cm": "mS/cm", "us": "µS", "ms": "mS", "s/m": "S/m", "ms/m": "mS/m",
    "°c": "°C", "degc": "°C", "deg c": "°C", "°f": "°F", "k": "K",
    "au": "AU", "abs": "AU", "a.u.": "AU",
    "s": "s", "sec": "s", "min": "min", "h": "h", "%": "%",
    "ph/ml": "pH/mL", "mv/ml": "mV/mL", "-": "", "1": "",
}  # fmt: skip
BRACKETED = re.compile(r"(.*?)\s*(?:\[([^\]]*)\]|\(([^)]*)\)|/\s*([^/\[\]()]+)|,\s*([^,]+))")
BEHIND = re.compile(r"(.*\S)\s+(\S+)")
# Units that stand alone as a heading; others, such as V or K, are as often the name of a quantity.
HEADINGS = {"mL", "pH", "mV", "µS/cm", "mS/cm", "°C"}


def unit_of(text: str) -> str | None:
    """The unit a piece of text means; None when it is no unit."""
    key = " ".join(text.replace("\u03bc", "u").replace("\u00b5", "u").lower().split())
    return UNITS.get(key.strip("[]()"))


def split_heading(heading: str) -> tuple[str, str]:
    """Name and unit of a heading such as "Volume [mL]", "V/mL", "Volume, mL" or "mV"."""
    alone = unit_of(heading)
    if alone in HEADINGS:
        return heading, alone
    for pattern in (BRACKETED, BEHIND):
        found = pattern.fullmatch(heading)
        unit = unit_of(next(part for part in found.groups()[1:] if part is not None)) if found else None
        if found and unit is not None:
            return found[1].strip() or heading, unit
    return heading, ""
