"""When a chart may be recorded and its limits set."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from labrecords.models import ControlChart, ControlSample, Instrument, InstrumentKind, Method, Titrant, User
from labrecords.queries.control_chart import ChartPoint, known_rules, limits_from_baseline
from labrecords.rules.identifier import objections_to_identifier

FEWEST_POINTS = 10
MEMORY = ("ewma", "cusum")
RANGES = {
    "ewma_weight": ("Weight of the average, lambda,", 0.01, 1.0),
    "ewma_width": ("Width of its limits, L,", 1.0, 5.0),
    "cusum_reference": ("Reference value k", 0.0, 3.0),
    "cusum_interval": ("Decision interval h", 0.5, 20.0),
}


def objections_to_recording_chart(
    code: str,
    *,
    by: User,
    title: str,
    control_sample: ControlSample | None = None,
    titrant: Titrant | None = None,
    method: Method | None = None,
    instrument: Instrument | None = None,
) -> list[str]:
    """A supervisor records a chart of exactly one thing."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor records charts."]
    known = ControlChart.objects.values_list("code", flat=True)
    found += objections_to_identifier(code, field="Code", known=known)
    if not title.strip():
        found.append("Title is empty: say what the chart watches.")
    if sum(of is not None for of in (control_sample, titrant, method, instrument)) != 1:
        found.append("A chart is of a control sample, a titrant, a method's blank or an electrode's slope: choose one.")
    if instrument is not None and instrument.kind != InstrumentKind.ELECTRODE:
        found.append(f"{instrument} is a {instrument.get_kind_display()}: only an electrode has a slope.")
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
    memory: Mapping[str, float] | None = None,
    also: Sequence[str] = (),
) -> list[str]:
    """A baseline of at least ten points of this chart that vary; each exclusion with its sentence."""
    found = [] if by.is_supervisor else [f"{by.full_name} is not a supervisor. A supervisor sets limits."]
    found += _objections_to_baseline(points, baseline=baseline, excluded=excluded)
    unknown = [name for name in rules if name not in known_rules()]
    found += [f"Rule {name!r} is not known; expected one of: {'; '.join(known_rules())}." for name in unknown]
    if not rules:
        found.append("Choose at least one run rule.")
    found += [f"{name!r} is no chart with memory; expected ewma or cusum." for name in also if name not in MEMORY]
    found += _objections_to_memory(memory or {})
    if not reason.strip():
        found.append("Reason is empty: say why these limits are set.")
    return found


def _objections_to_memory(memory: Mapping[str, float]) -> list[str]:
    found = []
    for field, (name, low, high) in RANGES.items():
        value = memory.get(field)
        if value is not None and not low <= value <= high:
            found.append(f"{name} is {value:g}; {low:g} to {high:g} is expected.")
    return found


def _objections_to_baseline(
    points: Sequence[ChartPoint], *, baseline: Sequence[int], excluded: Mapping[int, str]
) -> list[str]:
    by_key = {point.calculation_id: point for point in points}
    if not set(baseline) <= by_key.keys():
        return ["The baseline names points that are not on this chart. Choose from the points shown."]
    if not set(excluded) <= set(baseline):
        return ["A point is left out that is not in the baseline. Tick it, or clear its sentence."]
    found = [
        f"{by_key[key].number} is left out without a sentence: say which cause was found."
        for key, why in excluded.items()
        if len(why.strip()) < 10
    ]
    kept = len(set(baseline) - set(excluded))
    if kept < FEWEST_POINTS:
        return [
            *found,
            f"The baseline has {kept} points; at least {FEWEST_POINTS} are needed, twenty or more are usual.",
        ]
    try:
        limits_from_baseline(points, baseline=baseline, excluded=dict.fromkeys(excluded, "why"))
    except ValueError as problem:
        found.append(str(problem))
    return found
