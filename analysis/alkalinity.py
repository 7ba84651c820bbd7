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
    if not (math.isfinite(t) and 0 <= p <= t):
        raise ValueError(f"P is {p} and T is {t}; 0 <= P <= T is expected.")
    if 2 * p <= t:
        return Alkalinity(0.0, 2 * p, t - 2 * p)
    return Alkalinity(2 * p - t, 2 * (t - p), 0.0)
