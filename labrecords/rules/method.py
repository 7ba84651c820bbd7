"""What a test method must say before it may be used."""

from __future__ import annotations

import re
from decimal import Decimal
from fractions import Fraction

from labrecords.models import EndpointRule, Method, MethodVersion, User, VersionState
from labrecords.queries.chemistry import FAMILIES, TAKES, objections_to_chemistry
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.number import plain
from labrecords.rules.recipe import (
    objections_to_counts,
    objections_to_indicator,
    objections_to_result,
    objections_to_working,
)

CODE = re.compile(r"[A-Z][A-Z0-9]*(-[A-Z0-9]+)*")
DENSITY = (Decimal("0.1"), Decimal(25))


def objections_to_recording_method(*, by: User, code: str, title: str) -> list[str]:
    """Supervisors record methods; a code is short, in capitals, and used once."""
    found = _objections_to_author(by)
    if not CODE.fullmatch(code) or len(code) > 20:
        found.append(f"Code is {code!r}: capital letters, digits and hyphens, a letter first, 20 at most.")
    if Method.objects.filter(code=code).exists():
        found.append(f"Code {code} is in use. Record a new version of that method, or choose another code.")
    found += objections_to_fit(Method(title=title))
    if not title.strip():
        found.append("Title is empty: name the test, for example Titratable acidity.")
    return found


def objections_to_recording_version(version: MethodVersion, *, by: User) -> list[str]:
    """A recipe must hang together before it is kept even as a draft."""
    found = _objections_to_author(by)
    if version.state != VersionState.DRAFT:
        return [
            *found,
            f"{version} is {version.state}; an effective version never changes. Record a new version.",
        ]
    found += objections_to_fit(version) + objections_to_ratio(version.ratio)
    found += _objections_to_endpoint(version) + objections_to_working(version) + objections_to_result(version)
    if version.titration == "back" and (version.excess_titrant is None or not version.excess_volume):
        found.append("Back titration: name the excess solution and the volume that is pipetted.")
    if version.titration == "blank_difference" and version.blanks_needed < 1:
        found.append("Blank difference: at least one blank is needed; blanks needed is 0.")
    if version.sample_amount is None or version.sample_amount <= 0:
        found.append(f"Sample amount is {version.sample_amount}: a number above 0 in {version.sample_unit}.")
    if version.limit is None or version.limit <= 0:
        found.append(f"Limit for the replicates is {version.limit}: a number above 0.")
    if not 1 <= version.replicates_needed <= 20:
        found.append(f"Replicates needed is {version.replicates_needed}: from 1 to 20.")
    found += _objections_to_corrections(version) + _objections_to_parts(version)
    if not version.reason.strip():
        found.append("Reason is empty: say why this version is made.")
    return found


def objections_to_ratio(ratio: str) -> list[str]:
    """A stoichiometric ratio is a whole number, a decimal or a fraction above zero."""
    try:
        value = Fraction(ratio)
    except (ValueError, ZeroDivisionError):
        return [f"Ratio is {ratio!r}: a number or a fraction such as 1, 2 or 1/2."]
    return [] if value > 0 else [f"Ratio is {ratio}: a number above 0."]


def objections_to_making_effective(version: MethodVersion, *, by: User) -> list[str]:
    """Only a draft, only by a supervisor."""
    found = _objections_to_author(by)
    if version.state != VersionState.DRAFT:
        found.append(f"{version} is {version.state}. Only a draft is made effective.")
    return found


def _objections_to_author(by: User) -> list[str]:
    return [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor makes methods."]


def _objections_to_endpoint(version: MethodVersion) -> list[str]:
    if version.takes_curve:
        return objections_to_curve(version)
    found = [] if version.indicator.strip() else ["Indicator is empty: name it and its colour change."]
    return found + objections_to_indicator(version)


def objections_to_curve(rule: EndpointRule) -> list[str]:
    """What a recorded curve is of, which family decides and which checks."""
    found = []
    for label, family in (("Deciding", rule.deciding_family), ("Checking", rule.checking_family)):
        if (family or label == "Deciding") and family not in FAMILIES:
            found.append(f"{label} family is {family!r}: one of {', '.join(FAMILIES)}.")
    if rule.deciding_family and rule.deciding_family == rule.checking_family:
        found.append(f"Deciding and checking family are both {rule.deciding_family}: a check needs another one.")
    if "fixed" in (rule.deciding_family, rule.checking_family) and rule.fixed_reading is None:
        found.append("Fixed reading is empty: the family fixed needs the pH or mV of the endpoint.")
    if "model" in (rule.deciding_family, rule.checking_family) and not rule.system:
        found.append("Chemistry is empty: the family model needs its analytes and constants.")
    if rule.system:
        found += objections_to_chemistry(rule.system)
    if not rule.curve_quantity:
        found.append("Curve quantity is empty: say what the curve records.")
    return found + objections_to_counts(rule)


def objections_to_volumes(rule: EndpointRule) -> list[str]:
    """How volumes are corrected, for methods and titrants alike."""
    found, within = [], Decimal(rule.temperature_within)
    if not 0 <= within <= 15:
        found.append(f"Temperature known within is {plain(within)} °C: from 0 to 15.")
    if rule.drift_u is not None and not 0 <= Decimal(rule.drift_u) <= 100:
        found.append(f"u of the drift is {plain(Decimal(rule.drift_u))} µL/min: from 0 to 100.")
    if not Decimal(rule.agreement_limit) > 0:
        found.append(f"Families may differ by {rule.agreement_limit}: a number above 0.")
    return found


def _objections_to_corrections(version: MethodVersion) -> list[str]:
    found = objections_to_volumes(version)
    density = version.sample_density
    if density is not None and not DENSITY[0] <= density <= DENSITY[1]:
        found.append(f"Density of the sample is {plain(density)} g/cm³: from 0.1 to 25. Is it in kg/m³?")
    if density is not None and version.sample_by != "mass":
        found.append("Density of the sample is for weighings; this sample is by volume. Leave it empty.")
    if not 0 <= Decimal(version.loss_u) <= 5:
        found.append(f"u of the loss on drying is {plain(Decimal(version.loss_u))} %: from 0 to 5.")
    return found


def _objections_to_parts(version: MethodVersion) -> list[str]:
    found = []
    for part in version.parts:
        if part["takes"] not in TAKES:
            found.append(f"{part['name']} takes {part['takes']!r}: one of {', '.join(TAKES)}.")
        found += objections_to_ratio(part["ratio"])
    if version.parts and version.titration != "direct":
        found.append("Further results of two endpoints need a direct titration.")
    if version.parts and version.takes_curve and version.endpoint_chosen != 2:
        found.append(f"The one that counts is {version.endpoint_chosen}: with further results it is the second, 2.")
    if version.parts and version.deciding_family == "fixed" and version.first_fixed_reading is None:
        found.append("First fixed reading is empty: further results need two fixed endpoints.")
    if version.first_fixed_reading is not None and version.first_fixed_reading == version.fixed_reading:
        found.append(f"Both fixed readings are {plain(version.first_fixed_reading)}: two different ones are expected.")
    return found
