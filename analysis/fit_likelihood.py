"""Maximum likelihood of a balance with errors in readings and volumes, for many curves at once.

Each point has its own true (x, V), kept on the balance F(x, V; theta) = 0. Linearized about the present
estimate, the misclosure w = F + F_x (x_obs - x) + F_V (V_obs - V) has the variance Q = (F_x s_x)^2 + (F_V
s_V)^2; theta moves by one weighted normal-equation solve, and each (x, V) is put where the observation
projects onto the new balance. At a steep jump that is near the reading, in a buffer near the volume: no pH
is ever solved for, and nothing gets stuck. The first step has (x, V) at what was observed: the fit in the
volume domain, linear in the amounts.

References
----------
Britt and Luecke, Technometrics 15 (1973) 233-247: the estimation of parameters in implicit models.
Huber, Ann. Math. Statist. 35 (1964) 73-101: weights min(1, k s/|r|).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.balance import Balance, Chemistry
from analysis.electrode import Electrode

FloatArray = npt.NDArray[np.float64]
SETTLED, NEAR = (
    10,
    0.02,
)  # steps, and standard uncertainties, after which weights and scatter stay as they are
PATIENT = 20  # full steps, after which half steps end what goes to and fro
QUICK, CAREFUL = (1, 1), (2, 4)  # steps in the volume domain; steps before Huber's weights
HUBER = 1.5
HUBER_SHARE = 0.8663855974622838  # P(|z| < 1.5), which is also E[z psi(z)]
MEDIUM_UNTIL = 4
WIDEST, FARTHEST = 1.5, 10.0  # decimal units, and standard deviations of volume, a point is moved at most


@dataclass(frozen=True, slots=True)
class Observed:
    """Curves by points: volumes [mL], the electrode, standard deviations, and 1 for a point, 0 for
    padding.
    """

    volume: FloatArray
    electrode: Electrode
    x_sd: FloatArray
    volume_sd: float
    mask: FloatArray | None

    def take(self, rows: npt.NDArray[np.intp]) -> Observed:
        """Some of the curves."""
        mask = None if self.mask is None else self.mask[rows]
        return Observed(self.volume[rows], self.electrode.take(rows), self.x_sd[rows], self.volume_sd, mask)


@dataclass(frozen=True, slots=True)
class Optimum:
    """Where the likelihood is largest: parameters, their information matrix, standardized residuals and
    weights.
    """

    theta: FloatArray
    information: FloatArray
    z: FloatArray
    weight: FloatArray
    x: FloatArray
    decrement: FloatArray
    x_sd: FloatArray
    behind: FloatArray


def maximise(
    chemistry: Chemistry, observed: Observed, *, start: FloatArray, centre: FloatArray, precision: FloatArray,
    tolerance: float, most: int, robust: bool, least_sd: float | None,
    pace: tuple[int, int] = CAREFUL,
) -> Optimum:  # fmt: skip
    """Gauss-Newton until the step is below ``tolerance`` standard uncertainties in every curve, or ``most``
    steps.

    Parameters
    ----------
    start, centre : array
        Parameters to start from, and the centres of their priors; curves by parameters.
    precision : array
        1/variance of the prior of each parameter; 0 without.
    least_sd : float, optional
        Least standard deviation of x; given where the scatter of the readings is to be told by the
        residuals, within a factor of two of what was observed.
    pace : tuple of int
        Steps in the volume domain, and steps before single bad readings are given less weight.
    """
    theta, volume, medium, x_sd, weight = start, observed.volume, None, observed.x_sd, None
    (held, plain), is_settled, reading = (
        pace,
        False,
        observed.electrode.read(theta, observed.electrode.behind),
    )
    x, behind = np.clip(reading[0], *chemistry.limits), observed.electrode.behind
    for step in range(most):
        if step < MEDIUM_UNTIL:
            medium = chemistry.medium(x, volume, theta)
        rows, slopes, root = _rows(chemistry.balance(x, volume, theta, medium), observed, reading, x, volume, x_sd)
        if robust and step >= plain and not is_settled:
            weight = _weights(rows[:, -1], observed.mask)
        information, gradient = _normal(rows, weight, theta - centre, precision)
        change = -_solve(information, gradient)
        decrement = np.sqrt(np.abs((gradient * change).sum(axis=1)))
        theta = _bounded(theta + (0.5 if step > PATIENT else 1.0) * change, chemistry, observed, precision)
        z = np.matmul(change[:, None, :], rows[:, :-1])[:, 0] + rows[:, -1]
        reading = observed.electrode.read(theta, behind)
        x, volume = _projected(observed, reading[0], z, slopes, root, x_sd, held=step + 1 < held)
        np.clip(x, *chemistry.limits, out=x)
        behind = observed.electrode.steps(theta, reading[0] - x)
        if least_sd is not None and step >= plain and not is_settled:
            factor = _scale(z, weight, information, precision, observed.mask)
            x_sd = np.clip(x_sd * factor, np.maximum(0.5 * observed.x_sd, least_sd), 2.0 * observed.x_sd)
        largest = float(decrement.max())
        if step > plain and largest < tolerance:
            break
        is_settled = is_settled or (step >= SETTLED and largest < NEAR)
    weight = weight if weight is not None else _ones(z, observed.mask)
    return Optimum(theta, information, z, weight, x, decrement, x_sd, behind)


def _bounded(theta: FloatArray, chemistry: Chemistry, observed: Observed, precision: FloatArray) -> FloatArray:
    """Amounts between nothing and 20 times what was delivered; the rest within 15 deviations of their
    priors.
    """
    count = chemistry.count
    np.clip(theta[:, :count], 1e-9, 20.0 * observed.volume[:, -1:], out=theta[:, :count])
    reach = np.where(precision > 0, 15.0 / np.sqrt(np.where(precision > 0, precision, 1.0)), 1e3)[count:]
    np.clip(theta[:, count:], -reach, reach, out=theta[:, count:])
    return theta


def _rows(
    found: Balance, observed: Observed, reading: tuple[FloatArray, list[FloatArray]], x: FloatArray,
    volume: FloatArray, x_sd: FloatArray,
) -> tuple[FloatArray, tuple[FloatArray, FloatArray], FloatArray]:  # fmt: skip
    """Design and misclosure over their standard deviation; (F_x, F_V); and 1/sqrt(Q)."""
    seen, columns = reading
    by_x, by_volume = found.by_x, found.by_volume
    spread, shift = by_x * x_sd, by_volume * observed.volume_sd
    spread *= spread
    shift *= shift
    spread += shift
    root = 1.0 / np.sqrt(spread)
    if observed.mask is not None:
        root *= observed.mask
    w = found.value + by_x * (seen - x) + by_volume * (observed.volume - volume)
    rows = np.empty((x.shape[0], len(found.columns) + len(columns) + 1, x.shape[1]))
    for k, column in enumerate(found.columns):
        np.multiply(column, root, out=rows[:, k])
    scaled = by_x * root
    for k, column in enumerate(columns, start=len(found.columns)):
        np.multiply(column, scaled, out=rows[:, k])
    np.multiply(w, root, out=rows[:, -1])
    return rows, (by_x, by_volume), root


def _weights(z: FloatArray, mask: FloatArray | None) -> FloatArray:
    """Huber's weights about a scale that gross errors do not move."""
    size = np.abs(z)
    points = z.shape[1] if mask is None else mask.sum(axis=1)
    scale = np.minimum(size, 4.0).sum(axis=1) / (points * 0.79788)
    limit = HUBER * np.maximum(scale, 1.0)[:, None]
    return np.asarray(limit / np.maximum(size, limit))


