"""Groups of results: repeatability within them, and what differs between them (days, analysts, titrant lots).

References
----------
ISO 5725-2:1994, clause 7; NIST/SEMATECH e-Handbook of Statistical Methods 7.4.3; certified values: NIST StRD,
analysis of variance.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from scipy import special


@dataclass(frozen=True, slots=True)
class Groups:
    """Analysis of variance, one way.

    Attributes
    ----------
    mean_square_between, mean_square_within : float
        [unit of the values, squared]
    freedom_between, freedom_within : int
    f, p : float
        Ratio of the mean squares, and the probability of a larger one when nothing differs between the
        groups.
    repeatability_sd, between_sd, intermediate_sd : float
        Standard deviations within groups, between them, and of both together [unit of the values].
    """

    mean_square_between: float
    mean_square_within: float
    freedom_between: int
    freedom_within: int
    f: float
    p: float
    repeatability_sd: float
    between_sd: float
    intermediate_sd: float


def one_way(groups: Sequence[Sequence[float]]) -> Groups:
    """Analysis of variance of groups that may differ in size; sums are exact, so that no digits cancel.

    Raises
    ------
    ValueError
        When fewer than two groups are given, one is empty, none repeats, or nothing varies within them.
    """
    _check(groups)
    exact = [[Fraction(value) for value in group] for group in groups]
    means = [sum(group, Fraction(0)) / len(group) for group in exact]
    count = sum(len(group) for group in exact)
    mean = sum((sum(group, Fraction(0)) for group in exact), Fraction(0)) / count
    between = sum((len(g) * (m - mean) ** 2 for g, m in zip(exact, means, strict=True)), Fraction(0))
    within = sum(((v - m) ** 2 for g, m in zip(exact, means, strict=True) for v in g), Fraction(0))
    if within == 0:
        raise ValueError("No value differs from its group's mean; the spread within groups cannot be known.")
    k, left = len(groups) - 1, count - len(groups)
    ms_between, ms_within = float(between / k), float(within / left)
    ratio = float((between / k) / (within / left))
    size = float((count - Fraction(sum(len(g) ** 2 for g in groups), count)) / k)
    component = max(0.0, (ms_between - ms_within) / size)
    return Groups(
        ms_between, ms_within, k, left, ratio, float(special.fdtrc(k, left, ratio)), math.sqrt(ms_within),
        math.sqrt(component), math.sqrt(component + ms_within),
    )  # fmt: skip


def _check(groups: Sequence[Sequence[float]]) -> None:
    if len(groups) < 2:
        raise ValueError(f"{len(groups)} group is given; at least 2 are needed to compare.")
    for place, group in enumerate(groups, start=1):
        if not group:
            raise ValueError(f"Group {place} is empty; at least one value is expected.")
        for value in group:
            if not math.isfinite(value):
                raise ValueError(f"Group {place} holds {value}; a finite number is expected.")
    if all(len(group) == 1 for group in groups):
        raise ValueError("Every group holds one value; at least one group needs two.")
