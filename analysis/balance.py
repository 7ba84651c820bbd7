"""What every model of a titration curve is to the fit: one balance F(x, V) = 0, and how it changes.

x is a decimal logarithm read by the electrode (pH, pAg, pM or electrode potential over the Nernst slope), V
the volume of titrant. F is in mL of titrant, falls with x, is linear in V and in the equivalents of each
analyte.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
import numpy.typing as npt

from analysis.activity import LN_10

FloatArray = npt.NDArray[np.float64]
PRIORS = {  # standard deviation about the stated value
    "offset": 0.06, "slope": 0.015, "pKa": 0.03, "sample carbonate": 0.0015, "titrant carbonate": 0.0015,
    "lag": 0.02, "drift": 0.012, "pKs": 0.10, "log_K": 0.20, "potential": 0.25,
}  # fmt: skip
NUISANCE = tuple(PRIORS)


@dataclass(frozen=True, slots=True)
class Parameter:
    """A parameter that is not an amount: its name, the group its prior belongs to, and the prior's
    deviation.
    """

    name: str
    group: str
    prior: float


@dataclass(frozen=True, slots=True)
class Balance:
    """F [mL] at each point, dF/dx, dF/dV and dF/d(parameter) in the order of the parameters."""

    value: FloatArray
    by_x: FloatArray
    by_volume: FloatArray
    columns: list[FloatArray]


class Chemistry(Protocol):
    """A model of curves: arrays are curves by points, parameters curves by parameters."""

    @property
    def count(self) -> int:
        """Number of analytes: the first parameters are their equivalents [mL of titrant]."""

    @property
    def parameters(self) -> tuple[Parameter, ...]:
        """Parameters after the amounts."""

    @property
    def limits(self) -> tuple[float, float]:
        """Between which x may lie."""

    def medium(self, x: FloatArray, volume: FloatArray, theta: FloatArray) -> Any:
        """Activity corrections at an approximate composition; None without them."""

    def balance(self, x: FloatArray, volume: FloatArray, theta: FloatArray, medium: Any) -> Balance:
        """F and its derivatives."""


def solved(
    chemistry: Chemistry,
    volume: FloatArray,
    theta: FloatArray,
    medium: Any,
    *,
    start: FloatArray | None = None,
) -> FloatArray:
    """The x at which the balance is kept, at each volume: damped Newton steps inside a bracket.

    The step asinh(L F / |F'|) / L, L = ln 10, cannot overshoot at the jump, where plain Newton does.
    """
    low, high = (np.full(volume.shape, limit) for limit in chemistry.limits)
    x = np.clip(np.full(volume.shape, 0.5 * (low + high)) if start is None else start, low, high)
    for _ in range(200):
        found = chemistry.balance(x, volume, theta, medium)
        low, high = np.where(found.value > 0, x, low), np.where(found.value < 0, x, high)
        step = np.arcsinh(LN_10 * found.value / np.maximum(-found.by_x, 1e-300)) / LN_10
        ahead = x + step
        ahead = np.where((ahead < low) | (ahead > high), 0.5 * (low + high), ahead)
        moved, x = np.abs(ahead - x), ahead
        if float(moved.max()) < 1e-11:
            break
    return x


def solved_with_activity(
    chemistry: Chemistry,
    volume: FloatArray,
    theta: FloatArray,
    *,
    start: FloatArray | None = None,
    passes: int = 12,
) -> FloatArray:
    """As ``solved``, the activity corrections being those of the solution found."""
    x = solved(chemistry, volume, theta, None, start=start)
    for _ in range(passes):
        medium = chemistry.medium(x, volume, theta)
        if medium is None:
            return x
        again = solved(chemistry, volume, theta, medium, start=x)
        moved, x = float(np.abs(again - x).max()), again
        if moved < 1e-11:
            break
    return x


PriorOf = Callable[[str], float | None]


def prior_of(nuisance: tuple[str, ...], priors: dict[str, float]) -> PriorOf:
    """Which groups are fitted, and with what prior deviation; None for those held at their stated value."""
    for name in (*nuisance, *priors):
        if name not in PRIORS:
            raise ValueError(f"Parameter group is {name!r}; expected some of {', '.join(PRIORS)}.")
    for name, value in priors.items():
        if not value > 0:
            raise ValueError(f"Prior of {name} is {value}; a standard deviation above 0 is expected.")
    return lambda group: priors.get(group, PRIORS[group]) if group in nuisance else None
