"""Charts brought up to date point by point: every number is identical, bit for bit, to that of the whole
series.

Sums are kept exactly (as fractions) and rounded once, as the batch functions do; the averages and sums with
memory go on from their last state by the same operations.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace
from fractions import Fraction

import numpy as np

from analysis.control import (
    IndividualsLimits,
    SubgroupLimits,
    limits_from_means,
    spread_estimate,
    subgroup_chart,
)
from analysis.ewma_cusum import checked_series, ewma_from, one_sided
from analysis.run_rules import REACH, signals_at_last


@dataclass(frozen=True, slots=True)
class RunningBaseline:
    """The baseline of a chart of individual values while it grows."""

    count: int = 0
    total: Fraction = Fraction(0)
    range_total: Fraction = Fraction(0)
    last: float | None = None
    values: tuple[float, ...] = ()

    def with_value(self, value: float) -> RunningBaseline:
        """The baseline with one more value; ValueError when it is not finite."""
        checked_series([value], sigma=1.0, target=0.0)
        moved = Fraction(0) if self.last is None else Fraction(abs(value - self.last))
        return RunningBaseline(
            self.count + 1,
            self.total + Fraction(value),
            self.range_total + moved,
            value,
            (*self.values, value),
        )

    def limits(self) -> IndividualsLimits:
        """The limits so far; ValueError when fewer than two values are known."""
        if self.count < 2:
            raise ValueError(f"{self.count} values are given; at least 2 are needed for limits.")
        centre, mean_range = float(self.total) / self.count, float(self.range_total) / (self.count - 1)
        return limits_from_means(self.values, centre=centre, mean_range=mean_range, excluded={})


@dataclass(frozen=True, slots=True)
class RunningSubgroups:
    """The baseline of an X-bar chart while it grows; ``spread`` is range or sd."""

    spread: str
    subgroups: tuple[tuple[float, ...], ...] = ()
    count: int = 0
    total: Fraction = Fraction(0)
    weight: Fraction = Fraction(0)
    weighted: Fraction = Fraction(0)

    def with_subgroup(self, subgroup: Sequence[float]) -> RunningSubgroups:
        """The baseline with one more subgroup; ValueError when it is too small or not finite."""
        weight, estimate = spread_estimate(subgroup, spread=self.spread, place=len(self.subgroups) + 1)
        return replace(
            self, subgroups=(*self.subgroups, tuple(subgroup)), count=self.count + len(subgroup),
            total=self.total + sum(map(Fraction, subgroup)), weight=self.weight + Fraction(weight),
            weighted=self.weighted + Fraction(weight * estimate),
        )  # fmt: skip

    def limits(self) -> SubgroupLimits:
        """The limits so far; ValueError when there is no subgroup or none has any spread."""
        if not self.subgroups:
            raise ValueError("No subgroup is given; at least 1 is needed for limits.")
        centre, sigma = float(self.total) / self.count, float(self.weighted) / float(self.weight)
        return subgroup_chart(self.subgroups, spread=self.spread, centre=centre, sigma=sigma, excluded={})


@dataclass(frozen=True, slots=True)
class RunningChart:
    """A chart in use: run rules, EWMA and CUSUM of one series, after the points so far.

    Attributes
    ----------
    centre, sigma : float
        The limits in use.
    weight, reference, head_start : float
        lambda of the EWMA, k and the head start of the CUSUM.
    """

    centre: float
    sigma: float
    rules: tuple[str, ...]
    weight: float = 0.2
    reference: float = 0.5
    head_start: float = 0.0
    tail: tuple[float, ...] = ()
    average: float | None = None
    up: tuple[float, float] | None = None
    down: tuple[float, float] | None = None
    cusum_upper: float = 0.0
    cusum_lower: float = 0.0
    broken: tuple[str, ...] = field(default=())

    def with_value(self, value: float) -> RunningChart:
        """The chart with one more point; ``broken`` names the rules that this point breaks."""
        x = checked_series([value], sigma=self.sigma, target=self.centre)
        z = (x - self.centre) / self.sigma
        before = self.centre if self.average is None else self.average
        average = ewma_from(x, previous=before, weight=self.weight)[-1]
        start = (self.head_start, 0.0)
        upper, up = one_sided(z - self.reference, total=(self.up or start)[0], least=(self.up or start)[1])
        lower, down = one_sided(-z - self.reference, total=(self.down or start)[0], least=(self.down or start)[1])
        tail = (*self.tail, value)[-REACH:]
        broken = signals_at_last(tail, centre=self.centre, sigma=self.sigma, rules=self.rules)
        return replace(
            self, tail=tail, average=float(average), up=up, down=down, cusum_upper=float(upper[-1]),
            cusum_lower=float(lower[-1]), broken=broken,
        )  # fmt: skip

    def with_values(self, values: Iterable[float]) -> RunningChart:
        """The chart with more points, in order."""
        chart = self
        for value in values:
            chart = chart.with_value(float(np.float64(value)))
        return chart
