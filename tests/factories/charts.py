"""A control chart with approved control runs on it, so many as there are titres."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from django.utils import timezone

from labrecords.models import ControlChart, ControlLimits, Run
from labrecords.queries.control_chart import points_of
from labrecords.services.batch import record_sample
from labrecords.services.control_chart import record_chart, set_limits
from labrecords.services.run import approve_run, start_run, submit_run
from tests.factories.bench import Bench, approved_standardization, compute, fill, some_sample, some_version
from tests.factories.people import signed_by

TITRES = ["12.30", "12.35", "12.25", "12.30", "12.40", "12.30", "12.25", "12.35", "12.30", "12.35"]
RULES = ["one point beyond three sigma"]


def some_chart(bench: Bench, titres: Sequence[str] = TITRES) -> ControlChart:
    """The chart of the control sample, with an approved run for each titre."""
    approved_standardization(bench)
    version = some_version(bench, blanks_needed=0, replicates_needed=2)
    control = some_sample(bench, version).control_sample
    assert control is not None
    chart = record_chart(by=bench.supervisor, code="CS-A", title="acid control", control_sample=control)
    for titre in titres:
        add_point(chart, bench, titre)
    return chart


def add_point(chart: ControlChart, bench: Bench, titre: str) -> Run:
    """One more approved run of the control sample, both titrations with the same titre."""
    control = chart.control_sample
    assert control is not None
    sample = record_sample(
        by=bench.analyst, number=f"CS-A-{control.samples.count() + 1}", drawn_at=timezone.now(),
        drawn_by="the bench", control_sample=control,
    )  # fmt: skip
    version = control.method.versions.get(state="effective")
    instruments = {"burette": bench.burette, "pipette": bench.pipette}
    run = start_run(sample, by=bench.analyst, method_version=version, lot=bench.lot, instruments=instruments)
    fill(run, [("10.00", titre)] * 2, by=bench.analyst)
    compute(run)
    run = submit_run(run, by=bench.analyst, credentials=signed_by(bench.analyst))
    return approve_run(run, by=bench.supervisor, credentials=signed_by(bench.supervisor))


def limits_of(chart: ControlChart, bench: Bench, **given: Any) -> ControlLimits:
    """Limits from all points, signed by the supervisor."""
    chosen: dict[str, Any] = {
        "baseline": [point.calculation_id for point in points_of(chart)], "excluded": {}, "rules": RULES,
        "reason": "the first ten values", "credentials": signed_by(bench.supervisor), "by": bench.supervisor,
    }  # fmt: skip
    return set_limits(chart, **chosen | given)
