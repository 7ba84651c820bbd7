"""Reading control charts: their points, limits and signals."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from datetime import date, datetime, time
from itertools import groupby
from typing import Any

from django.db.models import F, FloatField, QuerySet
from django.db.models.fields.json import KeyTextTransform
from django.db.models.functions import Cast
from django.utils import timezone

from analysis.control import IndividualsLimits, individuals_limits
from analysis.ewma_cusum import Cusum, Ewma, cusum, ewma
from analysis.run_rules import OTHER_RULES, RULES, signals
from labrecords import writing
from labrecords.models import (
    Calculation,
    ControlChart,
    ControlLimits,
    InstrumentCalibration,
    RecordState,
    VersionState,
)

PAGES = {"run": "run-sheet", "standardization": "standardization-sheet", "instrument": "instrument-detail"}
EWMA, CUSUM = "weighted average beyond its limits", "cumulative sum beyond its interval"


@dataclass(frozen=True, slots=True)
class ChartPoint:
    """One value of a chart with the record it comes from; its key is that of the calculation, or of a calibration."""

    calculation_id: int
    value: float
    expanded_uncertainty: float | None
    at: datetime
    number: str
    noun: str
    label: str

    @property
    def page(self) -> str:
        """The name of the page of its record."""
        return PAGES[self.noun]


@dataclass(frozen=True, slots=True)
class ChartSignal:
    """A run rule that a point breaks, named by what it says."""

    point: ChartPoint
    rule: str


def charts() -> QuerySet[ControlChart]:
    """All charts with what they are of."""
    of = ControlChart.objects.select_related("control_sample__method", "titrant", "method", "instrument")
    return of.prefetch_related("limits")


def unit_of(chart: ControlChart) -> str:
    """The unit of a chart's points."""
    if chart.control_sample is not None:
        return chart.control_sample.unit
    return "mol/L" if chart.titrant_id else "mL" if chart.method_id else "%"


def effective_limits(chart: ControlChart) -> ControlLimits | None:
    """The limits in use."""
    return next((limits for limits in versions_of(chart) if limits.state == VersionState.EFFECTIVE), None)


def versions_of(chart: ControlChart) -> list[ControlLimits]:
    """Every version of a chart's limits that was in force, the first one first."""
    return sorted((limits for limits in chart.limits.all() if limits.effective_from), key=lambda limits: limits.number)


def points_of(chart: ControlChart) -> list[ChartPoint]:
    """The approved values of a chart in the order they were begun.

    Control runs; a titrant lot by lot; the blanks of a method's runs; the slope of an electrode at each calibration.
    """
    if chart.instrument_id:
        return _slopes(chart)
    rows = Calculation.objects.filter(value__isnull=False).defer("inputs", "outputs")
    if chart.control_sample_id:
        of_sample = rows.filter(
            run__sample__control_sample_id=chart.control_sample_id,
            run__state=RecordState.APPROVED,
            run__calculation_id=F("pk"),
        )
        ordered = of_sample.select_related("run__sample").order_by("run__started_at", "run_id")
        return [_run_point(row) for row in ordered]
    if chart.method_id:
        blank = Cast(KeyTextTransform("blank", "outputs"), FloatField())
        of_method = rows.annotate(blank=blank).filter(
            run__method_version__method_id=chart.method_id, run__state=RecordState.APPROVED,
            run__calculation_id=F("pk"), blank__isnull=False,
        )  # fmt: skip
        begun_runs = of_method.select_related("run__sample").order_by("run__started_at", "run_id")
        return [replace(_run_point(row), value=row.blank, expanded_uncertainty=None) for row in begun_runs]
    of_titrant = rows.filter(
        standardization__lot__titrant=chart.titrant,
        standardization__state=RecordState.APPROVED,
        standardization__calculation_id=F("pk"),
    )
    begun = of_titrant.select_related("standardization__lot")
    return [_standardization_point(row) for row in begun.order_by("standardization__started_at", "standardization_id")]


def limits_from_baseline(
    points: Sequence[ChartPoint], *, baseline: Sequence[int], excluded: Mapping[int, str]
) -> IndividualsLimits:
    """Individuals and moving range limits from the chosen points; ValueError when there are none.

    An excluded point takes no part, and neither do the moving ranges that touch it.
    """
    chosen = [point for point in points if point.calculation_id in set(baseline)]
    left_out = {
        place: excluded[point.calculation_id] for place, point in enumerate(chosen) if point.calculation_id in excluded
    }
    return individuals_limits([point.value for point in chosen], excluded=left_out)


