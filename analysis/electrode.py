"""From what an electrode shows to the x it stands in: offset, slope, drift and the lag of its response.

x_obs = c + [x_lin - c - offset - drift (i/(P-1) - 1/2) + lag (x_lin,i - x_lin,i-1)] / (1 + slope)

x_lin is the reading in decimal units (pH as it is; mV over the Nernst slope), c where slope turns about (pH
7, or the middle of a curve in mV). A lag of l means that each reading has gone 1/(1 + l) of the way from the
one before.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.balance import Parameter, PriorOf

FloatArray = npt.NDArray[np.float64]
GROUPS = ("offset", "slope", "lag", "drift")
NAMES = {"offset": "electrode offset", "slope": "electrode slope", "lag": "response lag", "drift": "drift"}


@dataclass(frozen=True, slots=True)
class Electrode:
    """The electrode of a set of curves: readings in decimal units, and which parameters are fitted from
    ``first`` on.
    """

    linear: FloatArray
    centre: FloatArray
    first: int
    parameters: tuple[Parameter, ...]
    moments: FloatArray
    behind: FloatArray

    def take(self, rows: npt.NDArray[np.intp]) -> Electrode:
        """The electrode of some of the curves."""
        return Electrode(
            self.linear[rows],
            self.centre[rows],
            self.first,
            self.parameters,
            self.moments[rows],
            self.behind[rows],
        )

    @property
    def places(self) -> dict[str, int]:
        """The column of each parameter that is fitted."""
        return {item.group: self.first + k for k, item in enumerate(self.parameters)}

    def read(self, theta: FloatArray, behind: FloatArray) -> tuple[FloatArray, list[FloatArray]]:
        """x at each point for these parameters, and dx/d(parameter) in the order of the parameters.

        ``behind`` is the step of the reading from the point before, as ``steps`` gives it.
        """
        at = self.places
        away = self.linear - self.centre
        if "offset" in at:
            away = away - theta[:, at["offset"], None]
        if "drift" in at:
            away = away - theta[:, at["drift"], None] * self.moments
        if "lag" in at:
            away = away + theta[:, at["lag"], None] * behind
        turned = np.ones((away.shape[0], 1))
        if "slope" in at:
            turned = 1.0 / (1.0 + theta[:, at["slope"], None])
            away = away * turned
        return away + self.centre, [self._column(item.group, away, turned, behind) for item in self.parameters]

    def steps(self, theta: FloatArray, away: FloatArray) -> FloatArray:
        """The step of the reading from the point before, cleared of how far each point lies ``away`` from the
        model: a step of the scatter itself would pass for a lag.
        """
        at = self.places
        if "lag" not in at:
            return self.behind
        shown = self.linear - away * (1.0 + theta[:, at["slope"], None] if "slope" in at else 1.0)
        return _steps(shown)

    def _column(self, group: str, away: FloatArray, turned: FloatArray, behind: FloatArray) -> FloatArray:
        if group == "offset":
            return -turned
        if group == "slope":
            return -away * turned
        return behind * turned if group == "lag" else self.moments * -turned


def electrode(
    linear: FloatArray,
    *,
    points: FloatArray,
    prior: PriorOf,
    first: int,
    centre: FloatArray | float,
    free_offset: bool = False,
) -> Electrode:
    """The electrode for readings in decimal units, curves by points.

    Parameters
    ----------
    linear : array
    points : array
        Number of points of each curve; the rest of a row is padding.
    prior : PriorOf
    first : int
        Column of the first parameter.
    centre : array or float
    free_offset : bool
        Whether the offset has no prior: a standard potential nobody knows.
    """
    found = []
    for group in GROUPS:
        sd = prior(group)
        if group == "offset" and free_offset:
            found.append(Parameter("standard potential", group, np.inf))
        elif sd is not None:
            found.append(Parameter(NAMES[group], group, sd))
    behind = _steps(linear)
    moments = np.arange(linear.shape[1]) / (points[:, None] - 1.0) - 0.5
    centres = np.broadcast_to(np.asarray(centre, dtype=float), (linear.shape[0],))[:, None]
    return Electrode(linear, centres, first, tuple(found), moments, behind)


def _steps(shown: FloatArray) -> FloatArray:
    behind = np.zeros_like(shown)
    behind[:, 1:] = shown[:, 1:] - shown[:, :-1]
    return behind


def displayed(
    x: FloatArray, *, centre: float, offset: FloatArray, slope: FloatArray, drift: FloatArray, lag: FloatArray
) -> FloatArray:
    """What such an electrode shows [decimal units] for the true x, curves by points: the way back, to
    simulate.

    The parameters are columns, one value for all curves or one for each.
    """
    moments = np.arange(x.shape[1]) / max(x.shape[1] - 1, 1) - 0.5
    shown = centre + (1 + slope) * (x - centre) + offset + drift * moments
    for i in range(1, x.shape[1] if np.any(lag) else 0):
        shown[:, i] = (shown[:, i] + lag[:, 0] * shown[:, i - 1]) / (1 + lag[:, 0])
    return np.asarray(shown)
