"""One series of points as charts of several kinds: single values, average, sums, means and spread."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise

from django.db.models import Func, JSONField, Value

from analysis.control import SubgroupLimits, subgroup_chart, subgroup_limits
from analysis.control_constants import chart_constants
from analysis.rule_run_length import ZONE_RULES, rules_run_length
from analysis.run_length import cusum_run_length, ewma_run_length
from labrecords.models import Calculation, ControlChart, ControlLimits
from labrecords.queries.control_chart import ChartPoint, average_of, limits_at_points, parts_of, sums_of

SHIFTS = (0.0, 0.5, 1.0, 1.5, 2.0, 3.0)  # sigma
KINDS = {
    "individuals": "Single values",
    "ewma": "Weighted average",
    "cusum": "Cumulative sums",
    "means": "Means and spread",
}


@dataclass(frozen=True, slots=True)
class Drawn:
    """What one chart draws at each point; limits are None where no version judges it."""

    values: tuple[float, ...]
    centre: tuple[float | None, ...]
    lower: tuple[float | None, ...]
    upper: tuple[float | None, ...]

    @property
    def out(self) -> tuple[bool, ...]:
        """Which points lie beyond their limits."""
        return tuple(
            (low is not None and value < low) or (high is not None and value > high)
            for value, low, high in zip(self.values, self.lower, self.upper, strict=True)
        )


@dataclass(frozen=True, slots=True)
class Sums:
    """Both sums of a cumulative chart [sigma] with the interval h that held at each point."""

    upper: tuple[float, ...]
    lower: tuple[float, ...]
    interval: tuple[float | None, ...]


@dataclass(frozen=True, slots=True)
class RunLengths:
    """How long a chart runs on average until it signals, at each shift of the mean in sigma."""

    shifts: tuple[float, ...]
    lengths: tuple[float, ...]
    left_out: tuple[str, ...]


def moving_ranges(points: Sequence[ChartPoint], versions: Sequence[ControlLimits]) -> Drawn:
    """From one point to the next, from the second point on, with the mean moving range and its upper limit D4."""
    widest = chart_constants(2).D4
    ranges = [abs(after.value - before.value) for before, after in pairwise(points)]
    held = limits_at_points(points, versions)[1:]
    centre = [limits.mean_moving_range if limits else None for limits in held]
    upper = [None if middle is None else widest * middle for middle in centre]
    return Drawn(tuple(ranges), tuple(centre), (None,) * len(ranges), tuple(upper))


def averages(points: Sequence[ChartPoint], versions: Sequence[ControlLimits]) -> Drawn:
    """The exponentially weighted moving average with its limits; nothing where no version holds."""
    rows: list[tuple[float, float | None, float | None, float | None]] = []
    for part, limits in parts_of(points, versions):
        if limits is None:
            continue
        found = average_of([point.value for point in part], limits)
        rows += [
            (float(z), limits.centre, float(low), float(high))
            for z, low, high in zip(found.z, found.lower, found.upper, strict=True)
        ]
    return _drawn(rows)


def sums(points: Sequence[ChartPoint], versions: Sequence[ControlLimits]) -> Sums:
    """Both cumulative sums [sigma]; nothing where no version holds."""
    upper: list[float] = []
    lower: list[float] = []
    interval: list[float | None] = []
    for part, limits in parts_of(points, versions):
        if limits is None:
            continue
        found = sums_of([point.value for point in part], limits)
        upper += [float(value) for value in found.upper]
        lower += [float(value) for value in found.lower]
        interval += [limits.cusum_interval] * len(part)
    return Sums(tuple(upper), tuple(lower), tuple(interval))


def means_and_spread(
    chart: ControlChart, points: Sequence[ChartPoint], limits: ControlLimits | None, *, spread: str
) -> tuple[list[ChartPoint], Drawn, Drawn] | None:
    """The mean and the spread of the titrations inside each run, as X-bar with R or S; sizes may differ.

    Limits come from the spread inside the runs of the baseline of the limits in force, else of all runs. None for
    charts whose points are no runs, or where no run has two titrations that count.
    """
    if chart.control_sample_id is None:
        return None
    values = _titrations_of([point.calculation_id for point in points])
    used = [point for point in points if len(values.get(point.calculation_id, ())) > 1]
    groups = [values[point.calculation_id] for point in used]
    baseline = set(limits.baseline) if limits else {point.calculation_id for point in used}
    chosen = [values[point.calculation_id] for point in used if point.calculation_id in baseline]
    try:
        base = subgroup_limits(chosen, spread=spread)
        found = subgroup_chart(groups, spread=spread, centre=base.centre, sigma=base.sigma, excluded={})
    except ValueError:  # no run with two titrations, or none that differ
        return None
    return used, _means(found), _spreads(found)


def run_lengths(limits: ControlLimits, kind: str) -> RunLengths:
    """The average run length of a kind of chart with the settings in force, solved and not simulated."""
    if kind == "ewma":
        return _solved("ewma", (limits.ewma_weight, limits.ewma_width))
    if kind == "cusum":
        return _solved("cusum", (limits.cusum_reference, limits.cusum_interval))
    return lengths_of_rules(tuple(limits.rules))


def lengths_of_rules(rules: tuple[str, ...]) -> RunLengths:
    """The average run length of run rules together; those that look at rises and falls cannot be solved so."""
    known = tuple(rule for rule in rules if rule in ZONE_RULES)
    left_out = tuple(rule for rule in rules if rule not in ZONE_RULES)
    if not known:
        return RunLengths((), (), left_out)
    found = _solved("rules", known)
    return RunLengths(found.shifts, found.lengths, left_out)


@lru_cache(maxsize=256)
def _solved(kind: str, settings: tuple[float, ...] | tuple[str, ...]) -> RunLengths:
    def length(shift: float) -> float:
        if kind == "rules":
            return rules_run_length([str(rule) for rule in settings], shift=shift)
        first, second = (float(value) for value in settings)
        if kind == "ewma":
            return ewma_run_length(weight=first, width=second, shift=shift)
        return cusum_run_length(reference=first, interval=second, shift=shift)

    return RunLengths(SHIFTS, tuple(length(shift) for shift in SHIFTS), ())


def _titrations_of(keys: Sequence[int]) -> dict[int, list[float]]:
    """The values of the titrations that count, by calculation; cut out of the outputs by the database."""
    path = Value("$.titrations[*] ? (@.in_set == true).value")
    cut = Func("outputs", path, function="jsonb_path_query_array", output_field=JSONField(), arg_joiner=", ",
               template="%(function)s(%(expressions)s::jsonpath)")  # fmt: skip
    rows = Calculation.objects.filter(pk__in=keys).annotate(counted=cut).values_list("pk", "counted")
    return {key: [float(value) for value in values if value is not None] for key, values in rows}


def _means(found: SubgroupLimits) -> Drawn:
    limits: Sequence[tuple[float, float]] = found.mean_limits
    return _drawn([(mean, found.centre, *pair) for mean, pair in zip(found.means, limits, strict=True)])


def _spreads(found: SubgroupLimits) -> Drawn:
    rows = zip(found.spreads, found.spread_centres, found.spread_limits, strict=True)
    return _drawn([(value, centre, low or None, high) for value, centre, (low, high) in rows])


def _drawn(rows: Sequence[tuple[float, float | None, float | None, float | None]]) -> Drawn:
    pick: Callable[[int], tuple[float | None, ...]] = lambda place: tuple(row[place] for row in rows)  # noqa: E731
    return Drawn(tuple(row[0] for row in rows), pick(1), pick(2), pick(3))
