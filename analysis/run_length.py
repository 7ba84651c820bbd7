"""Average run lengths of control charts, solved and not simulated.

Shifts are in standard deviations of single points; the run length counts points up to and including the
signal.

References
----------
Crowder, Technometrics 29 (1987) 401-407 (EWMA); Page, Biometrika 41 (1954) 100-115, Goel, Wu, Technometrics
13 (1971) 221-230 (CUSUM); Siegmund, Sequential Analysis (1985).
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt
from scipy import optimize, special

from analysis.control_constants import legendre
from analysis.ewma_cusum import check_cusum, check_weight

FloatArray = npt.NDArray[np.float64]
NODES = 160
ROOT_TWO_PI = math.sqrt(2 * math.pi)


def shewhart_run_length(*, shift: float = 0.0, width: float = 3.0) -> float:
    """Average run length of a chart of single points with limits at ``width`` sigma: 1 / P(beyond)."""
    _check_shift(shift)
    if not (width > 0 and math.isfinite(width)):
        raise ValueError(f"Width is {width}; a finite number above 0 is expected.")
    return float(1 / (special.ndtr(shift - width) + special.ndtr(-shift - width)))


def ewma_run_length(*, weight: float, width: float, shift: float = 0.0) -> float:
    """Average run length of an EWMA chart with steady limits, started at its target.

    Solves L(u) = 1 + (1/lambda) integral of L(y) phi((y - (1 - lambda) u) / lambda - shift) dy between the
    limits by Gauss-Legendre quadrature.

    Parameters
    ----------
    weight, width : float
        lambda, and the half width L of the limits in standard deviations of the average.

    Raises
    ------
    ValueError
        When a setting is outside its range.
    """
    _check_shift(shift)
    check_weight(weight, width=width)
    if weight == 1:
        return shewhart_run_length(shift=shift, width=width)
    edge = width * math.sqrt(weight / (2 - weight))
    nodes, weights = legendre(NODES)
    y = edge * nodes
    kernel = edge * weights * _density((y - (1 - weight) * y[:, None]) / weight - shift) / weight
    lengths = np.linalg.solve(np.eye(NODES) - kernel, np.ones(NODES))
    return float(1 + (edge * weights * _density(y / weight - shift) / weight) @ lengths)


def cusum_run_length(
    *, reference: float, interval: float, shift: float = 0.0, sides: int = 2, head_start: float = 0.0
) -> float:
    """Average run length of a tabular CUSUM with reference value k and decision interval h.

    One side solves L(u) = 1 + L(0) Phi(k - u - shift) + integral of L(y) phi(y + k - u - shift) dy over 0 to
    h; two sides combine as 1/L = 1/L+ + 1/L-, with the terms of a head start.

    Parameters
    ----------
    reference, interval : float
        k and h, in units of sigma.
    sides : int
        1 (upward shifts) or 2.
    head_start : float
        First value of the sums, in units of sigma.

    References
    ----------
    Lucas, Crosier, Technometrics 24 (1982) 199-205, equation A.1 (two sides with a head start).
    """
    _check_shift(shift)
    check_cusum(reference, interval=interval, head_start=head_start)
    if sides not in (1, 2):
        raise ValueError(f"Sides is {sides}; expected 1 or 2.")
    up, up_started = _one_sided(reference, interval=interval, shift=shift, start=head_start)
    if sides == 1:
        return up_started
    down, down_started = _one_sided(reference, interval=interval, shift=-shift, start=head_start)
    return (up_started * down + down_started * up - up * down) / (up + down)


def siegmund_run_length(*, reference: float, interval: float, shift: float = 0.0) -> float:
    """Siegmund's approximation for one side of a CUSUM: (exp(-2 D b) + 2 D b - 1) / (2 D^2), b = h + 1.166.

    References
    ----------
    Siegmund, Sequential Analysis (1985); Montgomery, Introduction to Statistical Quality Control, equation
    9.6.
    """
    _check_shift(shift)
    check_cusum(reference, interval=interval)
    drift, b = shift - reference, interval + 1.166
    return b**2 if drift == 0 else (math.exp(-2 * drift * b) + 2 * drift * b - 1) / (2 * drift**2)


def ewma_width_for(run_length: float, *, weight: float) -> float:
    """The width L of an EWMA chart whose average run length without a shift is the one wanted."""
    _check_wanted(run_length)
    return float(optimize.brentq(lambda width: ewma_run_length(weight=weight, width=width) - run_length, 0.05, 5.0))


def cusum_interval_for(run_length: float, *, reference: float) -> float:
    """The decision interval h of a two-sided CUSUM for a wanted average run length without a shift."""
    _check_wanted(run_length)

    def difference(interval: float) -> float:
        return math.log(cusum_run_length(reference=reference, interval=interval) / run_length)

    highest = 4.0 + 3.0 / max(reference, 0.1)
    return float(optimize.brentq(difference, 1e-3, highest))


def _one_sided(reference: float, *, interval: float, shift: float, start: float) -> tuple[float, float]:
    """Run lengths of the upper side from 0 and from a head start."""
    nodes, weights = legendre(NODES)
    y, w = interval * (nodes + 1) / 2, interval * weights / 2
    states = np.concatenate([[0.0], y])
    matrix = np.empty((states.size, states.size))
    matrix[:, 0] = special.ndtr(reference - states - shift)
    matrix[:, 1:] = w * _density(y + reference - states[:, None] - shift)
    lengths = np.linalg.solve(np.eye(states.size) - matrix, np.ones(states.size))
    row = np.concatenate([[special.ndtr(reference - start - shift)], w * _density(y + reference - start - shift)])
    return float(lengths[0]), float(1 + row @ lengths)


def _density(z: FloatArray) -> FloatArray:
    return np.asarray(np.exp(-0.5 * z * z) / ROOT_TWO_PI)


def _check_shift(shift: float) -> None:
    if not math.isfinite(shift):
        raise ValueError(f"Shift is {shift}; a finite number of standard deviations is expected.")


def _check_wanted(run_length: float) -> None:
    if not 2 <= run_length <= 1e5:
        raise ValueError(f"Average run length is {run_length}; a number from 2 to 100000 is expected.")
