"""The fit of the equilibrium model to one recorded curve: equivalence volumes with honest uncertainties.

The amounts, and with stated priors the constants, carbonate, and the electrode's offset, slope, lag and
drift, are fitted together, so that what is not known widens the interval. Method: fit_likelihood.py; many
curves: batch.py.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
import numpy.typing as npt

from analysis.balance import solved
from analysis.curve import Curve
from analysis.equivalence import equivalence_steps
from analysis.fit_flags import flags_of_fit
from analysis.fit_problem import FitSettings
from analysis.fit_run import Outcome, run_fit
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
TOLERANCE = 1e-8  # standard uncertainties: to the last digit that means anything


@dataclass(frozen=True, slots=True)
class Equivalence:
    """One equivalence point: what is done with there (analyte and proton), its volume and standard
    uncertainty [mL], the reading of the model there, and whether the curve jumps there."""

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
        The parameters: equivalents [mL of titrant per proton, electron or ion] of each analyte, then what
        was fitted beside them [decimal units of the electrode; fractions for slope, lag and carbonate; pK
        units].
    equivalences : tuple of Equivalence
        All of them, in the order of the titration.
    endpoints, endpoint_us : tuples of float
        Volumes [mL] of those with a jump inside the curve (of the first, where none has), and standard
        uncertainties.
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
    curve: Curve,
    *,
    system: System,
    guess: float | None = None,
    settings: FitSettings | None = None,
    **changes: Any,
) -> Fit:
    """Fit a system to a curve.

    Parameters
    ----------
    curve : Curve
    system : System
    guess : float, optional
        A first equivalence volume [mL]; the steepest place of the curve otherwise.
    settings : FitSettings, optional
    **changes
        Single settings by name: noise, volume_sd, nuisance, priors, robust, centres.

    Raises
    ------
    ValueError
        When the quantity does not fit the kind of system, a parameter cannot be known from the curve, or the
        fit does not converge.
    """
    chosen, steps = replace(settings or FitSettings(), **changes), equivalence_steps(system)
    found = run_fit([curve], system=system, steps=steps, guess=guess, settings=chosen, tolerance=TOLERANCE)
    if found.problems[0]:
        raise ValueError(found.problems[0])
    problem, optimum, summary = found.problem, found.optimum, found.summary
    fitted, readings = _fitted(curve, found)
    points = tuple(
        Equivalence(step.analyte, step.proton, float(volume), float(u), float(reading), step.is_jump)
        for step, volume, u, reading in zip(steps, summary.volumes[0], summary.volume_us[0], readings, strict=True)
    )
    ends = _endpoints(points, last=float(curve.volume[-1]))
    us = np.sqrt(np.maximum(np.diag(summary.covariance[0]), 0.0))
    return Fit(
        curve=curve, system=system, settings=chosen, names=problem.names,
        values=tuple(summary.theta[0].tolist()), standard_uncertainties=tuple(us.tolist()),
        equivalences=points,
        endpoints=tuple(point.volume for point in ends),
        endpoint_us=tuple(point.standard_uncertainty for point in ends),
        degrees_of_freedom=float(summary.degrees_of_freedom[0]),
        noise=float(optimum.x_sd[0, 0] * abs(problem.unit)),
        chi2_nu=float(summary.chi2_nu[0]), lag_1=float(summary.lag_1[0]), runs_z=float(summary.runs_z[0]),
        fitted=fitted, residuals=-np.sign(problem.unit) * optimum.z[0],
        flags=_flags(found, endpoint=ends[0].volume),
    )  # fmt: skip


def _fitted(curve: Curve, found: Outcome) -> tuple[FloatArray, FloatArray]:
    """Readings of the model at the recorded volumes, and at the equivalence points."""
    problem, optimum = found.problem, found.optimum
    chemistry, theta, size = problem.chemistry, optimum.theta, curve.volume.size
    ends = np.maximum(found.summary.volumes[0], 1e-6)
    volume = np.concatenate([curve.volume, ends])[None, :]
    x = np.concatenate([optimum.x[0], np.interp(ends, curve.volume, optimum.x[0])])[None, :]
    for _ in range(2):
        medium = chemistry.medium(x, volume, theta)
        x = solved(chemistry, volume, theta, medium, start=x)
        if medium is None:
            break
    slope = problem.unit
    if "slope" in problem.groups:
        slope *= 1 + float(theta[0, problem.groups.index("slope")])
    fitted = curve.reading - (problem.observed.electrode.read(theta, optimum.behind)[0][0] - x[0, :size]) * slope
    return fitted, slope * x[0, size:] + np.interp(ends, curve.volume, fitted - slope * x[0, :size])


def _flags(found: Outcome, *, endpoint: float) -> tuple[str, ...]:
    problem, summary = found.problem, found.summary
    noise = found.optimum.x_sd[0, 0] / problem.observed.x_sd[0, 0]
    return flags_of_fit(
        names=problem.names, groups=problem.groups, values=summary.theta[0], centres=problem.centre[0],
        priors=problem.priors, chi2_nu=float(summary.chi2_nu[0] * noise**2), lag_1=float(summary.lag_1[0]),
        runs_z=float(summary.runs_z[0]), degrees_of_freedom=float(summary.degrees_of_freedom[0]),
        points=float(problem.points[0]), is_noise_known=problem.is_noise_known,
        last_volume=float(problem.observed.volume[0, -1]), endpoint=endpoint,
    )  # fmt: skip


def _endpoints(points: tuple[Equivalence, ...], *, last: float) -> tuple[Equivalence, ...]:
    jumps = tuple(point for point in points if point.is_jump) or points[-1:]
    return tuple(point for point in jumps if point.volume <= last) or jumps[:1]
