"""What a control sample must say."""

from __future__ import annotations

from datetime import date

from labrecords.models import ControlSample, User
from labrecords.queries.method import effective_version
from labrecords.rules.fit import objections_to_fit
from labrecords.rules.identifier import objections_to_identifier


def objections_to_recording_control_sample(control_sample: ControlSample, *, by: User, today: date) -> list[str]:
    """A supervisor records it, in the unit its method reports, before it expires."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor records control samples."]
    found += objections_to_fit(control_sample)
    same = ControlSample.objects.filter(code__iexact=control_sample.code)
    found += objections_to_identifier(control_sample.code, field="Code", known=same.values_list("code", flat=True))
    if not control_sample.name.strip():
        found.append("Name is empty: write what the material is.")
    version = effective_version(control_sample.method)
    if version is not None and version.unit != control_sample.unit:
        found.append(
            f"{control_sample.method.code} reports {version.unit}; the assigned value is in {control_sample.unit}."
        )
    if control_sample.assigned_value < 0:
        found.append(f"Assigned value is {control_sample.assigned_value}: a number not below 0.")
    if control_sample.assigned_expanded <= 0:
        found.append(f"Uncertainty is {control_sample.assigned_expanded}: a number above 0.")
    if control_sample.expires_on < today:
        found.append(f"Expiry is {control_sample.expires_on:%-d %b %Y}, past; expected a day after {today:%-d %b %Y}.")
    return found


def objections_to_drawing(control_sample: ControlSample, *, today: date) -> list[str]:
    """Nothing is drawn from a material that is withdrawn or past its day."""
    if control_sample.withdrawn_reason:
        return [f"Control sample {control_sample.code} is withdrawn: {control_sample.withdrawn_reason}"]
    if control_sample.expires_on < today:
        return [f"Control sample {control_sample.code} lapsed on {control_sample.expires_on:%-d %b %Y}. Take another."]
    return []