def _scale(
    z: FloatArray,
    weight: FloatArray | None,
    information: FloatArray,
    precision: FloatArray,
    mask: FloatArray | None,
) -> FloatArray:
    """By how much the residuals are wider than was thought."""
    points = float(z.shape[1]) if mask is None else mask.sum(axis=1)
    dof = degrees_of_freedom(information, precision, points)
    squares = (z * z).sum(axis=1) if weight is None else (weight * z * z).sum(axis=1) / HUBER_SHARE
    return np.asarray(np.sqrt(squares / dof)[:, None])


def degrees_of_freedom(information: FloatArray, precision: FloatArray, points: FloatArray | float) -> FloatArray:
    """Points less the parameters the curve had to tell: a parameter known by its prior counts for nothing."""
    known = np.clip(np.einsum("bii->bi", inverse(information)) * precision, 0.0, 1.0)
    return np.asarray(np.maximum(points - (1.0 - known).sum(axis=1), 1.0))


def inverse(information: FloatArray) -> FloatArray:
    """The covariance, worked out with each parameter in its own scale."""
    scale = np.sqrt(np.einsum("bii->bi", information))
    scale = np.where(scale > 0, scale, 1.0)
    unit = information / (scale[:, :, None] * scale[:, None, :])
    unit[:, np.arange(scale.shape[1]), np.arange(scale.shape[1])] += 1e-15
    return np.asarray(np.linalg.inv(unit) / (scale[:, :, None] * scale[:, None, :]))


def _ones(z: FloatArray, mask: FloatArray | None) -> FloatArray:
    return np.ones_like(z) if mask is None else mask


def _normal(
    rows: FloatArray, weight: FloatArray | None, away: FloatArray, precision: FloatArray
) -> tuple[FloatArray, FloatArray]:
    weighted = rows if weight is None else rows * weight[:, None, :]
    whole = np.matmul(weighted, rows.transpose(0, 2, 1))
    count = precision.size
    information = np.ascontiguousarray(whole[:, :count, :count])
    information[:, np.arange(count), np.arange(count)] += precision
    return information, whole[:, :count, -1] + precision * away


def _solve(information: FloatArray, gradient: FloatArray) -> FloatArray:
    """The step, each parameter in its own scale; a parameter the curve says nothing of stays where it is."""
    scale = np.sqrt(np.einsum("bii->bi", information))
    scale = np.where(scale > 0, scale, 1.0)
    unit = information / (scale[:, :, None] * scale[:, None, :])
    unit[:, np.arange(scale.shape[1]), np.arange(scale.shape[1])] += 1e-13
    return np.asarray(np.linalg.solve(unit, (gradient / scale)[:, :, None])[:, :, 0] / scale)


def _projected(
    observed: Observed, seen: FloatArray, z: FloatArray, slopes: tuple[FloatArray, FloatArray],
    root: FloatArray,
    x_sd: FloatArray, *, held: bool,
) -> tuple[FloatArray, FloatArray]:  # fmt: skip
    """Where each observation falls on the balance."""
    if held:
        return seen.copy(), observed.volume
    pull = z * root
    away = slopes[0] * pull * (x_sd * x_sd)
    np.clip(away, -WIDEST, WIDEST, out=away)
    behind = slopes[1] * pull * observed.volume_sd**2
    np.clip(behind, -FARTHEST * observed.volume_sd, FARTHEST * observed.volume_sd, out=behind)
    return seen - away, np.maximum(observed.volume - behind, 0.0)
