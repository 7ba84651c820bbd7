"""Control charts and their limits: set from a baseline, signed, frozen, then used."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import (
    ControlChart,
    ControlLimits,
    ControlSample,
    Instrument,
    Meaning,
    Method,
    Titrant,
    User,
    VersionState,
)
from labrecords.queries.control_chart import limits_as_signed, limits_from_baseline, points_of
from labrecords.rules.control_chart import objections_to_recording_chart, objections_to_setting_limits
from labrecords.services import audit
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def record_chart(
    *,
    by: User,
    code: str,
    title: str,
    control_sample: ControlSample | None = None,
    titrant: Titrant | None = None,
    method: Method | None = None,
    instrument: Instrument | None = None,
) -> ControlChart:
    """Record a chart of a control sample's results, a titrant's lots, a method's blank or an electrode's slope."""
    of: dict[str, Any] = {
        "title": title, "control_sample": control_sample, "titrant": titrant, "method": method,
        "instrument": instrument,
    }  # fmt: skip
    refuse_if(objections_to_recording_chart(code, by=by, **of))
    with audit.event("control_chart.record", by=by, subject=code):
        return ControlChart.objects.create(code=code, **of)


@transaction.atomic(durable=True)
def set_limits(
    chart: ControlChart,
    *,
    by: User,
    credentials: Credentials,
    baseline: Sequence[int],
    excluded: Mapping[int, str],
    rules: Sequence[str],
    reason: str,
    also: Sequence[str] = (),
    memory: Mapping[str, float] | None = None,
) -> ControlLimits:
    """Compute limits from the chosen baseline and sign them into force as the next version.

    ``baseline`` and ``excluded`` name points by key; each exclusion carries its sentence. ``also`` names the charts
    with memory whose signals count, ``memory`` their settings (ewma_weight, ewma_width, cusum_reference,
    cusum_interval).
    """
    chart = ControlChart.objects.select_for_update(of=("self",)).get(pk=chart.pk)
    points = points_of(chart)
    chosen: dict[str, Any] = {"baseline": baseline, "excluded": excluded, "rules": rules, "also": also}
    refuse_if(objections_to_setting_limits(chart, by=by, points=points, reason=reason, memory=memory, **chosen))
    last = chart.limits.order_by("-number").first()
    computed = limits_from_baseline(points, baseline=baseline, excluded=excluded)
    with audit.event("control_chart.set_limits", by=by, subject=chart.code, reason=reason) as event:
        for earlier in chart.limits.filter(state=VersionState.EFFECTIVE):
            earlier.state = VersionState.SUPERSEDED
            earlier.save(update_fields=["state"])
        limits = ControlLimits.objects.create(
            chart=chart, number=last.number + 1 if last else 1, state=VersionState.EFFECTIVE,
            centre=computed.centre, sigma=computed.sigma, mean_moving_range=computed.mean_moving_range,
            baseline=list(dict.fromkeys(baseline)), rules=list(dict.fromkeys(rules)), reason=reason,
            excluded=[{"calculation": key, "why": why} for key, why in excluded.items()],
            effective_from=event.at, also=list(dict.fromkeys(also)), **(memory or {}),
        )  # fmt: skip
        sign(
            Meaning.LIMITS_SET, by=by, credentials=credentials, noun="control_limits", record_id=limits.pk,
            number=str(limits), content=limits_as_signed(limits), reason=reason,
            zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
    return limits