def limits_at_points(points: Sequence[ChartPoint], versions: Sequence[ControlLimits]) -> list[ControlLimits | None]:
    """The limits that judge each point: those in force when it was begun, before the first ones the first."""
    return [_limits_at(point.at, versions) for point in points]


def signals_on(points: Sequence[ChartPoint], versions: Sequence[ControlLimits]) -> list[ChartSignal]:
    """Every point that breaks a rule in use at its time, in order; new limits begin to count anew."""
    found: list[ChartSignal] = []
    for part, limits in parts_of(points, versions):
        if limits is not None:
            broken = sorted(_broken(part, limits), key=lambda item: item[0])
            found += [ChartSignal(point=part[at], rule=rule) for at, rule in broken]
    return found


def parts_of(
    points: Sequence[ChartPoint], versions: Sequence[ControlLimits]
) -> Iterator[tuple[Sequence[ChartPoint], ControlLimits | None]]:
    """The points under one version of the limits after the other; each begins to count anew."""
    start = 0
    for limits, group in groupby(limits_at_points(points, versions)):
        stop = start + len(list(group))
        yield points[start:stop], limits
        start = stop


def _broken(part: Sequence[ChartPoint], limits: ControlLimits) -> list[tuple[int, str]]:
    values = [point.value for point in part]
    broken = signals(values, centre=limits.centre, sigma=limits.sigma, rules=limits.rules)
    broken |= remembered(values, limits)
    return [(place, rule) for rule, places in broken.items() for place in places]


def average_of(values: Sequence[float], limits: ControlLimits) -> Ewma:
    """The weighted average by the settings of a version of limits."""
    return ewma(values, target=limits.centre, sigma=limits.sigma, weight=limits.ewma_weight, width=limits.ewma_width)


def sums_of(values: Sequence[float], limits: ControlLimits) -> Cusum:
    """The cumulative sums by the settings of a version of limits."""
    return cusum(
        values, target=limits.centre, sigma=limits.sigma, reference=limits.cusum_reference,
        interval=limits.cusum_interval,
    )  # fmt: skip


def remembered(values: Sequence[float], limits: ControlLimits) -> dict[str, list[int]]:
    """The signals of the charts with memory that the limits use beside the run rules."""
    found: dict[str, list[int]] = {}
    if "ewma" in limits.also:
        found[EWMA] = list(average_of(values, limits).signals)
    if "cusum" in limits.also:
        found[CUSUM] = list(sums_of(values, limits).signals)
    return found


def _limits_at(moment: datetime, versions: Sequence[ControlLimits]) -> ControlLimits | None:
    held = [item for item in versions if item.effective_from and item.effective_from <= moment]
    return held[-1] if held else versions[0] if versions else None


def known_rules() -> list[str]:
    """The run rules by name, each saying what it says."""
    return [*RULES, *OTHER_RULES]


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
        "also": limits.also,
        "ewma": [limits.ewma_weight, limits.ewma_width],
        "cusum": [limits.cusum_reference, limits.cusum_interval],
        "reason": limits.reason,
    }


def _slopes(chart: ControlChart) -> list[ChartPoint]:
    """The slope of an electrode at each calibration that was not withdrawn."""
    found = InstrumentCalibration.objects.filter(
        instrument=chart.instrument, slope_percent__isnull=False, withdrawn_at__isnull=True
    ).select_related("instrument")
    return [
        ChartPoint(
            row.pk, float(row.slope_percent or 0), None, _noon(row.calibrated_on), row.instrument.identifier,
            "instrument", writing.day(row.calibrated_on),
        )
        for row in found.order_by("calibrated_on", "id")
    ]  # fmt: skip


def _noon(day: date) -> datetime:
    return timezone.make_aware(datetime.combine(day, time(12)))


def _run_point(row: Calculation) -> ChartPoint:
    assert row.run is not None
    return _point(row, at=row.run.started_at, number=row.run.number, noun="run", label=row.run.sample.number)


def _standardization_point(row: Calculation) -> ChartPoint:
    record = row.standardization
    assert record is not None
    at, lot = record.started_at, record.lot.number
    return _point(row, at=at, number=record.number, noun="standardization", label=lot)


def _point(row: Calculation, *, at: datetime, number: str, noun: str, label: str) -> ChartPoint:
    assert row.value is not None
    return ChartPoint(row.pk, row.value, row.expanded_uncertainty, at, number, noun, label)
