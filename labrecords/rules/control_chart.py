"""When a chart may be recorded and its limits set."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from labrecords.models import ControlChart, ControlSample, Titrant, User
from labrecords.queries.control_chart import ChartPoint, known_rules

FEWEST_POINTS = 10


def objections_to_recording_chart(
    code: str, *, by: User, title: str, control_sample: ControlSample | None, titrant: Titrant | None
) -> list[str]:
    """A supervisor records a chart of exactly one thing."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor records charts."]
    if not code.strip() or ControlChart.objects.filter(code=code).exists():
        found.append(f"Code is {code!r}: write one that is not in use.")
    if not title.strip():
        found.append("Title is empty: say what the chart watches.")
    if (control_sample is None) == (titrant is None):
        found.append("A chart is of a control sample or of a titrant: choose one of the two.")
    return found


def objections_to_setting_limits(
    chart: ControlChart,
    *,
    by: User,
    points: Sequence[ChartPoint],
    baseline: Sequence[int],
    excluded: Mapping[int, str],
    rules: Sequence[str],
    reason: str,
) -> list[str]:
    """A baseline of at least ten points of this chart; each exclusion with its sentence."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor sets limits."]
    known = {point.calculation_id for point in points}
    kept = [key for key in baseline if key not in excluded]
    if not set(baseline) <= known:
        found.append("The baseline names points that are not on this chart. Choose from the points shown.")
    if len(kept) < FEWEST_POINTS:
        found.append(f"The baseline has {len(kept)} points; at least {FEWEST_POINTS} are needed, twenty or more are usual.")
    found += [
        f"Point {key} is excluded without a sentence: say which cause was found."
        for key, why in excluded.items()
        if len(why.strip()) < 10
    ]
    found += [f"Rule {name!r} is not known; expected one of: {'; '.join(known_rules())}." for name in rules if name not in known_rules()]
    if not rules:
        found.append("Choose at least one run rule.")
    if not reason.strip():
        found.append("Reason is empty: say why these limits are set.")
    return found
