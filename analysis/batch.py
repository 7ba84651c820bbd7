"""The fit of one system to many curves at once, in pieces that stay in the processor's cache."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.balance import solved
from analysis.curve import Curve
from analysis.equivalence import Step, equivalence_steps
from analysis.fit_flags import flags_of_fit
from analysis.fit_likelihood import Optimum, maximise
from analysis.fit_problem import FitSettings, Problem, prepare
from analysis.fit_summary import SMALLEST, Summary, summarise, unknown_parameter
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
PIECE = 128  # curves: their arrays stay in the second-level cache
MOST, MOST_ALONE = 8, 60  # steps for a piece, and for the curves of it that need more


@dataclass(frozen=True, slots=True)
class BatchFit:
    """Fits of one system to many curves; the first index of each array is the curve.

    Attributes
    ----------
    curves, system, settings
        As given.
    steps : tuple of Step
        The equivalence points, in the order of the titration.
    volumes, volume_us : array
        Equivalence volumes and standard uncertainties [mL]; not a number where ``problems`` says why.
    names, theta, parameter_us
        Parameters, as in ``Fit``.
    degrees_of_freedom, noise, chi2_nu, lag_1, runs_z : array
        As in ``Fit``.
    problems : tuple of str
        Empty where the fit is good for use, else why there is none.
    """

    curves: Sequence[Curve]
    system: System
    settings: FitSettings
    steps: tuple[Step, ...]
    volumes: FloatArray
    volume_us: FloatArray
    names: tuple[str, ...]
    theta: FloatArray
    parameter_us: FloatArray
    degrees_of_freedom: FloatArray
    noise: FloatArray
    chi2_nu: FloatArray
    lag_1: FloatArray
    runs_z: FloatArray
    problems: tuple[str, ...]
    pieces: tuple[tuple[Problem, Optimum], ...]

    def residuals(self, curve: int) -> FloatArray:
        """Residuals of one curve, each over its own standard deviation; positive where the reading is too high."""
        problem, optimum, row = self._piece(curve)
        size = self.curves[curve].volume.size
        return np.asarray(-np.sign(problem.unit) * optimum.z[row, :size])

    def fitted(self, curve: int) -> FloatArray:
        """Readings of the model of one curve at its volumes."""
        problem, optimum, row = self._piece(curve)
        volume = self.curves[curve].volume
        x = self._solved(problem, optimum, row, volume, start=optimum.x[row : row + 1, : volume.size])
        seen = problem.observed.electrode.take(np.array([row])).read(optimum.theta[row : row + 1])[0][:, : volume.size]
        slope = 1 + self._value(problem, optimum, row, "slope")
        return np.asarray(self.curves[curve].reading - (seen - x)[0] * slope * problem.unit)

    def readings(self, curve: int) -> FloatArray:
        """Readings of the model of one curve at its equivalence points."""
        fitted, own = self.fitted(curve), self.curves[curve].volume
        problem, optimum, row = self._piece(curve)
        at = np.clip(self.volumes[curve], 1e-6, None)
        x = self._solved(problem, optimum, row, at, start=None)[0]
        near = self._solved(problem, optimum, row, own, start=None)[0]
        slope = (1 + self._value(problem, optimum, row, "slope")) * problem.unit
        shift = np.interp(at, own, fitted - slope * near)
        return np.asarray(slope * x + shift)

    def flags(self, curve: int) -> tuple[str, ...]:
        """What the analyst is told about one curve."""
        problem, _, row = self._piece(curve)
        jumps = [k for k, step in enumerate(self.steps) if step.is_jump] or [len(self.steps) - 1]
        return flags_of_fit(
            names=self.names, groups=problem.groups, values=self.theta[curve], priors=problem.priors,
            chi2_nu=float(self.chi2_nu[curve] * (self.noise[curve] / problem.noise[row]) ** 2), lag_1=float(self.lag_1[curve]), runs_z=float(self.runs_z[curve]),
            degrees_of_freedom=float(self.degrees_of_freedom[curve]), points=float(problem.points[row]),
            is_noise_known=problem.is_noise_known, last_volume=float(self.curves[curve].volume[-1]),
            endpoint=float(self.volumes[curve, jumps[0]]),
        )  # fmt: skip

    def _piece(self, curve: int) -> tuple[Problem, Optimum, int]:
        problem, optimum = self.pieces[curve // PIECE]
        return problem, optimum, curve % PIECE

    @staticmethod
    def _value(problem: Problem, optimum: Optimum, row: int, group: str) -> float:
        return float(optimum.theta[row, problem.groups.index(group)]) if group in problem.groups else 0.0

    @staticmethod
    def _solved(problem: Problem, optimum: Optimum, row: int, volume: FloatArray, *, start: FloatArray | None) -> FloatArray:
        chemistry, theta = problem.chemistry, optimum.theta[row : row + 1]
        x = solved(chemistry, volume[None, :], theta, None, start=start)
        for _ in range(4):
            medium = chemistry.medium(x, volume[None, :], theta)
            if medium is None:
                break
            x = solved(chemistry, volume[None, :], theta, medium, start=x)
        return x


def fit_equilibrium_batch(
    curves: Sequence[Curve], *, system: System, guess: float | None = None, settings: FitSettings | None = None,
    tolerance: float = 0.01,
) -> BatchFit:  # fmt: skip
    """Fit one system to many curves.

    Parameters
    ----------
    curves : sequence of Curve
        Of one quantity; they need not have the same volumes or lengths.
    system : System
    guess : float, optional
        A first equivalence volume [mL] for all; the steepest place of each curve otherwise.
    settings : FitSettings, optional
    tolerance : float
        A curve is done when its last step is below this many standard uncertainties.

    Raises
    ------
    ValueError
        When the input does not fit the system. A curve that cannot be fitted has its sentence in ``problems``.
    """
    chosen = settings or FitSettings()
    steps = equivalence_steps(system)
    pieces, summaries, problems = [], [], []
    for first in range(0, max(len(curves), 1), PIECE):
        problem = prepare(curves[first : first + PIECE], system=system, guess=guess, settings=chosen)
        optimum = _optimum(problem, tolerance=tolerance, robust=chosen.robust)
        summary = summarise(problem, optimum, steps=steps, robust=chosen.robust)
        problems += _problems(problem, optimum, summary, tolerance=tolerance)
        pieces.append((problem, optimum))
        summaries.append(summary)
    return _collected(curves, system, chosen, steps, pieces, summaries, problems)


def _optimum(problem: Problem, *, tolerance: float, robust: bool) -> Optimum:
    """All curves together for a few steps; those that are not done yet then go on among themselves."""
    precision = problem.precision
    least_sd = None if problem.is_noise_known else problem.least_sd

    def run(rows: npt.NDArray[np.intp] | None, most: int) -> Optimum:
        pick = slice(None) if rows is None else rows
        return maximise(
            problem.chemistry, problem.observed if rows is None else problem.observed.take(rows),
            start=problem.start[pick], centre=problem.centre[pick] * (precision > 0), precision=precision,
            tolerance=tolerance, most=most, robust=robust, least_sd=least_sd,
        )  # fmt: skip

    found = run(None, MOST)
    late = np.flatnonzero(~(found.decrement < tolerance))
    if late.size:
        again = run(late, MOST_ALONE)
        for name in ("theta", "information", "z", "weight", "x", "decrement", "x_sd"):
            getattr(found, name)[late] = getattr(again, name)
    return found


def _problems(problem: Problem, optimum: Optimum, summary: Summary, *, tolerance: float) -> list[str]:
    """One sentence a curve, empty where all is well."""
    found = [""] * len(problem.points)
    singular, late = summary.smallest < SMALLEST, ~(optimum.decrement < max(tolerance, 1e-4))
    lost = ~np.isfinite(summary.volume_us).all(axis=1) | ~np.isfinite(optimum.theta).all(axis=1)
    for row in np.flatnonzero(singular | late | lost):
        if singular[row] and np.isfinite(optimum.information[row]).all():
            name = unknown_parameter(optimum.information[row], problem.names)
            found[row] = f"The curve does not tell {name}: it cannot be known from these points."
        else:
            found[row] = "The model does not converge on this curve. Look at its chemistry and at the curve."
    return found


def _collected(
    curves: Sequence[Curve], system: System, settings: FitSettings, steps: tuple[Step, ...],
    pieces: list[tuple[Problem, Optimum]], summaries: list[Summary], problems: list[str],
) -> BatchFit:  # fmt: skip
    def whole(name: str) -> FloatArray:
        return np.concatenate([getattr(summary, name) for summary in summaries])

    good = np.array([not text for text in problems])
    volumes, us = whole("volumes"), whole("volume_us")
    volumes[~good], us[~good] = np.nan, np.nan
    variances = np.concatenate([np.einsum("bii->bi", summary.covariance) for summary in summaries])
    return BatchFit(
        curves=curves, system=system, settings=settings, steps=steps, volumes=volumes, volume_us=us,
        names=pieces[0][0].names, theta=np.concatenate([optimum.theta for _, optimum in pieces]),
        parameter_us=np.sqrt(np.maximum(variances, 0.0)), degrees_of_freedom=whole("degrees_of_freedom"),
        noise=np.concatenate([optimum.x_sd[:, 0] * abs(problem.unit) for problem, optimum in pieces]), chi2_nu=whole("chi2_nu"),
        lag_1=whole("lag_1"), runs_z=whole("runs_z"), problems=tuple(problems), pieces=tuple(pieces),
    )  # fmt: skip
