"""What a product's decision rules do: how often a wrong batch would pass, and a right one would not."""

from __future__ import annotations

import math
from dataclasses import dataclass
from statistics import fmean, median, stdev

from analysis.risk import Risks, process_risks
from labrecords.models import Product, Specification, SpecificationLimit
from labrecords.queries.capability import FEWEST, results_of_batches


@dataclass(frozen=True, slots=True)
class RuleRisk:
    """One limit with the spread of the product's results about it; ``risks`` is None where there are too few."""

    limit: SpecificationLimit
    count: int
    mean: float | None
    sd: float | None
    u: float | None
    guard: float
    risks: Risks | None


def risks_of(specification: Specification) -> list[RuleRisk]:
    """Consumer's and producer's risk of every limit, from the approved results of the product so far.

    The spread of the results less that of measuring is taken for the product's own (JCGM 106:2012, 7.2); retests are
    left out, for their batches have a result already.
    """
    limits = specification.limits.select_related("method").order_by("method__code")
    return [_risk(limit, _results(specification.product, limit)) for limit in limits]


def _results(product: Product, limit: SpecificationLimit) -> list[tuple[float, float, float]]:
    rows = results_of_batches().filter(
        run__sample__batch__product=product, run__method_version__method=limit.method, unit=limit.unit,
        standard_uncertainty__gt=0,
    )  # fmt: skip
    numbers = rows.values_list("value", "standard_uncertainty", "expanded_uncertainty")
    return [(value, u, expanded or 0.0) for value, u, expanded in numbers if value is not None and u is not None]


def _risk(limit: SpecificationLimit, results: list[tuple[float, float, float]]) -> RuleRisk:
    if len(results) < FEWEST:
        return RuleRisk(limit, len(results), None, None, None, 0.0, None)
    values = [value for value, _, _ in results]
    u, expanded = median(u for _, u, _ in results), median(expanded for _, _, expanded in results)
    mean, spread = fmean(values), stdev(values)
    guard = float(limit.guard_factor) * expanded if limit.rule == "guard" else 0.0
    own = math.sqrt(max(spread**2 - u**2, (u / 10) ** 2))
    low, high = (None if bound is None else float(bound) for bound in (limit.lower, limit.upper))
    try:
        found = process_risks(mean=mean, sd=own, standard_uncertainty=u, lower=low, upper=high, guard=guard)
    except ValueError:  # guard bands that meet: nothing is ever accepted, and the page says so by its rule
        found = None
    return RuleRisk(limit, len(results), mean, own, u, guard, found)
