"""Outlier tests. They inform; they never exclude a value.

References
----------
Dixon, Biometrics 9 (1953) 74-89 (which ratio for how many values); Grubbs, Technometrics 11 (1969) 1-21; ISO
5725-2:1994, clause 7.3.4 (pairs); Rosner, Technometrics 25 (1983) 165-172 (several outliers).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from statistics import fmean, stdev

from analysis.outlier_critical import (
    RATIOS,
    dixon_critical,
    grubbs_critical,
    opposite_critical,
    pair_critical,
)

__all__ = [
    "EsdStep", "OutlierTest", "dixon", "dixon_critical", "esd",
    "grubbs", "grubbs_critical", "grubbs_opposite", "grubbs_pair",
]  # fmt: skip


@dataclass(frozen=True, slots=True)
class OutlierTest:
    """One test of the most extreme value: its statistic, the critical value, and what that says.

    ``others`` holds further suspects of the same test; ``is_small`` says that small statistics are the
    suspicious ones.
    """

    test: str
    suspect: float
    statistic: float
    critical: float
    alpha: float
    sides: int
    others: tuple[float, ...] = ()
    is_small: bool = False

    @property
    def is_beyond(self) -> bool:
        """Whether the statistic lies beyond its critical value."""
        return self.statistic < self.critical if self.is_small else self.statistic > self.critical

    @property
    def sentence(self) -> str:
        """The test in words."""
        verb = ("is below" if self.is_beyond else "is not below") if self.is_small else ""
        verb = verb or ("exceeds" if self.is_beyond else "does not exceed")
        level = f"{100 * (1 - self.alpha):g} %"
        values = " and ".join(f"{value:g}" for value in (self.suspect, *self.others))
        plural = "give" if self.others else "gives"
        compared = f"{self.statistic:.3f}, which {verb} {self.critical:.3f}"
        return f"{self.test}: {values} {plural} {compared} ({level})."


@dataclass(frozen=True, slots=True)
class EsdStep:
    """One step of the test of several outliers: the value furthest off among those left."""

    suspect: float
    place: int
    statistic: float
    critical: float


def grubbs(values: Sequence[float], *, alpha: float = 0.05, sides: int = 2) -> OutlierTest:
    """Grubbs' test of one outlier, G = |suspect - mean| / s, critical value computed from Student's t.

    Parameters
    ----------
    values : sequence of float
    alpha : float
        Significance level.
    sides : int
        2 when either end may be suspected, 1 when the end was named before the values were seen.

    Raises
    ------
    ValueError
        When fewer than three values are given, or all are the same.

    References
    ----------
    Grubbs (1969), equation 6 in the form of the NIST/SEMATECH e-Handbook, section 1.3.5.17.1.
    """
    _check(values, least=3)
    mean, sd = fmean(values), stdev(values)
    suspect = max(values, key=lambda value: abs(value - mean))
    return OutlierTest(
        "Grubbs", suspect, abs(suspect - mean) / sd, grubbs_critical(len(values), alpha, sides), alpha, sides
    )


def grubbs_pair(values: Sequence[float], *, alpha: float = 0.05, sides: int = 2) -> OutlierTest:
    """Grubbs' test of two outliers at one end: sum of squares without the pair over that with it; small is
    suspicious.

    The end with the smaller ratio is tested.

    Raises
    ------
    ValueError
        When fewer than four values are given, or all are the same.

    References
    ----------
    ISO 5725-2:1994, clause 7.3.4.2.
    """
    _check(values, least=4)
    order = sorted(values)
    whole = _sum_of_squares(order)
    low, high = _sum_of_squares(order[2:]) / whole, _sum_of_squares(order[:-2]) / whole
    ratio, pair = (low, order[:2]) if low < high else (high, order[:-3:-1])
    critical = pair_critical(len(values), alpha, sides)
    return OutlierTest("Grubbs, a pair at one end", pair[0], ratio, critical, alpha, sides, (pair[1],), is_small=True)


def grubbs_opposite(values: Sequence[float], *, alpha: float = 0.05) -> OutlierTest:
    """Grubbs' test of one outlier at each end: range over s; ValueError for fewer than four values."""
    _check(values, least=4)
    low, high = min(values), max(values)
    critical = opposite_critical(len(values), alpha)
    return OutlierTest("Grubbs, one at each end", low, (high - low) / stdev(values), critical, alpha, 2, (high,))


