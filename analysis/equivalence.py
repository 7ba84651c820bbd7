"""Which equivalence points a system has, in the order of the titration, and which of them make a jump."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from analysis.acid_base import steps_of
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
LEAST_APART = 2.5  # between neighbouring pKa values
STRONG = {"base": 1.0, "acid": 13.0}  # where a strong acid or base stands at the usual concentrations
LAST = {"base": 10.0, "acid": 4.0}  # the weakest that still makes a jump, in round figures
APART_PKS = 1.5
APART_POTENTIAL = 120.0  # mV


@dataclass(frozen=True, slots=True)
class Step:
    """One equivalence point: the analyte that is done with, its proton, V = sum of ``share`` times the
    equivalents of each analyte, and whether the curve jumps there."""

    analyte: str
    proton: int
    share: tuple[float, ...]
    is_jump: bool


def equivalence_steps(system: System) -> tuple[Step, ...]:
    """The equivalence points of a system, in the order in which they are passed."""
    if system.kind == "acid_base":
        return _acid_base(system)
    count = len(system.analytes)
    keys = [_key(system, k) for k in range(count)]
    order = sorted(range(count), key=keys.__getitem__)
    apart = APART_POTENTIAL if system.kind == "redox" else APART_PKS
    found, share = [], np.zeros(count)
    for place, k in enumerate(order):
        share[k] = 1.0
        last = place + 1 == count
        is_jump = last or keys[order[place + 1]] - keys[k] >= apart
        found.append(Step(system.analytes[k].name, 1, tuple(map(float, share)), is_jump))
    return tuple(found)


def _key(system: System, k: int) -> float:
    item = system.analytes[k]
    if system.kind == "precipitation":
        return -float(item.pKs or 0.0)
    return float(item.potential or 0.0) * (1.0 if system.titrant == "oxidant" else -1.0)


def _acid_base(system: System) -> tuple[Step, ...]:
    turn = 1.0 if system.titrant == "base" else -1.0
    steps = sorted(
        (turn * pKa, k, proton)
        for k, item in enumerate(system.analytes)
        for proton, pKa in enumerate(steps_of(item, system), start=1)
    )
    found, share = [], np.zeros(len(system.analytes))
    for place, (key, k, proton) in enumerate(steps):
        share[k] += 1.0
        if place + 1 == len(steps):
            is_jump = key <= turn * LAST[system.titrant]
        else:
            here = max(key, turn * STRONG[system.titrant])
            is_jump = steps[place + 1][0] - here >= LEAST_APART
        found.append(Step(system.analytes[k].name, proton, tuple(map(float, share)), is_jump))
    return tuple(found)
