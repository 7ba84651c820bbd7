"""Capability: how well approved results fit between their limits, by product and by titrant."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from django.db.models import F, QuerySet

from analysis.capability import Capability, capability
from labrecords.models import (
    Calculation,
    ControlChart,
    RecordState,
    SpecificationLimit,
    Titrant,
    VersionState,
)
from labrecords.queries.control_chart import ChartPoint

FEWEST = 20  # common practice: below it the interval is wider than what it says


@dataclass(frozen=True, slots=True)
class Fit:
    """The limits of one series of results, how many there are, and the indices when there are enough."""

    title: str
    code: str
    lower: Decimal | None
    upper: Decimal | None
    unit: str
    places: int
    count: int
    indices: Capability | None


def fit_of_titrant(chart: ControlChart, points: Sequence[ChartPoint]) -> Fit | None:
    """The concentrations of a titrant, lot by lot, in its accepted window; None for other charts."""
    titrant: Titrant | None = chart.titrant
    if titrant is None:
        return None
    low, high = titrant.window_low, titrant.window_high
    values = [point.value for point in points]
    return Fit(chart.title, chart.code, low, high, "mol/L", 4, len(values), _indices(values, low, high))


def fits_of_products() -> list[Fit]:
    """Every test of every specification in force, with the approved results of the product's batches.

    Results of earlier specifications count too: the product is the same. Retests do not, for they are of
    batches that have a result already.
    """
    limits = SpecificationLimit.objects.filter(specification__state=VersionState.EFFECTIVE)
    series = _results_by_test()
    return [
        _fit(limit, series[limit.specification.product_id, limit.method_id])
        for limit in limits.select_related("specification__product", "method").order_by(
            "specification__product__code", "method__code"
        )
    ]


def results_of_batches() -> QuerySet[Calculation]:
    """The approved results of batches; retests are left out, for their batches have a result already."""
    return Calculation.objects.filter(
        run__calculation_id=F("pk"), run__state=RecordState.APPROVED, run__sample__batch__isnull=False,
        run__retest_for__isnull=True, value__isnull=False,
    )  # fmt: skip


def _results_by_test() -> dict[tuple[int, int], list[tuple[float, str]]]:
    rows = results_of_batches().order_by("run__started_at", "run_id")
    series: dict[tuple[int, int], list[tuple[float, str]]] = defaultdict(list)
    of = ("run__sample__batch__product_id", "run__method_version__method_id", "value", "unit")
    for product, method, value, unit in rows.values_list(*of):
        series[product, method].append((value, unit))
    return series


def _fit(limit: SpecificationLimit, results: Sequence[tuple[float, str]]) -> Fit:
    values = [value for value, unit in results if unit == limit.unit]
    product, method = limit.specification.product, limit.method
    return Fit(
        f"{product.name}, {method.title}", product.code, limit.lower, limit.upper, limit.unit,
        limit.places, len(values), _indices(values, limit.lower, limit.upper),
    )  # fmt: skip


def _indices(values: Sequence[float], lower: Decimal | None, upper: Decimal | None) -> Capability | None:
    if len(values) < FEWEST:
        return None
    try:
        return capability(
            values,
            lower=float(lower) if lower is not None else None,
            upper=float(upper) if upper is not None else None,
        )
    except ValueError:  # nothing varies: an index would be without end
        return None
