"""Run rules of control charts, each named by what it says, each switchable.

References
----------
ISO 7870-2:2013, annex B; Western Electric, Statistical Quality Control Handbook (1956); Nelson, J. Qual. Technol. 16
(1984) 237-239.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
BoolArray = npt.NDArray[np.bool_]
Rule = Callable[[FloatArray], BoolArray]


def _ending(flags: BoolArray, count: int, within: int) -> BoolArray:
    """True where a window of ``within`` points that ends here, on a flagged point, holds ``count`` flagged ones."""
    total = np.concatenate([[0], np.cumsum(flags)])
    ends = np.arange(1, flags.size + 1)
    held = total[ends] - total[np.maximum(ends - within, 0)]
    return np.asarray((held >= count) & flags & (ends >= count))


def beyond_three(z: FloatArray) -> BoolArray:
    return np.asarray(np.abs(z) > 3)


def nine_on_one_side(z: FloatArray) -> BoolArray:
    return _ending(z > 0, 9, 9) | _ending(z < 0, 9, 9)


def six_trending(z: FloatArray) -> BoolArray:
    steps = np.diff(z, prepend=np.nan)
    return _ending(steps > 0, 5, 5) | _ending(steps < 0, 5, 5)


def fourteen_alternating(z: FloatArray) -> BoolArray:
    steps = np.diff(z, prepend=np.nan)
    turns = np.concatenate([[False, False], steps[2:] * steps[1:-1] < 0])[: z.size]
    return _ending(turns, 12, 12)


def two_of_three_beyond_two(z: FloatArray) -> BoolArray:
    return _ending(z > 2, 2, 3) | _ending(z < -2, 2, 3)


def four_of_five_beyond_one(z: FloatArray) -> BoolArray:
    return _ending(z > 1, 4, 5) | _ending(z < -1, 4, 5)


def fifteen_within_one(z: FloatArray) -> BoolArray:
    return _ending(np.abs(z) < 1, 15, 15)


def eight_beyond_one(z: FloatArray) -> BoolArray:
    return _ending(np.abs(z) > 1, 8, 8)


RULES: dict[str, Rule] = {
    "one point beyond three sigma": beyond_three,
    "nine points in a row on one side": nine_on_one_side,
    "six points in a row rising or falling": six_trending,
    "two of three beyond two sigma": two_of_three_beyond_two,
    "four of five beyond one sigma": four_of_five_beyond_one,
    "fourteen points alternating": fourteen_alternating,
    "fifteen points within one sigma": fifteen_within_one,
    "eight points beyond one sigma": eight_beyond_one,
}


def signals(
    values: Sequence[float] | FloatArray, *, centre: float, sigma: float, rules: Iterable[str]
) -> dict[str, list[int]]:
    """The places of the points at which each rule is broken.

    Parameters
    ----------
    values : sequence of float
        Points of the chart, in order.
    centre, sigma : float
        Centre line and standard deviation of the limits in use.
    rules : iterable of str
        Names from ``RULES``.

    Raises
    ------
    ValueError
        When a rule is not known, sigma is not above zero, or a value is not finite.
    """
    if not sigma > 0:
        raise ValueError(f"Sigma is {sigma}; a number above 0 is expected.")
    z = (np.asarray(values, dtype=float) - centre) / sigma
    if not np.all(np.isfinite(z)):
        raise ValueError("A value of the chart is not a finite number.")
    found: dict[str, list[int]] = {}
    for name in rules:
        if name not in RULES:
            raise ValueError(f"Rule is {name!r}; expected one of {'; '.join(RULES)}.")
        broken = np.flatnonzero(RULES[name](z)) if z.size else np.array([], dtype=int)
        if broken.size:
            found[name] = [int(place) for place in broken]
    return found
