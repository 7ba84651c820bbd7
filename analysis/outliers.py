"""Outlier tests. They inform; they never exclude a value.

References
----------
Grubbs, Technometrics 11 (1969) 1-21; Dixon, Biometrics 9 (1953) 74-89; Rosner, Technometrics 25 (1983) 165-172.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from statistics import fmean, stdev

from scipy import integrate, optimize, stats


@dataclass(frozen=True, slots=True)
class OutlierTest:
    """One test of the most extreme value: its statistic, the critical value, and what that says."""

    test: str
    suspect: float
    statistic: float
    critical: float
    alpha: float
    sides: int

    @property
    def is_beyond(self) -> bool:
        """Whether the statistic exceeds its critical value."""
        return self.statistic > self.critical

    @property
    def sentence(self) -> str:
        """The test in words."""
        beyond = "exceeds" if self.is_beyond else "does not exceed"
        level = f"{100 * (1 - self.alpha):g} %"
        return f"{self.test}: {self.suspect:g} gives {self.statistic:.3f}, which {beyond} {self.critical:.3f} ({level})."


def grubbs(values: Sequence[float], *, alpha: float = 0.05, sides: int = 2) -> OutlierTest:
    """Grubbs' test of one outlier, G = |suspect - mean| / s, critical value computed from Student's t.

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
    return OutlierTest("Grubbs", suspect, abs(suspect - mean) / sd, grubbs_critical(len(values), alpha, sides), alpha, sides)


def grubbs_critical(n: int, alpha: float = 0.05, sides: int = 2) -> float:
    """Critical value of Grubbs' test for n values."""
    t = stats.t.ppf(1 - alpha / (sides * n), n - 2)
    return float((n - 1) / math.sqrt(n) * math.sqrt(t**2 / (n - 2 + t**2)))


def dixon(values: Sequence[float], *, alpha: float = 0.05, sides: int = 2) -> OutlierTest:
    """Dixon's ratio r10 for 3 to 7 values: the gap of the extreme value over the range.

    Raises
    ------
    ValueError
        When fewer than three or more than seven values are given, or all are the same.
    """
    _check(values, least=3)
    if len(values) > 7:
        raise ValueError(f"{len(values)} values are given; r10 is for 3 to 7 of them.")
    order = sorted(values)
    whole = order[-1] - order[0]
    low, high = (order[1] - order[0]) / whole, (order[-1] - order[-2]) / whole
    suspect, ratio = (order[-1], high) if high >= low else (order[0], low)
    return OutlierTest("Dixon r10", suspect, ratio, dixon_critical(len(values), alpha, sides), alpha, sides)


@lru_cache(maxsize=64)
def dixon_critical(n: int, alpha: float = 0.05, sides: int = 2) -> float:
    """Critical value of r10, solved from its distribution for normal values.

    One-sided, P(r10 > r) for the upper extreme is found by integrating the joint density of the extreme, its
    neighbour and the opposite extreme; two-sided is twice that, exact at the usual levels where both ends cannot
    exceed r > 1/2 together.

    References
    ----------
    McBane, Journal of Statistical Software 16 (2006) issue 3, equation 1.
    """
    target = alpha / sides
    return float(optimize.brentq(lambda ratio: _tail(ratio, n) - target, 1e-4, 1 - 1e-6, xtol=1e-7))


def _tail(ratio: float, n: int) -> float:
    """P(r10 > ratio) for the upper extreme of n standard normal values."""
    nodes, weights = _gauss_legendre()
    x_low = 9.0 * nodes[:, None]  # smallest value, -9 to 9
    width = 6.5 * (nodes[None, :] + 1) + 1e-12  # range, 0 to 13
    neighbour = x_low + width * (1 - ratio)
    inner = stats.norm.cdf(neighbour) - stats.norm.cdf(x_low)
    density = stats.norm.pdf(x_low) * stats.norm.pdf(x_low + width) * n * (n - 1) * inner ** (n - 2)
    return float((weights[:, None] * weights[None, :] * density).sum() * 9.0 * 6.5)


@lru_cache(maxsize=1)
def _gauss_legendre():  # type: ignore[no-untyped-def]
    from numpy.polynomial.legendre import leggauss

    return leggauss(160)


def _check(values: Sequence[float], *, least: int) -> None:
    if len(values) < least:
        raise ValueError(f"{len(values)} values are given; at least {least} are needed.")
    for place, value in enumerate(values, start=1):
        if not math.isfinite(value):
            raise ValueError(f"Value {place} is {value}; a finite number is expected.")
    if max(values) == min(values):
        raise ValueError("All values are the same; there is no extreme one to test.")
