"""Control samples: stable materials with an assigned value."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import ControlSample, Method, User
from labrecords.rules.control_sample import objections_to_recording_control_sample
from labrecords.rules.review import objections_to_reason
from labrecords.services import audit
from labrecords.services.number import reserve_name


@transaction.atomic(durable=True)
def record_control_sample(
    *,
    by: User,
    code: str,
    name: str,
    method: Method,
    assigned_value: Decimal,
    assigned_expanded: Decimal,
    unit: str,
    expires_on: date,
) -> ControlSample:
    """Record a material with its assigned value and U (k = 2)."""
    control_sample = ControlSample(
        code=code, name=name, method=method, assigned_value=assigned_value, assigned_expanded=assigned_expanded,
        unit=unit, expires_on=expires_on,
    )  # fmt: skip
    reserve_name("control sample", code)
    with audit.event("control_sample.record", by=by, subject=code) as event:
        today = timezone.localtime(event.at).date()
        refuse_if(objections_to_recording_control_sample(control_sample, by=by, today=today))
        control_sample.save()
    return control_sample


@transaction.atomic(durable=True)
def withdraw_control_sample(control_sample: ControlSample, *, by: User, reason: str) -> ControlSample:
    """Take a material out of use, with the reason."""
    control_sample = ControlSample.objects.select_for_update(of=("self",)).get(pk=control_sample.pk)
    refuse_if(
        [
            *([] if by.is_supervisor else ["A supervisor withdraws control samples."]),
            *([f"{control_sample.code} is withdrawn already."] if control_sample.withdrawn_reason else []),
            *objections_to_reason(reason, what="the control sample is withdrawn"),
        ]
    )
    control_sample.withdrawn_reason = reason
    with audit.event("control_sample.withdraw", by=by, subject=control_sample.code, reason=reason):
        control_sample.save(update_fields=["withdrawn_reason"])
    return control_sample