def dixon(values: Sequence[float], *, alpha: float = 0.05, sides: int = 2, ratio: str | None = None) -> OutlierTest:
    """Dixon's test: the gap at the suspect end over a range, the ratio chosen by the number of values.

    r10 for 3 to 7 values, r11 for 8 to 10, r21 for 11 to 13, r22 from 14 on, unless a ratio is named.

    Raises
    ------
    ValueError
        When fewer than three values are given, the ratio needs more, or all are the same.

    References
    ----------
    Dixon (1953), table; critical values as in ``outlier_critical``.
    """
    _check(values, least=3)
    name = ratio or dixon_ratio(len(values))
    critical = dixon_critical(len(values), alpha, sides, name)
    order = sorted(values)
    low, high = _dixon_statistic([-value for value in reversed(order)], name), _dixon_statistic(order, name)
    suspect, statistic = (order[-1], high) if high >= low else (order[0], low)
    return OutlierTest(f"Dixon {name}", suspect, statistic, critical, alpha, sides)


def dixon_ratio(n: int) -> str:
    """The ratio that Dixon advises for n values."""
    return "r10" if n <= 7 else "r11" if n <= 10 else "r21" if n <= 13 else "r22"


def esd(values: Sequence[float], *, most: int, alpha: float = 0.05) -> tuple[tuple[EsdStep, ...], int]:
    """The generalized extreme studentized deviate test of up to ``most`` outliers.

    Returns
    -------
    steps : tuple of EsdStep
        One per suspected outlier, the furthest first.
    count : int
        The number of outliers: the last step whose statistic exceeds its critical value.

    Raises
    ------
    ValueError
        When ``most`` is not between 1 and n - 2, or the values cannot be tested.

    References
    ----------
    Rosner (1983), equation 2.4; NIST/SEMATECH e-Handbook of Statistical Methods 1.3.5.17.3.
    """
    _check(values, least=3)
    if not 1 <= most <= len(values) - 2:
        raise ValueError(f"Most outliers is {most}; expected 1 to {len(values) - 2} for {len(values)} values.")
    left, steps = dict(enumerate(values)), []
    for _ in range(most):
        mean, sd = fmean(left.values()), stdev(left.values())
        if sd == 0:
            break
        place = max(left, key=lambda key: abs(left[key] - mean))
        steps.append(EsdStep(left[place], place, abs(left[place] - mean) / sd, grubbs_critical(len(left), alpha)))
        del left[place]
    beyond = [number for number, step in enumerate(steps, start=1) if step.statistic > step.critical]
    return tuple(steps), max(beyond, default=0)


def _dixon_statistic(order: Sequence[float], name: str) -> float:
    j, i, _ = RATIOS[name]
    whole = order[-1] - order[i - 1]
    if whole == 0:
        return 0.0  # all values but those at the other end are the same: no gap at this end
    return (order[-1] - order[-1 - j]) / whole


def _sum_of_squares(values: Sequence[float]) -> float:
    mean = fmean(values)
    return math.fsum((value - mean) ** 2 for value in values)


def _check(values: Sequence[float], *, least: int) -> None:
    if len(values) < least:
        raise ValueError(f"{len(values)} values are given; at least {least} are needed.")
    for place, value in enumerate(values, start=1):
        if not math.isfinite(value):
            raise ValueError(f"Value {place} is {value}; a finite number is expected.")
    if max(values) == min(values):
        raise ValueError("All values are the same; there is no extreme one to test.")
