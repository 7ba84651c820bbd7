"""What may be done with replicates and blanks."""

from __future__ import annotations

from collections.abc import Mapping
from decimal import Decimal

from labrecords.models import (
    ExclusionCause,
    RecordState,
    Replicate,
    ReplicateKind,
    Run,
    Standardization,
    User,
)
from labrecords.queries.replicate import instruments_of
from labrecords.rules.readings import (
    objections_to_burette_reading,
    objections_to_drift,
    objections_to_sample_amount,
    objections_to_temperature,
    remarks_on_burette_reading,
    remarks_on_sample_amount,
    remarks_on_temperature,
)  # fmt: skip

MOST_REPLICATES = 20
BURETTE = ("start", "first_end", "end")
FIELDS = ("amount", "start", "first_end", "end", "temperature", "drift", "minutes", "observation")
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


def objections_to_readings(
    replicate: Replicate, *, record: Record, by: User, values: Mapping[str, Decimal | str | None], reason: str
) -> list[str]:
    """Readings must be plausible for their instruments; a change of a kept one needs its reason."""
    found = objections_to_working_on(record, by=by)
    unknown = [field for field in values if field not in FIELDS]
    if unknown:
        return [*found, f"Field is {unknown[0]!r}; expected one of {', '.join(FIELDS)}."]
    if replicate.is_excluded:
        found.append(f"{str(replicate).capitalize()} is excluded and stays as it is.")
    if replicate.curve_id and any(field in values for field in BURETTE):
        found.append(f"{str(replicate).capitalize()} has a recorded curve; it takes no burette readings.")
    if values.get("first_end") is not None and not record.rule.reads_two_ends:
        found.append("First endpoint: this sheet reads one endpoint, its end.")
    if (values.get("drift") is not None or values.get("minutes") is not None) and not record.rule.takes_drift:
        found.append("Drift and duration: the titres of this sheet are not corrected for drift.")
    if any(needs_a_reason(replicate, field=field, value=value) for field, value in values.items()):
        found += [] if len(reason.strip()) >= 5 else ["A kept reading is changed. Say in a sentence why."]
    return found + _objections_to_values(replicate, record=record, values=values)


def needs_a_reason(replicate: Replicate, *, field: str, value: Decimal | str | None) -> bool:
    """Whether a value would correct one that was kept."""
    before = getattr(replicate, field, None)
    return before not in (None, "") and str(before) != str(value)


def _objections_to_values(
    replicate: Replicate, *, record: Record, values: Mapping[str, Decimal | str | None]
) -> list[str]:
    found: list[str] = []
    read = {field: value for field, value in values.items() if isinstance(value, Decimal)}
    if any(field in read for field in BURETTE):
        burette = instruments_of(record)["burette"].instrument
        start, first, end = (read.get(field, getattr(replicate, field)) for field in BURETTE)
        found += objections_to_burette_reading(
            start, end, first=first, capacity=burette.capacity or Decimal(0), resolution=burette.resolution,
            burette=burette.identifier,
        )  # fmt: skip
    if "amount" in read:
        unit, expected = expected_amount(record)
        found += objections_to_sample_amount(read["amount"], unit=unit, expected=expected)
    if "temperature" in read:
        found += objections_to_temperature(read["temperature"])
    found += objections_to_drift(read.get("drift"), read.get("minutes"))
    return found


def remarks_on_reading(replicate: Replicate, *, record: Record, field: str, value: Decimal | str | None) -> list[str]:
    """What deserves a second look though it is kept: an unusual amount, a warm room, a reading cut short."""
    if not isinstance(value, Decimal):
        return []
    if field == "amount":
        unit, expected = expected_amount(record)
        return remarks_on_sample_amount(value, unit=unit, expected=expected)
    if field == "temperature":
        return remarks_on_temperature(value)
    if field not in BURETTE:
        return []
    resolution = instruments_of(record)["burette"].instrument.resolution
    name = {"start": "Start", "first_end": "First endpoint", "end": "End"}[field]
    return remarks_on_burette_reading(value, field=name, resolution=resolution)


def expected_amount(record: Record) -> tuple[str, Decimal | None]:
    """The unit of the amount column and the amount the method or the titrant's rule expects."""
    if isinstance(record, Run):
        return record.method_version.sample_unit, record.method_version.sample_amount
    titrant = record.lot.titrant
    if record.reference_standard_id:
        return "g", titrant.standard_mass
    return "mL", titrant.aliquot


def objections_to_excluding(replicate: Replicate, *, record: Record, by: User, cause: str, sentence: str) -> list[str]:
    """An exclusion names an assignable cause from the list and says in a sentence what happened."""
    found = objections_to_working_on(record, by=by)
    if replicate.is_excluded:
        found.append(f"{str(replicate).capitalize()} is excluded already.")
    if cause not in ExclusionCause.values:
        found.append(f"Cause is {cause!r}; choose one of the list. An outlier test alone is no cause.")
    if len(sentence.strip()) < 10:
        found.append(f"Sentence is {sentence!r}: say what happened, in at least ten characters.")
    return found


def objections_to_attaching(replicate: Replicate, *, record: Record, by: User, digest: str, quantity: str) -> list[str]:
    """A curve goes to a titration without readings, is of the method's quantity, and is used once only."""
    found = objections_to_working_on(record, by=by)
    if not record.rule.takes_curve:
        return [*found, "This sheet takes burette readings, not curves."]
    wanted = record.rule.curve_quantity
    if quantity != wanted:
        found.append(f"The curve is of {quantity}; {record.rule} takes {wanted}.")
    if replicate.curve_id or replicate.start is not None or replicate.end is not None:
        found.append(f"{str(replicate).capitalize()} has its curve or readings. Add another titration for this curve.")
    twin = Replicate.objects.filter(curve__file__sha256=digest).select_related("run", "standardization").first()
    if twin is not None:
        found.append(f"This file is {twin} of {twin.owner.number} already. One recording is one titration.")
    return found
