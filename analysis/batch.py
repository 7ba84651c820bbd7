"""The fit of one system to many curves at once, in pieces that stay in the processor's cache."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve
from analysis.equilibrium import Fit, fit_equilibrium
from analysis.equivalence import Step, equivalence_steps
from analysis.fit_problem import FitSettings
from analysis.fit_run import Outcome, run_fit
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
ROWS = (
    "volumes", "volume_us", "theta", "parameter_us", "degrees_of_freedom", "noise", "chi2_nu", "lag_1",
    "runs_z",
)  # fmt: skip
PIECE = 256  # curves: their arrays stay in the second-level cache


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
    names : tuple of str
    theta, parameter_us : array
        Parameters and their standard uncertainties, as in ``Fit``.
    degrees_of_freedom, noise, chi2_nu, lag_1, runs_z : array
        As in ``Fit``.
    problems : tuple of str
        Empty where there is a result, else why there is none.
    """

    curves: Sequence[Curve]
    system: System
    settings: FitSettings
    steps: tuple[Step, ...]
    names: tuple[str, ...]
    problems: tuple[str, ...]
    volumes: FloatArray
    volume_us: FloatArray
    theta: FloatArray
    parameter_us: FloatArray
    degrees_of_freedom: FloatArray
    noise: FloatArray
    chi2_nu: FloatArray
    lag_1: FloatArray
    runs_z: FloatArray

    def fit(self, curve: int) -> Fit:
        """One of the curves with fitted readings, residuals and flags, fitted again to the last digit."""
        return fit_equilibrium(self.curves[curve], system=self.system, settings=self.settings)


def fit_equilibrium_batch(
    curves: Sequence[Curve], *, system: System, guess: float | None = None,
    settings: FitSettings | None = None, tolerance: float = 0.03,
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
        When the input does not fit the system. A curve that cannot be fitted has a sentence in ``problems``.
    """
    chosen, steps = settings or FitSettings(), equivalence_steps(system)
    rows: dict[str, list[FloatArray]] = {name: [] for name in ROWS}
    names: tuple[str, ...] = ()
    problems: list[str] = []
    for first in range(0, max(len(curves), 1), PIECE):
        outcome = run_fit(
            curves[first : first + PIECE],
            system=system,
            steps=steps,
            guess=guess,
            settings=chosen,
            tolerance=tolerance,
        )
        for name, values in _rows(outcome).items():
            rows[name].append(values)
        names = outcome.problem.names
        problems += outcome.problems
    return BatchFit(
        curves, system, chosen, steps, names, tuple(problems),
        **{name: np.concatenate(values) for name, values in rows.items()},
    )  # fmt: skip


def _rows(outcome: Outcome) -> dict[str, FloatArray]:
    """What is kept of a piece; no number where there is no result."""
    summary, failed = outcome.summary, np.array([bool(text) for text in outcome.problems])
    variances = np.einsum("bii->bi", summary.covariance)
    found = {
        "volumes": summary.volumes, "volume_us": summary.volume_us, "theta": summary.theta,
        "parameter_us": np.sqrt(np.maximum(variances, 0.0)),
        "degrees_of_freedom": summary.degrees_of_freedom,
        "noise": outcome.optimum.x_sd[:, 0] * abs(outcome.problem.unit), "chi2_nu": summary.chi2_nu,
        "lag_1": summary.lag_1, "runs_z": summary.runs_z,
    }  # fmt: skip
    if failed.any():
        for values in found.values():
            values[failed] = np.nan
    return found
