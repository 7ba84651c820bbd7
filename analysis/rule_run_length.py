"""Average run length of a chart of single points under several run rules at once, by a Markov chain.

Only rules that look at zones (how far, on which side) can be solved so; rising, falling and alternating
points cannot and are refused.

References
----------
Champ, Woodall, Technometrics 29 (1987) 393-399.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from scipy import special
from scipy.sparse import coo_matrix, eye
from scipy.sparse.linalg import spsolve

LARGEST = 200_000  # states; more are a set of rules that nobody would read


@dataclass(frozen=True, slots=True)
class ZoneRule:
    """At least ``count`` of ``within`` points in a row between two heights, in sigma."""

    count: int
    within: int
    low: float
    high: float


FAR = math.inf
ZONE_RULES: dict[str, tuple[ZoneRule, ...]] = {
    "one point beyond three sigma": (ZoneRule(1, 1, 3, FAR), ZoneRule(1, 1, -FAR, -3)),
    "one point beyond two sigma": (ZoneRule(1, 1, 2, FAR), ZoneRule(1, 1, -FAR, -2)),
    "two of three beyond two sigma": (ZoneRule(2, 3, 2, FAR), ZoneRule(2, 3, -FAR, -2)),
    "four of five beyond one sigma": (ZoneRule(4, 5, 1, FAR), ZoneRule(4, 5, -FAR, -1)),
    "seven points in a row on one side": (ZoneRule(7, 7, 0, FAR), ZoneRule(7, 7, -FAR, 0)),
    "eight points in a row on one side": (ZoneRule(8, 8, 0, FAR), ZoneRule(8, 8, -FAR, 0)),
    "nine points in a row on one side": (ZoneRule(9, 9, 0, FAR), ZoneRule(9, 9, -FAR, 0)),
    "fifteen points within one sigma": (ZoneRule(15, 15, -1, 1),),
}
CUTS = (-FAR, -3.0, -2.0, -1.0, 0.0, 1.0, 2.0, 3.0, FAR)
State = tuple[int, ...]


def rules_run_length(rules: Sequence[str], *, shift: float = 0.0) -> float:
    """Average run length under all of the named rules together.

    Parameters
    ----------
    rules : sequence of str
        Names from ``ZONE_RULES``.
    shift : float
        Shift of the mean, in standard deviations of single points.

    Raises
    ------
    ValueError
        When no rule is named, one cannot be solved so, or the shift is not finite.
    """
    if not rules or not math.isfinite(shift):
        raise ValueError(
            f"Rules are {list(rules)} and shift {shift}; at least one rule and a finite shift are expected."
        )
    unknown = [name for name in rules if name not in ZONE_RULES]
    if unknown:
        raise ValueError(f"Rule is {unknown[0]!r}; the run length can be solved for {'; '.join(ZONE_RULES)}.")
    parts = [part for name in rules for part in ZONE_RULES[name]]
    steps = _reachable(parts)
    return _solved(steps, _zone_probabilities(shift))


def _zone_probabilities(shift: float) -> np.ndarray:
    return np.asarray(np.diff(special.ndtr(np.asarray(CUTS) - shift)))


def _reachable(parts: Sequence[ZoneRule]) -> list[list[int]]:
    """For each state, from the first on, the state after a point in each zone; -1 for a signal."""
    inside = [[part.low <= low and high <= part.high for low, high in pairwise(CUTS)] for part in parts]
    start: State = (0,) * len(parts)
    number, order, steps = {start: 0}, [start], []
    for state in order:  # grows while it is read
        row = []
        for zone in range(len(CUTS) - 1):
            after = _after(state, parts, [hits[zone] for hits in inside])
            if after is not None and after not in number:
                number[after] = len(order)
                order.append(after)
            row.append(-1 if after is None else number[after])
        steps.append(row)
        if len(order) > LARGEST:
            raise ValueError(f"These rules together have more than {LARGEST} states; choose fewer of them.")
    return steps


def _after(state: State, parts: Sequence[ZoneRule], hits: Sequence[bool]) -> State | None:
    """The state after one point: for each rule the hits among its last points, as bits; None for a signal."""
    found = []
    for bits, part, hit in zip(state, parts, hits, strict=True):
        seen = (bits << 1 | hit) & ((1 << part.within) - 1)
        if hit and seen.bit_count() >= part.count:
            return None
        found.append(_useful(seen & ((1 << (part.within - 1)) - 1), part))
    return tuple(found)


def _useful(bits: int, part: ZoneRule) -> int:
    """Forget hits that can no longer take part in a signal, so that states stay few."""
    if part.count < part.within:
        return bits
    length = (~bits & (bits + 1)).bit_length() - 1  # hits in a row up to now
    return (1 << length) - 1


def _solved(steps: Sequence[Sequence[int]], probabilities: np.ndarray) -> float:
    rows: list[int] = []
    columns: list[int] = []
    entries: list[float] = []
    for place, row in enumerate(steps):
        for zone, after in enumerate(row):
            if after >= 0:
                rows.append(place)
                columns.append(after)
                entries.append(probabilities[zone])
    size = len(steps)
    chain = coo_matrix((np.array(entries), (np.array(rows), np.array(columns))), shape=(size, size)).tocsc()
    return float(spsolve((eye(size, format="csc") - chain).tocsc(), np.ones(size))[0])
