"""Several results from correlated inputs: their covariance matrix, for results that are used together.

References
----------
JCGM 102:2011, clause 6.2 (U_y = J U_x J^T); JCGM 100:2008, H.2.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.uncertainty import Input

FloatArray = npt.NDArray[np.float64]
Model = Callable[[Mapping[str, complex]], complex]
STEP = 1e-30


@dataclass(frozen=True, slots=True)
class Correlated:
    """Values with their standard uncertainties, covariance and correlation, in the order of the models."""

    values: FloatArray
    u: FloatArray
    covariance: FloatArray
    correlation: FloatArray


def input_covariance(inputs: Sequence[Input], *, correlations: Mapping[tuple[str, str], float]) -> FloatArray:
    """Covariance of the inputs: one key means one thing, named pairs have the correlation given, others none.

    Raises
    ------
    ValueError
        When a pair is not among the inputs, a coefficient is outside -1 to 1, or the whole is impossible.
    """
    names = [item.name for item in inputs]
    r = np.array([[float(a.key == b.key) for b in inputs] for a in inputs])
    for (one, other), coefficient in correlations.items():
        if one not in names or other not in names or one == other:
            raise ValueError(f"Correlation of {one!r} and {other!r}: two different inputs are expected.")
        if not -1 <= coefficient <= 1:
            raise ValueError(f"Correlation of {one} and {other} is {coefficient}; -1 to 1 is expected.")
        i, j = names.index(one), names.index(other)
        r[i, j] = r[j, i] = coefficient
    if np.linalg.eigvalsh(r)[0] < -1e-9:
        raise ValueError("The correlations given cannot all hold at once; check their signs.")
    u = np.array([item.u for item in inputs])
    return np.asarray(r * np.outer(u, u))


def propagate_together(
    models: Sequence[Model],
    inputs: Sequence[Input],
    *,
    correlations: Mapping[tuple[str, str], float] | None = None,
) -> Correlated:
    """Law of propagation for several results at once, derivatives by a complex step.

    Raises
    ------
    ValueError
        When an input is not usable or a model gives no finite number.
    """
    for item in inputs:
        if not (item.u >= 0 and math.isfinite(item.u) and math.isfinite(item.value)):
            raise ValueError(
                f"{item.label} is {item.value} with u {item.u}; finite numbers are expected, u not below 0."
            )
    at: dict[str, complex] = {item.name: complex(item.value) for item in inputs}
    values = np.array([model(at).real for model in models])
    if not np.all(np.isfinite(values)):
        raise ValueError(f"Results are {values.tolist()}; the inputs do not give numbers.")
    slopes = np.array([[model({**at, x.name: complex(x.value, STEP)}).imag / STEP for x in inputs] for model in models])
    covariance = slopes @ input_covariance(inputs, correlations=correlations or {}) @ slopes.T
    u = np.sqrt(np.clip(np.diag(covariance), 0, None))
    scale = np.outer(u, u)
    correlation = np.divide(covariance, scale, out=np.eye(len(models)), where=scale > 0)
    return Correlated(values, u, np.asarray(covariance), np.asarray(correlation))


def mean_covariance(readings: Sequence[Sequence[float]]) -> FloatArray:
    """Covariance of the means of quantities read together: one row of readings per quantity.

    Raises
    ------
    ValueError
        When rows differ in length or have fewer than two readings.
    """
    lengths = {len(row) for row in readings}
    if len(lengths) != 1 or min(lengths) < 2:
        raise ValueError(f"Rows hold {sorted(lengths)} readings; as many in each, at least 2, are expected.")
    rows = np.asarray(readings, dtype=float)
    if not np.all(np.isfinite(rows)):
        raise ValueError("A reading is not a finite number.")
    return np.asarray(np.atleast_2d(np.cov(rows)) / rows.shape[1])
