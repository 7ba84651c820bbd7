"""The fit of the equilibrium model to one recorded curve: equivalence volumes with honest uncertainties.

The amounts, and with stated priors the constants, carbonate, and the electrode's offset, slope, lag and drift, are
fitted together, so that what is not known widens the interval. Method: fit_likelihood.py; many curves: batch.py.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.balance import NUISANCE
from analysis.batch import fit_equilibrium_batch
from analysis.curve import Curve
from analysis.fit_problem import VOLUME_SD, FitSettings
from analysis.system import System

FloatArray = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Equivalence:
    """One equivalence point: what is done with there (analyte and proton), its volume and standard uncertainty [mL],
    the reading of the model there, and whether the curve jumps there."""

    analyte: str
    proton: int
    volume: float
    standard_uncertainty: float
    reading: float
    is_jump: bool


@dataclass(frozen=True, slots=True)
class Fit:
    """A fitted model with what it was fitted to.

    Attributes
    ----------
    curve, system, settings
        As given.
    names, values, standard_uncertainties : tuples
        The parameters: equivalents [mL of titrant per proton, electron or ion] of each analyte, then what was fitted
        beside them [decimal units of the electrode; fractions for slope, lag and carbonate; pK units].
    equivalences : tuple of Equivalence
        All of them, in the order of the titration.
    endpoints, endpoint_us : tuples of float
        Volumes [mL] of those with a jump inside the curve (of the first, where none has), and standard uncertainties.
    degrees_of_freedom : float
        Points less the parameters the curve itself had to tell.
    noise : float
        Standard deviation of a reading that was used [pH or mV].
    chi2_nu, lag_1, runs_z : float
        Reduced chi-square, lag-1 autocorrelation and runs statistic of the residuals.
    fitted : array
        Readings of the model at the recorded volumes.
    residuals : array
        Residual of each point over its own standard deviation, reading and volume together.
    flags : tuple of str
        What the analyst is told.
    """

    curve: Curve
    system: System
    settings: FitSettings
    names: tuple[str, ...]
    values: tuple[float, ...]
    standard_uncertainties: tuple[float, ...]
    equivalences: tuple[Equivalence, ...]
    endpoints: tuple[float, ...]
    endpoint_us: tuple[float, ...]
    degrees_of_freedom: float
    noise: float
    chi2_nu: float
    lag_1: float
    runs_z: float
    fitted: FloatArray
    residuals: FloatArray
    flags: tuple[str, ...]


def fit_equilibrium(
    curve: Curve, *, system: System, guess: float | None = None, noise: float | None = None,
    volume_sd: float = VOLUME_SD, nuisance: tuple[str, ...] = NUISANCE, priors: Mapping[str, float] | None = None,
    robust: bool = True,
) -> Fit:  # fmt: skip
    """Fit a system to a curve.

    Parameters
    ----------
    curve : Curve
    system : System
    guess : float, optional
        A first equivalence volume [mL]; the steepest place of the curve otherwise.
    noise, volume_sd, nuisance, priors, robust
        See ``FitSettings``.

    Raises
    ------
    ValueError
        When the quantity does not fit the kind of system, a parameter cannot be known from the curve, or the fit
        does not converge.
    """
    settings = FitSettings(nuisance, priors, noise, volume_sd, robust)
    found = fit_equilibrium_batch([curve], system=system, guess=guess, settings=settings, tolerance=1e-8)
    if found.problems[0]:
        raise ValueError(found.problems[0])
    fitted, at_ends = found.fitted(0), found.readings(0)
    points = tuple(
        Equivalence(step.analyte, step.proton, float(volume), float(u), float(reading), step.is_jump)
        for step, volume, u, reading in zip(found.steps, found.volumes[0], found.volume_us[0], at_ends, strict=True)
    )
    ends = _endpoints(points, last=float(curve.volume[-1]))
    return Fit(
        curve=curve, system=system, settings=settings, names=found.names, values=tuple(map(float, found.theta[0])),
        standard_uncertainties=tuple(map(float, found.parameter_us[0])), equivalences=points,
        endpoints=tuple(point.volume for point in ends), endpoint_us=tuple(point.standard_uncertainty for point in ends),
        degrees_of_freedom=float(found.degrees_of_freedom[0]), noise=float(found.noise[0]),
        chi2_nu=float(found.chi2_nu[0]), lag_1=float(found.lag_1[0]), runs_z=float(found.runs_z[0]), fitted=fitted,
        residuals=found.residuals(0), flags=found.flags(0),
    )  # fmt: skip


def _endpoints(points: tuple[Equivalence, ...], *, last: float) -> tuple[Equivalence, ...]:
    jumps = tuple(point for point in points if point.is_jump) or points[-1:]
    return tuple(point for point in jumps if point.volume <= last) or jumps[:1]
