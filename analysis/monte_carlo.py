"""Propagation of distributions by Monte Carlo, as a check of the law of propagation.

References
----------
JCGM 101:2008, clauses 7 (procedure), 7.9 (adaptive) and 5.3.4 (shortest coverage interval).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.uncertainty import Input

FloatArray = npt.NDArray[np.float64]
BLOCK = 20_000
LEAST_BLOCKS = 10  # fewer may agree by chance and stop too early
Model = Callable[[Mapping[str, FloatArray]], FloatArray]


@dataclass(frozen=True, slots=True)
class MonteCarlo:
    """What many draws of the inputs say of a result.

    Attributes
    ----------
    value, u : float
        Mean and standard deviation of the draws [unit of the result].
    median : float
        It stands still where few degrees of freedom leave no mean [unit of the result].
    interval, shortest : tuple of float
        Probabilistically symmetric and shortest coverage interval.
    level : float
        Coverage probability.
    draws : int
    is_stable : bool
        Whether twice the standard error of each number is below half a unit of the last digit wanted of u.
    """

    value: float
    u: float
    interval: tuple[float, float]
    shortest: tuple[float, float]
    level: float
    draws: int
    is_stable: bool
    median: float


def monte_carlo(
    model: Model,
    inputs: Sequence[Input],
    *,
    level: float = 0.95,
    digits: int = 2,
    most_draws: int = 2_000_000,
    seed: int = 1,
    progress: Callable[[int], None] | None = None,
) -> MonteCarlo:
    """Draw the inputs block by block until the numbers stand still, ten blocks at least.

    Parameters
    ----------
    model : callable
        Takes arrays by input name and returns an array.
    inputs : sequence of Input
        Inputs with one key are one thing: they are drawn together.
    level : float
        Coverage probability.
    digits : int
        Significant digits of u that must stand still.
    most_draws : int
        Where to stop in any case.
    seed : int
        The same seed gives the same numbers.
    progress : callable, optional
        Told the number of draws after each block.

    Raises
    ------
    ValueError
        When a setting is outside its range, an input has an unknown distribution, or draws give no number.
    """
    _check(level, digits=digits, most_draws=most_draws)
    results: list[FloatArray] = []
    for block in _blocks(model, inputs, seed=seed):
        results.append(block)
        if progress is not None:
            progress(len(results) * BLOCK)
        is_stable = len(results) >= LEAST_BLOCKS and _is_stable(results, level=level, digits=digits)
        if is_stable or len(results) * BLOCK >= most_draws:
            break
    draws = np.sort(np.concatenate(results))
    return MonteCarlo(
        float(draws.mean()), float(draws.std(ddof=1)), symmetric_interval(draws, level=level),
        shortest_interval(draws, level=level), level, draws.size, is_stable,
        float(np.median(draws)),
    )  # fmt: skip


def symmetric_interval(draws: FloatArray, *, level: float) -> tuple[float, float]:
    """The interval that leaves the same probability on both sides, of sorted draws."""
    low, high = np.quantile(draws, [(1 - level) / 2, (1 + level) / 2])
    return float(low), float(high)


def shortest_interval(draws: FloatArray, *, level: float) -> tuple[float, float]:
    """The shortest interval that holds the level, of sorted draws."""
    inside = math.ceil(level * draws.size)
    if inside >= draws.size:
        return float(draws[0]), float(draws[-1])
    widths = draws[inside:] - draws[:-inside]
    first = int(widths.argmin())
    return float(draws[first]), float(draws[first + inside])


def _blocks(model: Model, inputs: Sequence[Input], *, seed: int) -> Iterator[FloatArray]:
    generator = np.random.default_rng(seed)
    while True:
        with np.errstate(all="ignore"):
            block = np.broadcast_to(np.asarray(model(_draw(inputs, generator)), dtype=float), (BLOCK,))
        if not np.all(np.isfinite(block)):
            raise ValueError("Some draws of the inputs give no number; an input may reach zero in a denominator.")
        yield block


def _draw(inputs: Sequence[Input], generator: np.random.Generator) -> dict[str, FloatArray]:
    """One draw of standard deviations per key, so that shared inputs move together."""
    shared: dict[str, FloatArray] = {}
    for item in inputs:
        if item.key not in shared:
            shared[item.key] = _standard(item, generator)
    return {item.name: item.value + item.u * shared[item.key] for item in inputs}


def _standard(item: Input, generator: np.random.Generator) -> FloatArray:
    """Draws with mean 0 and, unless few degrees of freedom widen them, standard deviation 1."""
    if item.distribution == "rectangular":
        return np.asarray(generator.uniform(-math.sqrt(3), math.sqrt(3), BLOCK))
    if item.distribution == "triangular":
        return np.asarray(generator.triangular(-math.sqrt(6), 0, math.sqrt(6), BLOCK))
    if item.distribution == "u_shaped":
        return np.asarray(math.sqrt(2) * np.sin(generator.uniform(-math.pi, math.pi, BLOCK)))
    if item.distribution not in ("normal", "t"):
        raise ValueError(
            f"Distribution of {item.label} is {item.distribution!r}; "
            "expected normal, rectangular, triangular, u_shaped or t."
        )
    if item.distribution == "t" and math.isfinite(item.degrees_of_freedom):
        return np.asarray(generator.standard_t(item.degrees_of_freedom, BLOCK))
    return np.asarray(generator.standard_normal(BLOCK))


def _is_stable(results: Sequence[FloatArray], *, level: float, digits: int) -> bool:
    rows = np.array([[r.mean(), r.std(ddof=1), *symmetric_interval(r, level=level)] for r in results])
    u = float(rows[:, 1].mean())
    if u == 0:
        return True
    tolerance = 0.5 * 10.0 ** (math.floor(math.log10(u)) - digits + 1)
    return bool(np.all(2 * rows.std(axis=0, ddof=1) / math.sqrt(len(results)) < tolerance))


def _check(level: float, *, digits: int, most_draws: int) -> None:
    if not 0 < level < 1:
        raise ValueError(f"Level is {level}; a number between 0 and 1 is expected.")
    if digits not in (1, 2, 3):
        raise ValueError(f"Digits is {digits}; 1, 2 or 3 are expected.")
    if most_draws < LEAST_BLOCKS * BLOCK:
        raise ValueError(f"Most draws is {most_draws}; at least {LEAST_BLOCKS * BLOCK} are expected.")
