"""What a product and its specification must say."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from labrecords.models import Product, Specification, SpecificationLimit, User, VersionState
from labrecords.queries.method import effective_version
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.method import CODE
from labrecords.rules.recipe import objections_to_places


def objections_to_recording_product(*, by: User, code: str, name: str) -> list[str]:
    """Supervisors record products; a code is short, in capitals, and used once."""
    found = _objections_to_author(by)
    if not CODE.fullmatch(code) or len(code) > 20:
        found.append(f"Code is {code!r}: capital letters, digits and hyphens, a letter first, 20 at most.")
    if Product.objects.filter(code=code).exists():
        found.append(f"Code {code} is in use. Choose another.")
    found += objections_to_fit(Product(name=name))
    if not name.strip():
        found.append("Name is empty: write the product's name.")
    return found


def objections_to_specifying(*, by: User, reason: str) -> list[str]:
    """Supervisors make specifications, and say why."""
    return [
        *_objections_to_author(by),
        *([] if reason.strip() else ["Reason is empty: say why this version is made."]),
    ]


def objections_to_limits(rows: Sequence[Mapping[str, Any]]) -> list[str]:
    """At least one test; each with a limit, in order, in the unit its method reports."""
    found = [] if rows else ["Limits: a specification has at least one test."]
    seen = set()
    for row in rows:
        method, lower, upper = row["method"], row.get("lower"), row.get("upper")
        if method.pk in seen:
            found.append(f"{method.code} stands twice; each test has one line.")
        seen.add(method.pk)
        if lower is None and upper is None:
            found.append(f"{method.code} has no limit: give a lower limit, an upper limit or both.")
        if lower is not None and upper is not None and lower >= upper:
            found.append(f"{method.code}: lower limit {lower} is not below upper limit {upper}.")
        found += [f"{method.code}: {sentence}" for sentence in _objections_to_rounding(row)]
        if row.get("figures") is not None and not 1 <= row["figures"] <= 15:
            found.append(f"{method.code}: significant figures are {row['figures']}; from 1 to 15, or left empty.")
        version = effective_version(method)
        if version is not None and version.unit != row["unit"]:
            found.append(f"{method.code} reports {version.unit}; the limit is in {row['unit']}.")
    return found


def _objections_to_rounding(row: Mapping[str, Any]) -> list[str]:
    found = objections_to_fit(SpecificationLimit(**row)) + objections_to_places(row["places"])
    if row.get("guard_factor", 1) < 0:
        found.append(f"Guard factor is {row['guard_factor']}: a number not below 0.")
    return found


def objections_to_making_specification_effective(specification: Specification, *, by: User) -> list[str]:
    """Only a draft, only by a supervisor."""
    found = _objections_to_author(by)
    if specification.state != VersionState.DRAFT:
        found.append(f"{specification} is {specification.state}. Only a draft is made effective.")
    return found


def _objections_to_author(by: User) -> list[str]:
    return [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor makes specifications."]
