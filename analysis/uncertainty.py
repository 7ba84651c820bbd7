"""Propagation of uncertainty with named inputs: budget, effective degrees of freedom, coverage factor.

References
----------
JCGM 100:2008 (GUM), equations 10, 13 and G.2b; Squire, Trapp, SIAM Review 40 (1998) 110-112 (complex step).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from scipy import stats

STEP = 1e-30
WHOLE = 0.005  # 18.999 degrees of freedom are 19 that lost a digit on the way


@dataclass(frozen=True, slots=True)
class Input:
    """One input of a measurement model.

    Attributes
    ----------
    name : str
        Name in the model function.
    key : str
        The physical thing behind it; inputs with the same key are one thing and their contributions add.
    label, unit : str
        For the budget.
    value, u : float
        Estimate and standard uncertainty [unit].
    distribution : str
        normal, rectangular, triangular or t.
    kind : str
        Type of evaluation, A or B.
    degrees_of_freedom : float
        Infinite where the uncertainty is taken as known.
    """

    name: str
    key: str
    label: str
    value: float
    u: float
    unit: str
    distribution: str = "normal"
    kind: str = "B"
    degrees_of_freedom: float = math.inf


@dataclass(frozen=True, slots=True)
class BudgetLine:
    """One line of a budget; ``contribution`` is sensitivity times u, with its sign [unit of the result]."""

    key: str
    label: str
    value: float
    unit: str
    u: float
    distribution: str
    kind: str
    sensitivity: float
    contribution: float
    share: float
    degrees_of_freedom: float


@dataclass(frozen=True, slots=True)
class Propagated:
    """A value with its combined standard uncertainty and the budget it came from."""

    value: float
    u: float
    degrees_of_freedom: float
    budget: tuple[BudgetLine, ...]


def propagate(model: Callable[[Mapping[str, complex]], complex], inputs: Sequence[Input]) -> Propagated:
    """Law of propagation of uncertainty, inputs with one key fully correlated, others independent.

    Parameters
    ----------
    model : callable
        Takes a mapping of input names to (complex) numbers and returns the result.
    inputs : sequence of Input

    Returns
    -------
    Propagated

    Raises
    ------
    ValueError
        When an uncertainty is negative or not a number, or the model does not give a finite value.

    References
    ----------
    JCGM 100:2008, equations 10 and 13 (correlation coefficient 1 within a key) and G.2b.
    """
    for item in inputs:
        if not (item.u >= 0 and math.isfinite(item.u) and math.isfinite(item.value)):
            raise ValueError(f"{item.label} is {item.value} with standard uncertainty {item.u}; finite, not below 0.")
    estimates: dict[str, complex] = {item.name: complex(item.value) for item in inputs}
    value = model(estimates).real
    if not math.isfinite(value):
        raise ValueError(f"The result is {value}; the inputs do not give a number.")
    lines = [(item, model({**estimates, item.name: complex(item.value, STEP)}).imag / STEP) for item in inputs]
    budget = merged(
        [
            BudgetLine(
                item.key, item.label, item.value, item.unit, item.u, item.distribution, item.kind, slope,
                slope * item.u, 0.0, item.degrees_of_freedom,
            )
            for item, slope in lines
        ]
    )  # fmt: skip
    return from_budget(value, budget)


def merged(lines: Sequence[BudgetLine]) -> tuple[BudgetLine, ...]:
    """Lines with the same key are one input: their signed contributions add, the larger names the line."""
    groups: dict[str, list[BudgetLine]] = {}
    for line in lines:
        groups.setdefault(line.key, []).append(line)
    return tuple(_one_line(group) for group in groups.values())


def from_budget(value: float, budget: Sequence[BudgetLine]) -> Propagated:
    """Combine independent lines: root of the sum of squares, and Welch-Satterthwaite for the degrees of freedom."""
    variance = sum(line.contribution**2 for line in budget)
    shared = tuple(_with_share(line, variance) for line in budget)
    return Propagated(
        value=value,
        u=math.sqrt(variance),
        degrees_of_freedom=effective_degrees_of_freedom(shared),
        budget=shared,
    )


def effective_degrees_of_freedom(budget: Sequence[BudgetLine]) -> float:
    """Welch-Satterthwaite, JCGM 100:2008 equation G.2b; infinite when every line is taken as known."""
    variance = sum(line.contribution**2 for line in budget)
    spread = sum(line.contribution**4 / line.degrees_of_freedom for line in budget)
    return math.inf if spread == 0 else variance**2 / spread


def coverage_factor(degrees_of_freedom: float, *, rule: str = "effective", level: float = 0.95) -> float:
    """k for an expanded uncertainty: 2 by rule "k2", or Student's t at a level for the effective degrees of freedom.

    Parameters
    ----------
    degrees_of_freedom : float
        Effective degrees of freedom, truncated to a whole number as JCGM 100:2008 G.4.1 asks; at least 1.
    rule : str
        "k2" or "effective".
    level : float
        Coverage probability, 0 to 1.

    Raises
    ------
    ValueError
        When the rule is not known, or the degrees of freedom are below 1.
    """
    if rule == "k2":
        return 2.0
    if rule != "effective":
        raise ValueError(f"Coverage rule is {rule!r}; expected k2 or effective.")
    if not degrees_of_freedom >= 1:
        raise ValueError(f"Effective degrees of freedom are {degrees_of_freedom}; at least 1 are needed for a factor.")
    if math.isinf(degrees_of_freedom):
        return float(stats.norm.ppf(0.5 + level / 2))
    whole = math.floor(degrees_of_freedom + WHOLE)
    return float(stats.t.ppf(0.5 + level / 2, whole))


def _one_line(group: Sequence[BudgetLine]) -> BudgetLine:
    main = max(group, key=lambda line: abs(line.contribution))
    if len(group) == 1:
        return main
    total = sum(line.contribution for line in group)
    return BudgetLine(
        main.key, main.label, main.value, main.unit, main.u, main.distribution, main.kind,
        total / main.u if main.u else 0.0, total, 0.0, min(line.degrees_of_freedom for line in group),
    )  # fmt: skip


def _with_share(line: BudgetLine, variance: float) -> BudgetLine:
    share = line.contribution**2 / variance if variance else 0.0
    return BudgetLine(
        line.key, line.label, line.value, line.unit, line.u, line.distribution, line.kind, line.sensitivity,
        line.contribution, share, line.degrees_of_freedom,
    )  # fmt: skip
