"""Constants of control charts for normal values, computed from their definitions and never typed.

References
----------
Tippett, Biometrika 17 (1925) 364-387 (range of a normal sample); ASTM E2587; Montgomery, Introduction to
Statistical Quality Control, appendix VI (the tables that the tests compare with).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
import numpy.typing as npt
from numpy.polynomial.legendre import leggauss
from scipy import special

FloatArray = npt.NDArray[np.float64]
FAR = 8.5  # beyond this many standard deviations a normal value has probability 1e-17
NODES = 240


@dataclass(frozen=True, slots=True)
class ChartConstants:
    """All constants of subgroups of n values, by their usual symbols."""

    n: int
    A2: float
    A3: float
    c4: float
    B3: float
    B4: float
    d2: float
    d3: float
    D3: float
    D4: float


def chart_constants(n: int) -> ChartConstants:
    """The constants of X-bar charts with R and with S for subgroups of n values.

    Raises
    ------
    ValueError
        When n is below 2.
    """
    mean_range, sd_range, mean_sd = d2(n), d3(n), c4(n)
    wide_range, wide_sd = 3 * sd_range / mean_range, 3 * math.sqrt(1 - mean_sd**2) / mean_sd
    root = math.sqrt(n)
    return ChartConstants(
        n, 3 / (mean_range * root), 3 / (mean_sd * root), mean_sd, max(0.0, 1 - wide_sd), 1 + wide_sd,
        mean_range, sd_range, max(0.0, 1 - wide_range), 1 + wide_range,
    )  # fmt: skip


@lru_cache(maxsize=256)
def c4(n: int) -> float:
    """Mean sample standard deviation of n standard normal values: sqrt(2/(n-1)) G(n/2) / G((n-1)/2)."""
    _check(n)
    return math.sqrt(2 / (n - 1)) * math.exp(math.lgamma(n / 2) - math.lgamma((n - 1) / 2))


@lru_cache(maxsize=256)
def d2(n: int) -> float:
    """Mean range of n standard normal values: the integral of 1 - F^n - (1 - F)^n."""
    _check(n)
    nodes, weights = legendre(NODES)
    x = FAR * nodes
    return float(FAR * weights @ (1 - special.ndtr(x) ** n - special.ndtr(-x) ** n))


@lru_cache(maxsize=256)
def d3(n: int) -> float:
    """Standard deviation of the range of n standard normal values, from the integral of its second moment."""
    _check(n)
    nodes, weights = legendre(NODES)
    low = FAR * nodes[:, None]
    gap = FAR * (nodes[None, :] + 1)
    above, below = special.ndtr(low + gap), special.ndtr(low)
    inside = 1 - above**n - special.ndtr(-low) ** n + (above - below) ** n
    second = 2 * FAR * FAR * float(weights @ inside @ weights)
    return math.sqrt(second - d2(n) ** 2)


@lru_cache(maxsize=8)
def legendre(count: int) -> tuple[FloatArray, FloatArray]:
    """Nodes and weights of Gauss-Legendre quadrature on -1 to 1."""
    nodes, weights = leggauss(count)
    return np.asarray(nodes), np.asarray(weights)


def _check(n: int) -> None:
    if n < 2:
        raise ValueError(f"Subgroups hold {n} values; at least 2 are needed for a range or a standard deviation.")
