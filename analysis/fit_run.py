"""One run of the fit over a piece of curves: layout, maximum, uncertainties, and a sentence where it
failed.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve
from analysis.equivalence import Step
from analysis.fit_likelihood import CAREFUL, QUICK, Optimum, maximise
from analysis.fit_problem import FitSettings, Problem, prepare
from analysis.fit_summary import SMALLEST, Summary, summarise, unknown_parameter
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
FARTHEST_PRIOR = 14.0  # deviations of a prior; what ends there is at the edge of what is tried
MOST, MOST_ALONE = 8, 60  # steps for a piece, and for the curves of it that need more


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a run was given, where it ended, what that says, and for each curve why there is no result."""

    problem: Problem
    optimum: Optimum
    summary: Summary
    problems: list[str]


def run_fit(
    curves: Sequence[Curve], *, system: System, steps: tuple[Step, ...], guess: float | None,
    settings: FitSettings, tolerance: float,
) -> Outcome:  # fmt: skip
    """Fit a piece of curves."""
    problem = prepare(curves, system=system, guess=guess, settings=settings)
    optimum = _optimum(problem, tolerance=tolerance, robust=settings.robust)
    summary = summarise(problem, optimum, steps=steps, robust=settings.robust)
    return Outcome(problem, optimum, summary, _problems(problem, optimum, summary, tolerance=tolerance))


def _optimum(problem: Problem, *, tolerance: float, robust: bool) -> Optimum:
    """All curves together for a few steps; those that are not done yet then go on among themselves."""
    precision, alone = problem.precision, len(problem.points) == 1
    is_plain = problem.system.kind == "acid_base" and problem.chemistry.count == 1
    pace = QUICK if is_plain and not alone else CAREFUL
    least_sd = None if problem.is_noise_known else problem.least_sd

    def run(start: FloatArray, rows: npt.NDArray[np.intp] | None, most: int) -> Optimum:
        pick = slice(None) if rows is None else rows
        return maximise(
            problem.chemistry, problem.observed if rows is None else problem.observed.take(rows), start=start,
            centre=problem.centre[pick] * (precision > 0), precision=precision, tolerance=tolerance,
            most=most, robust=robust, least_sd=least_sd, pace=pace,
        )  # fmt: skip

    found = run(problem.start, None, MOST_ALONE if alone else MOST)
    late = np.flatnonzero(~(found.decrement < tolerance))
    if late.size:
        usable = np.isfinite(found.theta[late]).all(axis=1, keepdims=True)
        again = run(np.where(usable, found.theta[late], problem.start[late]), late, MOST_ALONE)
        for name in ("theta", "information", "z", "weight", "x", "decrement", "x_sd", "behind"):
            getattr(found, name)[late] = getattr(again, name)
    return found


def _problems(problem: Problem, optimum: Optimum, summary: Summary, *, tolerance: float) -> list[str]:
    """One sentence a curve, empty where all is well."""
    found = [""] * len(problem.points)
    late = ~(optimum.decrement < max(tolerance, 1e-4))
    lost = ~np.isfinite(summary.volume_us).all(axis=1) | ~(summary.volumes[:, -1] > 0)
    far = (np.abs(optimum.theta - problem.centre) * np.sqrt(problem.precision) > FARTHEST_PRIOR).any(axis=1)
    singular = summary.smallest < SMALLEST
    for row in np.flatnonzero(problem.is_reversed | singular | late | lost | far):
        if problem.is_reversed[row]:
            found[row] = _reversed(problem.system.titrant)
        elif singular[row] and np.isfinite(optimum.information[row]).all():
            name = unknown_parameter(optimum.information[row], problem.names)
            found[row] = f"The curve does not tell {name}: it cannot be known from these points."
        else:
            found[row] = "The model does not converge on this curve. Look at its chemistry and at the curve."
    return found


def _reversed(titrant: str) -> str:
    shown = "a base titrated with an acid" if titrant == "base" else "an acid titrated with a base"
    return f"The curve is that of {shown}; the titrant is given as {titrant}."
