"""Least-squares fit of a formula to points, with the uncertainty of its parameters.

References
----------
More, in: Numerical Analysis, Lecture Notes in Mathematics 630 (1978) 105-116; certified values: NIST StRD,
nonlinear
regression.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt
from scipy import optimize

FloatArray = npt.NDArray[np.float64]
Model = Callable[[Mapping[str, Any]], Any]
STEP = 1e-30
MOST_STEPS = 2000


@dataclass(frozen=True, slots=True)
class NonlinearFit:
    """Parameters by name with their standard uncertainties, and the residual spread [unit of y]."""

    parameters: dict[str, float]
    u: dict[str, float]
    residual_sd: float
    n: int


def fit_formula(model: Model, *, x: Sequence[float], y: Sequence[float], start: Mapping[str, float]) -> NonlinearFit:
    """Fit a model of x and named parameters.

    Parameters
    ----------
    model : callable
        Takes a mapping with x (an array) and the parameters; must take complex numbers.
    x, y : sequence of float
    start : mapping of str to float
        First guess of each parameter; also names them.

    Raises
    ------
    ValueError
        When there are too few points, the model gives no number, the fit does not converge,
        or a parameter cannot be
        known from the points (the sentence names it).
    """
    points, readings = _checked(x, y, count=len(start))
    names, guess = list(start), np.array([float(value) for value in start.values()])
    scale = np.where(guess == 0, 1.0, np.abs(guess))

    def away(p: FloatArray) -> FloatArray:
        return _numbers(model({"x": points, **dict(zip(names, p * scale, strict=True))}), points.size) - readings

    def slopes(p: FloatArray) -> FloatArray:
        return _slopes(model, points, dict(zip(names, p * scale, strict=True))) * scale

    found = optimize.least_squares(
        away, guess / scale, jac=slopes, method="lm", xtol=1e-15, ftol=1e-15, gtol=1e-15, max_nfev=MOST_STEPS
    )
    if found.status <= 0:
        raise ValueError(f"The fit has not converged after {found.nfev} steps; a better first guess is expected.")
    return _fitted(
        names,
        found.x * scale,
        _slopes(model, points, dict(zip(names, found.x * scale, strict=True))),
        found.fun,
    )


def _fitted(names: Sequence[str], values: FloatArray, jacobian: FloatArray, residuals: FloatArray) -> NonlinearFit:
    size = np.sqrt((jacobian**2).sum(axis=0))
    for name, length in zip(names, size, strict=True):
        if not length > 0:
            raise ValueError(f"Parameter {name} cannot be known: the formula does not change with it at these points.")
    _, singular, rows = np.linalg.svd(jacobian / size, full_matrices=False)
    if singular[-1] < 1e-12 * singular[0]:
        vague = names[int(np.abs(rows[-1]).argmax())]
        raise ValueError(f"Parameter {vague} cannot be known apart from the others by these points.")
    freedom = residuals.size - len(names)
    sd = math.sqrt(float(residuals @ residuals) / freedom)
    u = sd * np.sqrt(((rows / singular[:, None]) ** 2).sum(axis=0)) / size
    return NonlinearFit(
        dict(zip(names, values.tolist(), strict=True)),
        dict(zip(names, u.tolist(), strict=True)),
        sd,
        residuals.size,
    )


def _slopes(model: Model, x: FloatArray, parameters: Mapping[str, float]) -> FloatArray:
    columns = []
    for name, value in parameters.items():
        stepped = model({"x": x, **parameters, name: complex(value, STEP)})
        columns.append(np.broadcast_to(np.imag(stepped) / STEP, x.shape))
    return np.array(columns, dtype=float).T


def _numbers(values: Any, size: int) -> FloatArray:
    found = np.broadcast_to(np.asarray(np.real(values), dtype=float), (size,))
    if not np.all(np.isfinite(found)):
        raise ValueError("The formula gives no number on the way; a better first guess is expected.")
    return found


def _checked(x: Sequence[float], y: Sequence[float], *, count: int) -> tuple[FloatArray, FloatArray]:
    points, readings = np.asarray(x, dtype=float), np.asarray(y, dtype=float)
    if points.ndim != 1 or points.shape != readings.shape:
        raise ValueError(f"{points.size} x and {readings.size} y are given; as many of each are expected.")
    if count < 1 or points.size <= count:
        raise ValueError(
            f"{points.size} points are given for {count} parameters; more points than parameters are needed."
        )
    if not (np.all(np.isfinite(points)) and np.all(np.isfinite(readings))):
        raise ValueError("A point is not a finite number.")
    return points, readings
