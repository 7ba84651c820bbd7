"""What may be done with replicates and blanks."""

from __future__ import annotations

from decimal import Decimal

from labrecords.models import ExclusionCause, RecordState, Replicate, ReplicateKind, Run, Standardization, User
from labrecords.queries.replicate import instruments_of
from labrecords.rules.readings import (
    objections_to_burette_reading, objections_to_sample_amount, objections_to_temperature,
)  # fmt: skip

MOST_REPLICATES = 20
FIELDS = ("amount", "start", "end", "temperature", "observation")
Record = Run | Standardization


def objections_to_working_on(record: Record, *, by: User) -> list[str]:
    """An analyst works on an open record."""
    found = [] if by.is_analyst else [f"{by.full_name} is not an analyst. An analyst enters readings."]
    if record.state != RecordState.OPEN:
        found.append(f"{record.number} is {record.state}. Only an open record is changed.")
    return found


def objections_to_adding(record: Record, *, by: User, kind: str) -> list[str]:
    """There is an end to the replicates of one record: best of many is no result."""
    found = objections_to_working_on(record, by=by)
    if kind not in ReplicateKind.values:
        found.append(f"Kind is {kind!r}; expected sample or blank.")
    if record.replicates.filter(kind=kind).count() >= MOST_REPLICATES:
        found.append(f"{record.number} has {MOST_REPLICATES} of them already. Talk to your supervisor.")
    return found


def objections_to_reading(
    replicate: Replicate, *, record: Record, by: User, field: str, value: Decimal | str | None, reason: str
) -> list[str]:
    """A reading must be plausible for its instrument; a change of a kept one needs its reason."""
    found = objections_to_working_on(record, by=by)
    if field not in FIELDS:
        return [*found, f"Field is {field!r}; expected one of {', '.join(FIELDS)}."]
    if replicate.is_excluded:
        found.append(f"{str(replicate).capitalize()} is excluded and stays as it is.")
    if replicate.curve_id and field in ("start", "end"):
        found.append(f"{str(replicate).capitalize()} has a recorded curve; it takes no burette readings.")
    if getattr(replicate, field) not in (None, "") and len(reason.strip()) < 5:
        found.append("This reading was kept before. Say in a sentence why it is corrected.")
    if value is not None and isinstance(value, Decimal):
        found += _objections_to_value(replicate, record=record, field=field, value=value)
    return found


def needs_a_reason(replicate: Replicate, *, field: str, value: Decimal | str | None) -> bool:
    """Whether a value would correct one that was kept."""
    before = getattr(replicate, field)
    return before not in (None, "") and str(before) != str(value)


def _objections_to_value(replicate: Replicate, *, record: Record, field: str, value: Decimal) -> list[str]:
    used = instruments_of(record)
    if field in ("start", "end"):
        burette = used["burette"].instrument
        start = value if field == "start" else replicate.start
        end = value if field == "end" else replicate.end
        return objections_to_burette_reading(
            start, end, capacity=burette.capacity or Decimal(0), resolution=burette.resolution,
            burette=burette.identifier,
        )  # fmt: skip
    if field == "amount":
        unit, expected = expected_amount(record)
        return objections_to_sample_amount(value, unit=unit, expected=expected)
    return objections_to_temperature(value)


def expected_amount(record: Record) -> tuple[str, Decimal | None]:
    """The unit of the amount column and the amount the method or the titrant's rule expects."""
    if isinstance(record, Run):
        return record.method_version.sample_unit, record.method_version.sample_amount
    titrant = record.lot.titrant
    if record.reference_standard_id:
        return "g", titrant.standard_mass
    return "mL", titrant.aliquot


def objections_to_excluding(
    replicate: Replicate, *, record: Record, by: User, cause: str, sentence: str
) -> list[str]:
    """An exclusion names an assignable cause from the list and says in a sentence what happened."""
    found = objections_to_working_on(record, by=by)
    if replicate.is_excluded:
        found.append(f"{str(replicate).capitalize()} is excluded already.")
    if cause not in ExclusionCause.values:
        found.append(f"Cause is {cause!r}; choose one of the list. An outlier test alone is no cause.")
    if len(sentence.strip()) < 10:
        found.append(f"Sentence is {sentence!r}: say what happened, in at least ten characters.")
    return found


def objections_to_attaching(
    replicate: Replicate, *, record: Record, by: User, digest: str, quantity: str
) -> list[str]:
    """A curve goes to a titration without readings, is of the method's quantity, and is used once only."""
    found = objections_to_working_on(record, by=by)
    if isinstance(record, Standardization) or record.method_version.endpoint != "curve":
        return [*found, "This sheet takes burette readings, not curves."]
    wanted = record.method_version.curve_quantity
    if quantity != wanted:
        found.append(f"The curve is of {quantity}; {record.method_version} takes {wanted}.")
    if replicate.curve_id or replicate.start is not None or replicate.end is not None:
        found.append(f"{str(replicate).capitalize()} has its curve or readings. Add another titration for this curve.")
    twin = Replicate.objects.filter(curve__file__sha256=digest).select_related("run").first()
    if twin is not None and twin.run is not None:
        found.append(f"This file is {twin} of {twin.run.number} already. One recording is one titration.")
    return found


