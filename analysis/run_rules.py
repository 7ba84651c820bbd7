"""Run rules of control charts, each named by what it says, each switchable.

A point exactly on the centre line lies on neither side, and a point that repeats the one before neither rises
nor falls. A rule of the kind "two of three" is broken at a point that is itself one of the two.

References
----------
ISO 7870-2:2013, annex B; Western Electric, Statistical Quality Control Handbook (1956); Nelson, J. Qual.
Technol. 16 (1984) 237-239.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from functools import partial

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
BoolArray = npt.NDArray[np.bool_]
Rule = Callable[[FloatArray], BoolArray]
REACH = 15  # points that the longest rule looks at


def in_a_row(flags: BoolArray, *, count: int) -> BoolArray:
    """True where at least ``count`` flagged points in a row end; windows are doubled to save passes."""
    run, length = flags.copy(), 1
    while length < count:
        step = min(length, count - length)
        shifted = np.zeros_like(run)
        shifted[step:] = run[:-step]
        run &= shifted
        length += step
    return run


def out_of(flags: BoolArray, *, count: int, within: int) -> BoolArray:
    """True at a flagged point that ends a window of at most ``within`` points with ``count`` flagged ones."""
    held = flags.astype(np.uint8)
    for back in range(1, within):
        held[back:] += flags[:-back]
    return np.asarray((held >= count) & flags)


def beyond(z: FloatArray, *, sigmas: float = 3.0) -> BoolArray:
    """One point beyond so many sigma."""
    return np.asarray(np.abs(z) > sigmas)


def on_one_side(z: FloatArray, *, count: int) -> BoolArray:
    """So many points in a row on one side of the centre line."""
    return in_a_row(z > 0, count=count) | in_a_row(z < 0, count=count)


def trending(z: FloatArray, *, count: int) -> BoolArray:
    """So many points in a row, each above the one before, or each below."""
    rises, falls = _steps(z)
    return in_a_row(rises, count=count - 1) | in_a_row(falls, count=count - 1)


def alternating(z: FloatArray, *, count: int) -> BoolArray:
    """So many points in a row going up and down in turn."""
    rises, falls = _steps(z)
    turns = np.zeros(z.size, dtype=bool)
    turns[1:] = (rises[1:] & falls[:-1]) | (falls[1:] & rises[:-1])
    return in_a_row(turns, count=count - 2)


def some_beyond(z: FloatArray, *, count: int, within: int, sigmas: float) -> BoolArray:
    """So many of so many points in a row beyond so many sigma, on the same side."""
    return out_of(z > sigmas, count=count, within=within) | out_of(z < -sigmas, count=count, within=within)


def hugging(z: FloatArray, *, count: int) -> BoolArray:
    """So many points in a row within one sigma of the centre line."""
    return in_a_row(np.abs(z) < 1, count=count)


def avoiding(z: FloatArray, *, count: int) -> BoolArray:
    """So many points in a row beyond one sigma, on either side."""
    return in_a_row(np.abs(z) > 1, count=count)


RULES: dict[str, Rule] = {
    "one point beyond three sigma": beyond,
    "nine points in a row on one side": partial(on_one_side, count=9),
    "six points in a row rising or falling": partial(trending, count=6),
    "two of three beyond two sigma": partial(some_beyond, count=2, within=3, sigmas=2.0),
    "four of five beyond one sigma": partial(some_beyond, count=4, within=5, sigmas=1.0),
    "fourteen points alternating": partial(alternating, count=14),
    "fifteen points within one sigma": partial(hugging, count=15),
    "eight points beyond one sigma": partial(avoiding, count=8),
}
# The same ideas with the counts of other handbooks: a laboratory chooses between them.
OTHER_RULES: dict[str, Rule] = {
    "one point beyond two sigma": partial(beyond, sigmas=2.0),
    "seven points in a row on one side": partial(on_one_side, count=7),
    "eight points in a row on one side": partial(on_one_side, count=8),
    "seven points in a row rising or falling": partial(trending, count=7),
}


def signals(
    values: Sequence[float] | FloatArray, *, centre: float, sigma: float, rules: Iterable[str]
) -> dict[str, list[int]]:
    """The places of the points at which each rule is broken; rules that none breaks are left out.

    Parameters
    ----------
    values : sequence of float
        Points of the chart, in order.
    centre, sigma : float
        Centre line and standard deviation of the limits in use.
    rules : iterable of str
        Names from ``RULES`` or ``OTHER_RULES``.

    Raises
    ------
    ValueError
        When a rule is not known, sigma is not above zero, or a value is not finite.
    """
    broken = {name: np.flatnonzero(flags) for name, flags in flags_of(values, centre, sigma, rules).items()}
    return {name: places.tolist() for name, places in broken.items() if places.size}


def flags_of(
    values: Sequence[float] | FloatArray, centre: float, sigma: float, rules: Iterable[str]
) -> dict[str, BoolArray]:
    """For each rule one truth value per point; for long series, where lists of places would be large."""
    z = _standardized(values, centre=centre, sigma=sigma)
    return {name: _rule(name)(z) if z.size else np.zeros(0, dtype=bool) for name in rules}


def signals_at_last(tail: Sequence[float], *, centre: float, sigma: float, rules: Iterable[str]) -> tuple[str, ...]:
    """The rules that the newest point breaks, from the last points alone: the same as of the whole series.

    Parameters
    ----------
    tail : sequence of float
        The newest point and the points before it, as many as there are, ``REACH`` at most are looked at.
    """
    flags = flags_of(tail[-REACH:], centre, sigma, rules)
    return tuple(name for name, broken in flags.items() if broken.size and broken[-1])


def _standardized(values: Sequence[float] | FloatArray, *, centre: float, sigma: float) -> FloatArray:
    if not (sigma > 0 and np.isfinite(sigma)):
        raise ValueError(f"Sigma is {sigma}; a finite number above 0 is expected.")
    if not np.isfinite(centre):
        raise ValueError(f"Centre is {centre}; a finite number is expected.")
    given = np.asarray(values, dtype=float)
    wrong = np.flatnonzero(~np.isfinite(given))
    if wrong.size:
        raise ValueError(f"Value {wrong[0] + 1} of the chart is {given[wrong[0]]}; a finite number is expected.")
    return np.asarray((given - centre) / sigma)


def _rule(name: str) -> Rule:
    found = RULES.get(name) or OTHER_RULES.get(name)
    if found is None:
        raise ValueError(f"Rule is {name!r}; expected one of {'; '.join([*RULES, *OTHER_RULES])}.")
    return found


def _steps(z: FloatArray) -> tuple[BoolArray, BoolArray]:
    rises, falls = np.zeros(z.size, dtype=bool), np.zeros(z.size, dtype=bool)
    rises[1:], falls[1:] = z[1:] > z[:-1], z[1:] < z[:-1]
    return rises, falls
