"""Alkalinity from two endpoints, split into hydroxide, carbonate and bicarbonate.

References
----------
Standard Methods for the Examination of Water and Wastewater, 2320 B, table of alkalinity relationships.
"""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Alkalinity:
    """The three kinds of alkalinity, in the unit of what was given; they add up to the total."""

    hydroxide: float
    carbonate: float
    bicarbonate: float


def split_alkalinity(*, phenolphthalein: float, total: float) -> Alkalinity:
    """The kinds of alkalinity from P (to pH 8.3) and T (to pH 4.5), in one unit such as mg/L CaCO3.

    Raises
    ------
    ValueError
        When a number is negative or P is more than T.
    """
    p, t = phenolphthalein, total
    check_alkalinity(p, t)
    return Alkalinity(*(of_p * p + of_t * t for of_p, of_t in alkalinity_shares(p, t)))


def alkalinity_shares(p: float, t: float) -> tuple[tuple[float, float], ...]:
    """How many times P and how many times T each kind is: hydroxide, carbonate, bicarbonate."""
    if 2 * p <= t:
        return (0.0, 0.0), (2.0, 0.0), (-2.0, 1.0)
    return (2.0, -1.0), (-2.0, 2.0), (0.0, 0.0)


def check_alkalinity(p: float, t: float) -> None:
    """Refuse what no titration gives."""
    if not (math.isfinite(t) and 0 <= p <= t):
        raise ValueError(f"P is {p} and T is {t}; 0 <= P <= T is expected.")
