"""Critical values of outlier tests for normal values, computed from the distributions of the statistics.

References
----------
Dixon, Ann. Math. Statist. 22 (1951) 68-78; McBane, J. Stat. Softw. 16 (2006) issue 3 (Dixon's ratios);
Grubbs, Ann. Math. Statist. 21 (1950) 27-58; Rosner, Technometrics 25 (1983) 165-172.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import lru_cache

import numpy as np
import numpy.typing as npt
from scipy import optimize, special, stats

from analysis.control_constants import legendre

FloatArray = npt.NDArray[np.float64]
# Name: (neighbours skipped at the suspect end j, values skipped at the other end i, fewest values).
RATIOS: dict[str, tuple[int, int, int]] = {
    "r10": (1, 1, 3),
    "r11": (1, 2, 4),
    "r21": (2, 2, 5),
    "r22": (2, 3, 6),
}
LARGEST = 100
POINTS = 1500


@lru_cache(maxsize=512)
def dixon_critical(n: int, alpha: float = 0.05, sides: int = 2, ratio: str = "r10") -> float:
    """Critical value of one of Dixon's ratios for n values.

    The upper tail for one end is integrated exactly; two-sided means that either end may be suspected, each
    at alpha / 2, as the published tables do.

    Raises
    ------
    ValueError
        When the ratio needs more values, or alpha or sides is outside its range.
    """
    if ratio not in RATIOS:
        raise ValueError(f"Ratio is {ratio!r}; expected one of {', '.join(RATIOS)}.")
    least = RATIOS[ratio][2]
    if not least <= n <= LARGEST:
        raise ValueError(f"{n} values are given; {ratio} is for {least} to {LARGEST} of them.")
    target = _level(alpha, sides)
    return float(optimize.brentq(lambda r: dixon_tail(r, n, ratio) - target, 1e-6, 1 - 1e-9, xtol=1e-8))


def dixon_tail(value: float, n: int, ratio: str) -> float:
    """P(ratio > value) for the upper end of n standard normal values.

    With z the value at the lower end of the denominator, x the largest and y its neighbour at the end of the
    gap, the ratio exceeds r where y < x - r (x - z); the inner integral over y has a closed form.
    """
    j, i, _ = RATIOS[ratio]
    between = n - j - i  # values from z up to y, y included
    nodes, weights = legendre(160)
    z, gap = 9.0 * nodes[:, None], 6.5 * (nodes[None, :] + 1)
    low, high = special.ndtr(z), special.ndtr(z + gap)
    inner = special.ndtr(z + gap * (1 - value)) - low
    if j == 1:
        mass = inner**between / between
    else:  # one more value lies between y and x
        mass = (high - low) * inner**between / between - inner ** (between + 1) / (between + 1)
    ways = math.exp(math.lgamma(n + 1) - math.lgamma(i) - math.lgamma(between))
    density = low ** (i - 1) * mass * np.exp(-0.5 * (z**2 + (z + gap) ** 2)) / (2 * math.pi)
    return float(ways * 9.0 * 6.5 * (weights @ density @ weights))


def grubbs_critical(n: int, alpha: float = 0.05, sides: int = 2) -> float:
    """Critical value of Grubbs' test of one outlier: (n-1)/sqrt(n) sqrt(t^2 / (n-2+t^2)), t at 1 -
    alpha/(sides n).

    References
    ----------
    Grubbs, Technometrics 11 (1969) 1-21; NIST/SEMATECH e-Handbook of Statistical Methods 1.3.5.17.1.
    """
    if n < 3:
        raise ValueError(f"{n} values are given; at least 3 are needed.")
    t = stats.t.isf(_level(alpha, sides) / n, n - 2)
    return float((n - 1) / math.sqrt(n) * math.sqrt(t**2 / (n - 2 + t**2)))


def opposite_critical(n: int, alpha: float = 0.05) -> float:
    """Critical value of range / s, for one outlier at each end: sqrt(2 (n-1) t^2 / (n-2+t^2)), t at 1 -
    alpha/(n(n-1)).

    References
    ----------
    David, Hartley, Pearson, Biometrika 41 (1954) 482-493; the bound is sharp in the tail that tests use.
    """
    if n < 4:
        raise ValueError(f"{n} values are given; at least 4 are needed.")
    t = stats.t.isf(_level(alpha, 1) / (n * (n - 1)), n - 2)
    return float(math.sqrt(2 * (n - 1) * t**2 / (n - 2 + t**2)))


@lru_cache(maxsize=256)
def pair_critical(n: int, alpha: float = 0.05, sides: int = 2) -> float:
    """Critical value of Grubbs' ratio for two outliers at one end; smaller ratios are beyond it.

    Raises
    ------
    ValueError
        When n is below 4 or above 100, or alpha or sides is outside its range.
    """
    if not 4 <= n <= LARGEST:
        raise ValueError(f"{n} values are given; the test of a pair is for 4 to {LARGEST} of them.")
    target = _level(alpha, sides)
    return float(optimize.brentq(lambda ratio: pair_tail(ratio, n) - target, 1e-9, 0.999, xtol=1e-10))


def pair_tail(ratio: float, n: int) -> float:
    """P(SS without the two largest / SS < ratio) for n normal values.

    In the plane of the two suspects, relative to the mean of the others and made round, the direction is
    uniform and independent of the distance; both are the largest where they exceed the largest of the others.
    """
    rest = n - 2
    spread = math.sqrt(1 + 2 / rest)  # along the diagonal, where the mean of the others moves both
    nodes, weights = legendre(200)
    reach = math.atan(spread)  # both are above the mean of the others within this angle of the diagonal
    angle = reach * nodes
    least = (spread * np.cos(angle) - np.abs(np.sin(angle))) / math.sqrt(2)
    largest, mass = _largest_of(rest)
    needed = largest[None, :] ** 2 / ((rest - 1) * np.maximum(least, 1e-12)[:, None] ** 2)
    beyond = (1 + np.maximum(needed, 1 / ratio - 1)) ** (-(n - 3) / 2)
    return float(n * (n - 1) / 2 * reach / (2 * math.pi) * weights @ beyond @ mass)


@lru_cache(maxsize=128)
def _largest_of(n: int) -> tuple[FloatArray, FloatArray]:
    """Points and probabilities of (largest - mean) / s of n normal values."""
    if n == 2:
        return np.array([math.sqrt(0.5)]), np.array([1.0])
    points, cumulative = _largest_distribution(n)
    return (points[1:] + points[:-1]) / 2, np.diff(cumulative)


@lru_cache(maxsize=128)
def _largest_distribution(n: int) -> tuple[FloatArray, FloatArray]:
    """Distribution function of (largest - mean) / s on a grid, by Grubbs' recursion from n - 1 to n values.

    The density at t is n times that of one deviation, times the chance that the largest of the others stays
    below.
    """
    top = (n - 1) / math.sqrt(n)
    t = top * np.sin(np.linspace(0, math.pi / 2, POINTS))  # crowded where the density of few values is steep
    share = np.clip(1 - n * t**2 / (n - 1) ** 2, 1e-300, None)
    others = t * n / (n - 1) / np.sqrt((n - 1) * share / (n - 2))
    below = _largest_function(n - 1)(others)
    # In the angle of the grid the density of one deviation is a power of the cosine: no steep end is left.
    angle = np.linspace(0, math.pi / 2, POINTS)
    density = n * np.cos(angle) ** (n - 3) * below / special.beta(0.5, (n - 2) / 2)
    steps = np.concatenate([[0.0], np.cumsum((density[1:] + density[:-1]) / 2 * np.diff(angle))])
    return t, steps / steps[-1]


def _largest_function(n: int) -> Callable[[FloatArray], FloatArray]:
    if n == 2:
        return lambda value: (value >= math.sqrt(0.5)).astype(float)
    points, cumulative = _largest_distribution(n)
    return lambda value: np.interp(value, points, cumulative, left=0.0, right=1.0)


def _level(alpha: float, sides: int) -> float:
    if not 0 < alpha < 0.5:
        raise ValueError(f"Alpha is {alpha}; a number between 0 and 0.5 is expected.")
    if sides not in (1, 2):
        raise ValueError(f"Sides is {sides}; expected 1 or 2.")
    return alpha / sides
