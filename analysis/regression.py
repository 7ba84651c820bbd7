"""A straight line by least squares, with the uncertainty of its coefficients.

References
----------
NIST/SEMATECH e-Handbook of Statistical Methods 4.4.3.1; certified values: NIST StRD, linear regression.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from statistics import fmean


@dataclass(frozen=True, slots=True)
class Line:
    """y = intercept + slope x, with standard uncertainties and the residual spread [unit of y]."""

    n: int
    intercept: float
    slope: float
    u_intercept: float
    u_slope: float
    residual_sd: float
    r_squared: float


def straight_line(x: Sequence[float], y: Sequence[float]) -> Line:
    """The least-squares line through points.

    Raises
    ------
    ValueError
        When fewer than three points are given, one is not finite, or all x are the same.
    """
    _check(x, y)
    n, x_mean, y_mean = len(x), fmean(x), fmean(y)
    dx, dy = [a - x_mean for a in x], [b - y_mean for b in y]
    s_xx, s_yy = math.fsum(a * a for a in dx), math.fsum(b * b for b in dy)
    if s_xx == 0:
        raise ValueError(f"All x are {x[0]}; the slope of a line cannot be known from them.")
    slope = math.fsum(a * b for a, b in zip(dx, dy, strict=True)) / s_xx
    left = math.fsum((b - slope * a) ** 2 for a, b in zip(dx, dy, strict=True))
    sd = math.sqrt(left / (n - 2))
    return Line(
        n, y_mean - slope * x_mean, slope, sd * math.sqrt(1 / n + x_mean**2 / s_xx), sd / math.sqrt(s_xx), sd,
        1 - left / s_yy if s_yy else 1.0,
    )  # fmt: skip


def _check(x: Sequence[float], y: Sequence[float]) -> None:
    if len(x) != len(y):
        raise ValueError(f"{len(x)} x and {len(y)} y are given; as many of each are expected.")
    if len(x) < 3:
        raise ValueError(f"{len(x)} points are given; at least 3 are needed for a line and its uncertainty.")
    for name, values in (("x", x), ("y", y)):
        for place, value in enumerate(values, start=1):
            if not math.isfinite(value):
                raise ValueError(f"{name} {place} is {value}; a finite number is expected.")
