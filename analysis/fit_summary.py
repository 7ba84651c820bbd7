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
SMALLEST = 1e-10  # share of a parameter's information that the others leave, below which nothing is known of it
MOST_CORRELATED = 0.9
NOT_NEGATIVE, SWEEPS = ("sample carbonate", "titrant carbonate", "lag"), 4


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
    theta, covariance = _not_negative(problem, optimum.theta, covariance * widened[:, None, None])
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


def _not_negative(problem: Problem, mean: FloatArray, covariance: FloatArray) -> tuple[FloatArray, FloatArray]:
    """The mean and covariance given that carbonate and lag are not below nothing.

    Each condition is replaced by a normal factor that gives the same moments as the cut distribution would,
    in turn until all agree (expectation propagation).
    """
    places = [place for place, group in enumerate(problem.groups) if group in NOT_NEGATIVE]
    factors = {place: (np.zeros(len(mean)), np.zeros(len(mean))) for place in places}
    for _ in range(SWEEPS if len(places) > 1 else 1):
        for place in places:
            least = -problem.system.carbonate if problem.groups[place] == "titrant carbonate" else 0.0
            factor = _factor(mean[:, place], covariance[:, place, place], factors[place], least)
            precision, pull = factor[0] - factors[place][0], factor[1] - factors[place][1]
            column = covariance[:, :, place].copy()
            shrink = 1.0 / (1.0 + precision * column[:, place])
            mean = mean + column * ((pull - precision * mean[:, place]) * shrink)[:, None]
            covariance = covariance - column[:, :, None] * column[:, None, :] * (precision * shrink)[:, None, None]
            factors[place] = factor
    return mean, covariance


def _factor(
    mean: FloatArray, variance: FloatArray, old: tuple[FloatArray, FloatArray], least: float
) -> tuple[FloatArray, FloatArray]:
    """Precision, and precision times mean, of the normal factor that stands for "not below ``least``"."""
    inverse_variance = 1.0 / np.maximum(variance, 1e-300)
    rest = np.maximum(inverse_variance - old[0], 1e-3 * inverse_variance)
    centre, sd = (mean * inverse_variance - old[1]) / rest, 1.0 / np.sqrt(rest)
    cut = np.clip((least - centre) / sd, -30.0, 30.0)
    hazard = np.sqrt(2 / np.pi) / special.erfcx(cut / np.sqrt(2))
    kept = np.maximum(1.0 - hazard * (hazard - cut), 1e-6)
    precision = rest / kept
    return precision - rest, precision * (centre + sd * hazard) - rest * centre


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
