"""Reading control charts: their points, limits and signals."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from django.db.models import QuerySet

from analysis.control import IndividualsLimits, individuals_limits
from analysis.run_rules import RULES, signals
from labrecords.models import Calculation, ControlChart, ControlLimits, RecordState, VersionState


@dataclass(frozen=True, slots=True)
class ChartPoint:
    """One value of a chart with the record it comes from."""

    calculation_id: int
    value: float
    expanded_uncertainty: float | None
    at: datetime
    number: str
    noun: str
    label: str


@dataclass(frozen=True, slots=True)
class ChartSignal:
    """A run rule that a point breaks, named by what it says."""

    point: ChartPoint
    rule: str


def charts() -> QuerySet[ControlChart]:
    """All charts with what they are of."""
    return ControlChart.objects.select_related("control_sample__method", "titrant").prefetch_related("limits")


def effective_limits(chart: ControlChart) -> ControlLimits | None:
    """The limits in use."""
    return chart.limits.filter(state=VersionState.EFFECTIVE).first()


def points_of(chart: ControlChart) -> list[ChartPoint]:
    """The approved values of a chart in the order they were begun: control runs, or standardizations lot by lot."""
    if chart.control_sample_id:
        rows = Calculation.objects.filter(
            run__sample__control_sample_id=chart.control_sample_id, run__state=RecordState.APPROVED, value__isnull=False
        ).order_by("run__started_at", "run_id")
        used = [row for row in rows.select_related("run__sample") if row.run and row.run.calculation_id == row.pk]
        return [_run_point(row) for row in used]
    rows = Calculation.objects.filter(
        standardization__lot__titrant_id=chart.titrant_id,
        standardization__state=RecordState.APPROVED,
        value__isnull=False,
    ).order_by("standardization__started_at", "standardization_id")
    found = rows.select_related("standardization__lot")
    used = [row for row in found if row.standardization and row.standardization.calculation_id == row.pk]
    return [_standardization_point(row) for row in used]


def limits_from_baseline(
    points: Sequence[ChartPoint], *, baseline: Sequence[int], excluded: Mapping[int, str]
) -> IndividualsLimits:
    """Individuals and moving range limits from the chosen points, listed exclusions left out."""
    values = [point.value for point in points if point.calculation_id in baseline and point.calculation_id not in excluded]
    return individuals_limits(values)


def signals_on(points: Sequence[ChartPoint], limits: ControlLimits) -> list[ChartSignal]:
    """Every point that breaks one of the rules in use, with the rule in words."""
    broken = signals([point.value for point in points], centre=limits.centre, sigma=limits.sigma, rules=limits.rules)
    return [ChartSignal(point=points[position], rule=rule) for rule, positions in broken.items() for position in positions]


def known_rules() -> list[str]:
    """The run rules by name, each saying what it says."""
    return list(RULES)


def limits_as_signed(limits: ControlLimits) -> dict[str, Any]:
    """The content of a version of limits that a signature covers."""
    return {
        "noun": "control_limits",
        "chart": limits.chart.code,
        "number": limits.number,
        "centre": limits.centre,
        "sigma": limits.sigma,
        "mean_moving_range": limits.mean_moving_range,
        "baseline": limits.baseline,
        "excluded": limits.excluded,
        "rules": limits.rules,
        "reason": limits.reason,
    }


def _run_point(row: Calculation) -> ChartPoint:
    assert row.run is not None and row.value is not None
    return ChartPoint(
        calculation_id=row.pk, value=row.value, expanded_uncertainty=row.expanded_uncertainty, at=row.run.started_at,
        number=row.run.number, noun="run", label=row.run.sample.number,
    )  # fmt: skip


def _standardization_point(row: Calculation) -> ChartPoint:
    record = row.standardization
    assert record is not None and row.value is not None
    return ChartPoint(
        calculation_id=row.pk, value=row.value, expanded_uncertainty=row.expanded_uncertainty, at=record.started_at,
        number=record.number, noun="standardization", label=record.lot.number,
    )  # fmt: skip
