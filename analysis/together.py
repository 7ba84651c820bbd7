"""Results that are used together: what they share makes them move together.

A result's budget names the physical thing behind each line; lines of two results with the same key are one input. Two
results on one bottle of titrant therefore agree better, and their mean is known worse, than if they were independent.

References
----------
JCGM 100:2008, 5.2.2 and F.1.2.3 (correlated inputs); JCGM 102:2011, 6.2; Cox, Metrologia 39 (2002) 589-595 (weighted
mean and its consistency); ISO 13528:2022, 9.6 (zeta score).
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations
from typing import Any

import numpy as np
import numpy.typing as npt
from scipy import stats

FloatArray = npt.NDArray[np.float64]
LEAST_RATIO = 1e-12  # of eigenvalues, below which a covariance cannot weigh results


@dataclass(frozen=True, slots=True)
class Result:
    """A result by name, with its value, unit and the signed contributions [unit] of its inputs by key."""

    name: str
    value: float
    unit: str
    contributions: Mapping[str, float]


@dataclass(frozen=True, slots=True)
class Mean:
    """A mean of results with its standard uncertainty, and what that would be for independent results."""

    value: float
    u: float
    u_if_independent: float
    weights: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class Difference:
    """One result less another; ``zeta`` is it over its standard uncertainty, with what they share taken off."""

    first: str
    second: str
    value: float
    u: float
    zeta: float


@dataclass(frozen=True, slots=True)
class Together:
    """Several results with their covariance; ``weighted`` is None where they cannot be weighed."""

    results: tuple[Result, ...]
    u: FloatArray
    covariance: FloatArray
    correlation: FloatArray
    mean: Mean
    weighted: Mean | None
    differences: tuple[Difference, ...]
    chi_square: float | None
    probability: float | None
    shared: tuple[str, ...]


def result_of(name: str, *, value: float, unit: str, budget: Sequence[Mapping[str, Any]]) -> Result:
    """A result from the lines of its budget; a line without a physical thing behind it is its own.

    Physical keys hold a colon ("burette:B-07") or a slash (the scatter of a standardization).
    """
    found: dict[str, float] = {}
    for line in budget:
        key = str(line["key"]) if ":" in line["key"] or "/" in line["key"] else f"{name}/{line['key']}"
        found[key] = found.get(key, 0.0) + float(line["contribution"])
    return Result(name, value, unit, found)


def use_together(results: Sequence[Result]) -> Together:
    """Covariance, mean, weighted mean, differences and consistency of results in one unit.

    Parameters
    ----------
    results : sequence of Result
        Two or more, with different names.

    Raises
    ------
    ValueError
        When there are fewer than two, two have one name, their units differ, or a number is not finite.
    """
    _check(results)
    covariance = _covariance(results)
    u = np.sqrt(np.diag(covariance))
    scale = np.outer(u, u)
    correlation = np.divide(covariance, scale, out=np.eye(len(results)), where=scale > 0)
    values = np.array([item.value for item in results])
    even = np.full(len(results), 1 / len(results))
    weights = _weights(covariance)
    chi_square = probability = None
    if weights is not None:
        away = values - weights @ values
        chi_square = float(away @ np.linalg.solve(covariance, away))
        probability = float(stats.chi2.sf(chi_square, len(results) - 1))
    return Together(
        tuple(results), u, covariance, correlation, _mean(values, covariance, even),
        None if weights is None else _mean(values, covariance, weights), _differences(results, covariance),
        chi_square, probability, _shared(results),
    )  # fmt: skip


def _check(results: Sequence[Result]) -> None:
    if len(results) < 2:
        raise ValueError(f"{len(results)} result is given; two or more are compared.")
    names = [item.name for item in results]
    if len(set(names)) < len(names):
        twice = next(name for name in names if names.count(name) > 1)
        raise ValueError(f"{twice} is given twice; a result is compared with others.")
    units = list(dict.fromkeys(item.unit for item in results))
    if len(units) > 1:
        raise ValueError(f"Results are in {' and '.join(units)}; only results in one unit are compared.")
    for item in results:
        if not all(map(math.isfinite, (item.value, *item.contributions.values()))):
            raise ValueError(f"{item.name} is {item.value}; finite numbers are expected.")


def _covariance(results: Sequence[Result]) -> FloatArray:
    keys = sorted({key for item in results for key in item.contributions})
    parts = np.array([[item.contributions.get(key, 0.0) for key in keys] for item in results])
    return np.asarray(parts @ parts.T)


def _weights(covariance: FloatArray) -> FloatArray | None:
    """Weights of the least variance, C^-1 1 / (1^T C^-1 1); None where the results are not independent enough."""
    spread = np.linalg.eigvalsh(covariance)
    if spread[0] <= LEAST_RATIO * spread[-1]:
        return None
    solved = np.linalg.solve(covariance, np.ones(len(covariance)))
    return np.asarray(solved / solved.sum())


def _mean(values: FloatArray, covariance: FloatArray, weights: FloatArray) -> Mean:
    u = math.sqrt(max(float(weights @ covariance @ weights), 0.0))
    alone = math.sqrt(float(weights**2 @ np.diag(covariance)))
    return Mean(float(weights @ values), u, alone, tuple(float(each) for each in weights))


def _differences(results: Sequence[Result], covariance: FloatArray) -> tuple[Difference, ...]:
    found = []
    for i, j in combinations(range(len(results)), 2):
        value = results[i].value - results[j].value
        u = math.sqrt(max(float(covariance[i, i] + covariance[j, j] - 2 * covariance[i, j]), 0.0))
        zeta = value / u if u else math.copysign(math.inf, value) if value else 0.0
        found.append(Difference(results[i].name, results[j].name, value, u, zeta))
    return tuple(found)


def _shared(results: Sequence[Result]) -> tuple[str, ...]:
    """Keys that two or more results rest on, the one with the most variance first."""
    weight = {
        key: sum(item.contributions.get(key, 0.0) ** 2 for item in results)
        for key in {key for item in results for key in item.contributions}
        if sum(key in item.contributions for item in results) > 1
    }
    return tuple(sorted(weight, key=lambda key: (-weight[key], key)))
