"""What an optimum says: equivalence volumes and parameters with uncertainty, and how good the fit is.

u = sqrt(cov) sqrt(max(1, chi2_nu)) sqrt((1 + r) / (1 - r)), r the lag-1 autocorrelation of the residuals
where positive.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy import special

from analysis.equivalence import Step
from analysis.fit_likelihood import HUBER_SHARE, Optimum, degrees_of_freedom, inverse
from analysis.fit_problem import Problem

FloatArray = npt.NDArray[np.float64]
SMALLEST = (
    1e-10  # share of a parameter's information that the others leave, below which nothing is known of it
)
MOST_CORRELATED = 0.9


@dataclass(frozen=True, slots=True)
class Summary:
    """Arrays over curves: parameters, volumes [mL] and u by equivalence point, covariance, diagnostics."""

    theta: FloatArray
    volumes: FloatArray
    volume_us: FloatArray
    covariance: FloatArray
    chi2_nu: FloatArray
    degrees_of_freedom: FloatArray
    lag_1: FloatArray
    runs_z: FloatArray
    smallest: FloatArray


def summarise(problem: Problem, optimum: Optimum, *, steps: tuple[Step, ...], robust: bool) -> Summary:
    """Uncertainties and diagnostics of every curve."""
    covariance = inverse(optimum.information)
    own = np.einsum("bii->bi", optimum.information) * np.einsum("bii->bi", covariance)
    dof = degrees_of_freedom(optimum.information, problem.precision, problem.points)
    z, mask = optimum.z, problem.observed.mask
    chi2_nu = (optimum.weight * z * z).sum(axis=1) / (dof * (HUBER_SHARE if robust else 1.0))
    lag = _lag_1(z * np.sqrt(optimum.weight), problem.points)
    positive = np.clip(lag, 0.0, MOST_CORRELATED)
    widened = np.maximum(1.0, chi2_nu) * (1 + positive) / (1 - positive)
    theta, covariance = _not_negative(problem, optimum.theta.copy(), covariance * widened[:, None, None])
    share = np.array([step.share for step in steps])
    count = share.shape[1]
    variance = np.einsum("ka,bac,kc->bk", share, covariance[:, :count, :count], share)
    return Summary(
        theta, theta[:, :count] @ share.T, np.sqrt(np.maximum(variance, 0.0)), covariance, chi2_nu, dof, lag,
        _runs_z(z, mask), 1.0 / np.maximum(own.max(axis=1), 1e-300),
    )  # fmt: skip


def unknown_parameter(information: FloatArray, names: tuple[str, ...]) -> str:
    """The parameter that weighs most in the direction of which one curve says nothing."""
    scale = np.sqrt(np.maximum(np.diag(information), 0.0))
    if (scale == 0).any():
        return names[int(np.flatnonzero(scale == 0)[0])]
    _, vectors = np.linalg.eigh(information / np.outer(scale, scale))
    return names[int(np.abs(vectors[:, 0]).argmax())]


def _not_negative(
    problem: Problem, theta: FloatArray, covariance: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """The mean and covariance given that carbonate and lag are not below nothing, one after the other.

    The moments of a normal variable cut at its lowest value, passed on to the other parameters by regression.
    """
    for place, group in enumerate(problem.groups):
        if group not in ("sample carbonate", "titrant carbonate", "lag"):
            continue
        variance = covariance[:, place, place].copy()
        sd = np.sqrt(np.maximum(variance, 1e-300))
        least = -problem.stated_carbonate if group == "titrant carbonate" else 0.0
        cut = np.clip((least - theta[:, place]) / sd, -30.0, 30.0)
        hazard = np.sqrt(2 / np.pi) / special.erfcx(cut / np.sqrt(2))
        gain = covariance[:, :, place] / np.maximum(variance, 1e-300)[:, None]
        theta += gain * (sd * hazard)[:, None]
        lost = variance * hazard * (hazard - cut)
        covariance -= gain[:, :, None] * gain[:, None, :] * lost[:, None, None]
    return theta, covariance


def _lag_1(z: FloatArray, points: FloatArray) -> FloatArray:
    away = z - (z.sum(axis=1) / points)[:, None]
    if z.shape[1] != points.min():
        away = np.where(np.arange(z.shape[1])[None, :] < points[:, None], away, 0.0)
    whole = (away * away).sum(axis=1)
    return np.asarray((away[:, 1:] * away[:, :-1]).sum(axis=1) / np.where(whole > 0, whole, 1.0))


def _runs_z(z: FloatArray, mask: FloatArray | None) -> FloatArray:
    """Wald-Wolfowitz statistic of the signs of the residuals; 0 where nearly all have the same sign."""
    there = np.ones(z.shape, dtype=bool) if mask is None else mask > 0
    above = (z > 0) & there
    n1 = above.sum(axis=1).astype(float)
    n2 = there.sum(axis=1) - n1
    changes = ((above[:, 1:] != above[:, :-1]) & there[:, 1:]).sum(axis=1)
    n = n1 + n2
    mean = 1 + 2 * n1 * n2 / n
    variance = (mean - 1) * (mean - 2) / (n - 1)
    return np.where(np.minimum(n1, n2) < 2, 0.0, (1 + changes - mean) / np.sqrt(np.maximum(variance, 1e-12)))
