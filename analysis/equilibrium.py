"""The fit of the equilibrium model to a recorded curve: equivalence volumes with honest uncertainties.

Residuals are taken in volume, V_obs - V(reading; parameters), each over its own standard deviation
sqrt(s_V^2 + (dV/dy)^2 s_y^2), because V is explicit in the reading. Electrode offset and slope, the pKa values and
carbonate are parameters with stated priors, so that what is not known widens the interval.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy import optimize

from analysis.curve import Curve
from analysis.explicit import NERNST, acid_base_volume, equivalents, ionic_strength, silver_halide_volume
from analysis.noise import noise_of
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
VOLUME_SD = 0.003  # mL, least standard deviation of a delivered volume
OFFSET_SD, SLOPE_SD, PKA_SD, CARBONATE_SD = 0.06, 0.015, 0.03, 0.0015
HUBER = 1.5


@dataclass(frozen=True, slots=True)
class Fit:
    """A fitted model with what it was fitted to.

    Attributes
    ----------
    curve, system
        As given.
    names, values, standard_uncertainties : tuples
        The parameters: equivalence volume [mL] of each analyte, then the nuisance parameters.
    endpoints, endpoint_us : tuples of float
        Equivalence volumes [mL] in order, and their standard uncertainties.
    chi2_nu, lag_1, runs_z : float
        Reduced chi-square, lag-1 autocorrelation and runs statistic of the residuals.
    residuals : array
        V_obs - V_model [mL].
    model_volume : array
        V of the model at the recorded readings [mL].
    degrees_of_freedom : float
    flags : tuple of str
    """

    curve: Curve
    system: System
    names: tuple[str, ...]
    values: tuple[float, ...]
    standard_uncertainties: tuple[float, ...]
    endpoints: tuple[float, ...]
    endpoint_us: tuple[float, ...]
    chi2_nu: float
    lag_1: float
    runs_z: float
    residuals: FloatArray
    model_volume: FloatArray
    degrees_of_freedom: float
    flags: tuple[str, ...]


def fit_equilibrium(curve: Curve, *, system: System, guess: float | None = None) -> Fit:
    """Fit a system to a curve by weighted least squares with priors.

    Parameters
    ----------
    curve : Curve
    system : System
    guess : float, optional
        A first equivalence volume [mL]; the steepest place of the curve otherwise.

    Raises
    ------
    ValueError
        When the quantity does not fit the kind of system, a parameter cannot be known from the curve, or the fit
        does not converge.
    """
    wanted = "pH" if system.kind == "acid_base" else "mV"
    if curve.quantity != wanted:
        raise ValueError(f"The curve is of {curve.quantity}; the model of {system.kind.replace('_', ' ')} takes {wanted}.")
    model = _acid_base(curve, system, guess) if system.kind == "acid_base" else _silver(curve, system, guess)
    found = optimize.least_squares(model.residuals, model.start, x_scale=model.scale, loss="linear", max_nfev=200)
    weights = _huber(found.fun[: curve.volume.size])
    found = optimize.least_squares(lambda p: model.residuals(p, weights), found.x, x_scale=model.scale, max_nfev=200)
    if found.status <= 0 or not np.all(np.isfinite(found.x)):
        raise ValueError("The model does not converge on this curve. Look at its chemistry and at the curve.")
    return _fitted(curve, system, model, found)


@dataclass(frozen=True, slots=True)
class _Model:
    names: tuple[str, ...]
    start: FloatArray
    scale: FloatArray
    priors: FloatArray  # standard deviation about the start; infinite where there is none
    volume: Callable[[FloatArray, FloatArray], FloatArray]
    curve: Curve
    reading_sd: float

    def residuals(self, parameters: FloatArray, weights: FloatArray | None = None) -> FloatArray:
        step = 1e-4 * (1 if self.curve.quantity == "pH" else 100)
        y = self.curve.reading
        computed = self.volume(parameters, y)
        slope = (self.volume(parameters, y + step) - self.volume(parameters, y - step)) / (2 * step)
        sd = np.sqrt(VOLUME_SD**2 + (slope * self.reading_sd) ** 2)
        away = (self.curve.volume - computed) / sd
        away = np.clip(np.nan_to_num(away, nan=1e3, posinf=1e3, neginf=-1e3), -1e3, 1e3)
        held = np.isfinite(self.priors)
        prior = (parameters[held] - self.start[held]) / self.priors[held]
        return np.concatenate([away if weights is None else away * weights, prior])


def _acid_base(curve: Curve, system: System, guess: float | None) -> _Model:
    steepest = guess if guess is not None else _steepest(curve)
    count = len(system.analytes)
    volumes = np.full(count, steepest / count)
    protons = np.array([equivalents(item, system) for item in system.analytes], dtype=float)
    about = volumes * system.titrant_concentration / protons
    ionic = ionic_strength(system, volume=curve.volume, amounts=about) if system.activity else None

    def volume(p: FloatArray, reading: FloatArray) -> FloatArray:
        amounts = p[:count] * system.titrant_concentration / protons
        pH = 7.0 + (reading - 7.0 - p[count]) / (1 + p[count + 1])
        carbonate = max(system.carbonate + p[count + 2], 0.0) * system.titrant_concentration if system.titrant == "base" else 0.0
        return acid_base_volume(pH, amounts, system, shifts=p[count + 3 :], carbonate=carbonate, ionic_strength=ionic)

    names = (*(f"V({item.name})" for item in system.analytes), "offset", "slope", "carbonate", *(f"pKa shift of {item.name}" for item in system.analytes))
    start = np.concatenate([volumes, np.zeros(3 + count)])
    priors = np.array([np.inf] * count + [OFFSET_SD, SLOPE_SD, CARBONATE_SD] + [PKA_SD] * count)
    scale = np.concatenate([np.full(count, 0.1), [0.05, 0.01, 0.001], np.full(count, 0.03)])
    return _Model(names, start, scale, priors, volume, curve, max(noise_of(curve), 0.004))


def _silver(curve: Curve, system: System, guess: float | None) -> _Model:
    steepest, halide = guess if guess is not None else _steepest(curve), system.analytes[0]
    pKs = halide.pKs if halide.pKs is not None else 9.752
    middle = float(np.interp(steepest, curve.volume, curve.reading))

    def volume(p: FloatArray, reading: FloatArray) -> FloatArray:
        slope = NERNST * (1 + p[2])
        return silver_halide_volume(reading, p[0] * system.titrant_concentration, system, standard=p[1], slope=slope, pKs=pKs + p[3])

    start = np.array([steepest, middle + NERNST * pKs / 2, 0.0, 0.0])
    priors = np.array([np.inf, np.inf, SLOPE_SD * 2, 0.1])
    return _Model((f"V({halide.name})", "E0", "slope", "pKs"), start, np.array([0.1, 5.0, 0.01, 0.05]), priors, volume, curve, max(noise_of(curve), 0.2))


def _fitted(curve: Curve, system: System, model: _Model, found: optimize.OptimizeResult) -> Fit:
    points = curve.volume.size
    covariance = _covariance(found.jac, model.names)
    dof = float(max(points - int(np.isinf(model.priors).sum()), 1))
    away = found.fun[:points]
    chi2_nu = float((away**2).sum() / dof)
    lag, z = _lag_1(away), _runs_z(away)
    widened = math.sqrt(max(1.0, chi2_nu)) * math.sqrt((1 + max(lag, 0.0)) / (1 - max(lag, 0.0)))
    us = np.sqrt(np.diag(covariance)) * widened
    count = len(system.analytes)
    ends = np.cumsum(found.x[:count])
    spread = np.array([math.sqrt(covariance[: k + 1, : k + 1].sum()) for k in range(count)]) * widened
    computed = model.volume(found.x, curve.reading)
    return Fit(
        curve=curve, system=system, names=model.names, values=tuple(map(float, found.x)),
        standard_uncertainties=tuple(map(float, us)), endpoints=tuple(map(float, ends)),
        endpoint_us=tuple(map(float, spread)), chi2_nu=chi2_nu, lag_1=lag, runs_z=z,
        residuals=np.asarray(curve.volume - computed), model_volume=np.asarray(computed), degrees_of_freedom=dof,
        flags=_flags(system, found.x, chi2_nu, lag, z, points=points, dof=dof),
    )  # fmt: skip


def _covariance(jacobian: FloatArray, names: tuple[str, ...]) -> FloatArray:
    _, singular, right = np.linalg.svd(jacobian, full_matrices=False)
    if singular[-1] <= 1e-12 * singular[0]:
        worst = names[int(np.abs(right[-1]).argmax())]
        raise ValueError(f"The curve does not tell {worst}: it cannot be known from these points.")
    return np.asarray((right.T / singular**2) @ right)


def _flags(system: System, p: FloatArray, chi2_nu: float, lag: float, z: float, *, points: int, dof: float) -> tuple[str, ...]:
    found = []
    slope = p[len(system.analytes) + 1] if system.kind == "acid_base" else p[2]
    if not -0.05 <= slope <= 0.02:
        found.append(f"Electrode slope {100 * (1 + slope):.1f} %, outside 95-102 %.")
    of_noise = 2 * 1.17 / math.sqrt(0.6 * points)  # the scatter is itself estimated, by a median of the flat part
    if chi2_nu > 1 + 3 * math.hypot(math.sqrt(2 / dof), of_noise):
        found.append(f"The model leaves {chi2_nu:.1f} times the scatter of the readings: its chemistry does not describe this curve.")
    if z < -3 or lag > 3 / math.sqrt(points):
        found.append("The residuals of the model follow one another: look for drift, a slow electrode or a second analyte.")
    return tuple(found)


def _steepest(curve: Curve) -> float:
    slope = np.abs(np.diff(curve.reading) / np.diff(curve.volume))
    middle = (curve.volume[1:] + curve.volume[:-1]) / 2
    return float(middle[int(slope.argmax())])


def _huber(away: FloatArray) -> FloatArray:
    size = np.abs(away) / max(1.0, 1.4826 * float(np.median(np.abs(away))))
    return np.sqrt(np.where(size <= HUBER, 1.0, HUBER / np.maximum(size, HUBER)))


def _lag_1(away: FloatArray) -> float:
    centred = away - away.mean()
    whole = float((centred**2).sum())
    return min(float((centred[1:] * centred[:-1]).sum() / whole), 0.95) if whole > 0 else 0.0


def _runs_z(away: FloatArray) -> float:
    above = away > 0
    n1, n2 = int(above.sum()), int((~above).sum())
    if min(n1, n2) < 2:
        return 0.0
    runs, n = 1 + int((above[1:] != above[:-1]).sum()), n1 + n2
    mean = 1 + 2 * n1 * n2 / n
    variance = (mean - 1) * (mean - 2) / (n - 1)
    return float((runs - mean) / math.sqrt(variance)) if variance > 0 else 0.0
