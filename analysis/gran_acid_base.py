"""Gran's lines of acids and bases: what is left, or in excess, against the volume, from the charge balance.

With a the ion that the titrant takes away (H+ for a base titrant, OH- for an acid), b the other one, E one proton of
the analyte in mL of titrant and f how many of the protons up to the chosen endpoint are left:

V_e - V = E f + (V0 + V) (a - b) / c

On either side one term is nearly all of it. That one gets a free slope, so that the electrode's offset, the constant
and the mean activity do not matter; the others are worked out, with the offset that the slope gives away.

References
----------
Gran, Analyst 77 (1952) 661-671; Rossotti, Rossotti, J. Chem. Educ. 42 (1965) 375-378 (offset from the slope).
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from analysis.activity import davies_a, log_gamma, nernst, water_pK
from analysis.curve import Curve
from analysis.line import weighted_line
from analysis.protonation import protons_lost
from analysis.system import Analyte, System

FloatArray = npt.NDArray[np.float64]
LEAST = 4
FIRST, LAST_BEFORE, FIRST_AFTER, LAST_AFTER = 0.25, 0.995, 0.005, 0.7  # of the step, from its begin or beyond its end
DOMINANT = 5.0  # times the other terms, that the term of a line is at least
LOWEST_SCATTER, VOLUME_SD = 0.002, 0.003  # pH, mL
CALIBRATIONS, SAME_OFFSET = 5, 0.002  # times at most, pH
LOWEST_PH, HIGHEST_PH = -3.0, 17.0
LN_10 = math.log(10.0)
Side = tuple[float, float]
Line = tuple[float, float, float]


@dataclass(frozen=True, slots=True)
class Plot:
    """One analyte up to one endpoint: ``protons`` of it are titrated at ``near`` [mL], the other analytes and all
    endpoints before it at ``base`` and below; ``shift`` and ``stretch`` are the electrode's, ``lean`` [pH] moves the
    free ions alone and ``apart`` the distances of the pKa."""

    curve: Curve
    system: System
    analyte: Analyte
    protons: int
    is_last: bool
    near: float
    base: float
    scatter: float
    shift: float = 0.0
    stretch: float = 1.0
    lean: float = 0.0
    apart: float = 0.0


@dataclass(frozen=True, slots=True)
class Terms:
    """The terms of the balance at each point [mL of titrant]: left of the step, taken by a, in excess as b."""

    v: FloatArray
    left: FloatArray
    taken: FloatArray
    excess: FloatArray


def sides_of(plot: Plot) -> list[Side]:
    """Endpoint and standard uncertainty [mL] of the line before and of the line after, where there are points.

    The offset of the electrode is taken from the slope of the line before, or else of the line after.
    """
    found: list[Side] = []
    for _ in range(CALIBRATIONS):
        terms = _terms(plot)
        lines = (_before(plot, terms), _after(plot, terms))
        found = [(line[0], line[2]) for line in lines if line is not None]
        offset = _offset(plot, lines)
        if abs(offset) < SAME_OFFSET:
            break
        plot = replace(plot, shift=plot.shift + min(max(offset, -1.0), 1.0))
    return found


def _offset(plot: Plot, lines: tuple[Line | None, Line | None]) -> float:
    """What the slope of a line says about the electrode's zero [pH]."""
    turn = -1.0 if plot.system.titrant == "base" else 1.0
    for line, towards in zip(lines, (turn, -turn), strict=True):
        if line is not None:
            return towards * math.log10(-line[1])
    return 0.0


def _before(plot: Plot, terms: Terms) -> Line | None:
    """The line of what is left: of a strong acid or base its own ion, of a weak one its share."""
    if plot.analyte.pKa:
        at, line, others = terms.v + terms.taken - terms.excess, terms.left, terms.taken - terms.excess
    else:
        at, line, others = terms.v - terms.excess, terms.taken, terms.excess
    begin, step = _begin(plot), _step(plot)
    inside = (terms.v > begin + FIRST * step) & (terms.v < begin + LAST_BEFORE * step)
    return _line(plot, at, line, inside & (line > DOMINANT * np.abs(others)))


def _after(plot: Plot, terms: Terms) -> Line | None:
    """The line of what is in excess: of the titrant beyond the last endpoint, of the next proton beyond another."""
    if plot.is_last:
        at, line, others = terms.v + terms.left + terms.taken, -terms.excess, terms.left + terms.taken
    else:
        at, line, others = terms.v + terms.taken - terms.excess, terms.left, terms.taken - terms.excess
    end, step = plot.near, _step(plot)
    inside = (terms.v > end + FIRST_AFTER * step) & (terms.v < end + LAST_AFTER * step)
    return _line(plot, at, line, inside & (-line > DOMINANT * np.abs(others)))


def _line(plot: Plot, at: FloatArray, line: FloatArray, use: npt.NDArray[np.bool_]) -> Line | None:
    if np.count_nonzero(use) < LEAST:
        return None
    x, y = line[use], at[use]
    sd = np.hypot(LN_10 * max(plot.scatter, LOWEST_SCATTER) * x, VOLUME_SD)
    found = weighted_line(x, y, sd=sd)
    return found if found is not None and found[1] < 0 else None


def _step(plot: Plot) -> float:
    """One proton of the analyte [mL of titrant]."""
    return (plot.near - plot.base) / plot.protons if plot.analyte.pKa else plot.near - plot.base


def _begin(plot: Plot) -> float:
    return plot.near - _step(plot)


def _start(plot: Plot) -> int:
    """Protons that the analyte has lost before the first drop."""
    if plot.analyte.lost is not None:
        return plot.analyte.lost
    return 0 if plot.system.titrant == "base" else len(plot.analyte.pKa)


def _terms(plot: Plot) -> Terms:
    system, v = plot.system, plot.curve.volume
    pH, whole = _pH(plot), system.sample_volume + v
    gamma = 10 ** log_gamma(_ionic_strength(plot, whole), a=davies_a(system.temperature))
    gamma = gamma if system.activity else np.ones_like(v)
    h, oh = 10 ** -(pH + plot.lean) / gamma, 10 ** (pH + plot.lean - water_pK(system.temperature)) / gamma
    a, b = (h, oh) if system.titrant == "base" else (oh, h)
    taken, excess = whole * a / system.titrant_concentration, whole * b / system.titrant_concentration
    if not plot.analyte.pKa:
        return Terms(v, np.zeros_like(v), taken, excess)
    undone = _undone(plot, pH, gamma)
    left = (v + taken - excess - plot.base) * undone / np.maximum(plot.protons - undone, 1e-9)
    return Terms(v, left, taken, excess)


def _pH(plot: Plot) -> FloatArray:
    reading = plot.curve.reading
    pH = reading if plot.curve.quantity == "pH" else 7.0 - reading / nernst(plot.system.temperature)
    return np.clip(7.0 + plot.stretch * (pH - 7.0) + plot.shift, LOWEST_PH, HIGHEST_PH)


def _undone(plot: Plot, pH: FloatArray, gamma: FloatArray) -> FloatArray:
    """How many of the protons up to the endpoint are left, less than none where the next one has begun."""
    item, start = plot.analyte, _start(plot)
    is_base = plot.system.titrant == "base"
    own = start + plot.protons - 1 if is_base else start - plot.protons
    constants = [
        10.0 ** -(pKa + plot.apart * np.sign(k - own)) * gamma ** (2 * (item.charge - k) - 1)
        for k, pKa in enumerate(item.pKa)
    ]
    lost = protons_lost(10**pH, constants)[0]
    return np.asarray(plot.protons - (lost - start if is_base else start - lost))


def _ionic_strength(plot: Plot, whole: FloatArray) -> FloatArray:
    """Half the sum of c z^2 [mol/L], proton after proton; counter-ions are univalent."""
    system, v = plot.system, plot.curve.volume
    if plot.analyte.pKa:
        turn, first = (-1 if system.titrant == "base" else 1), plot.analyte.charge - _start(plot)
        steps = np.arange(plot.protons + 2 - plot.is_last)
        squares = np.interp((v - plot.base) / _step(plot), steps, (first + turn * steps) ** 2.0)
        beyond = np.maximum(v - plot.near, 0.0) if plot.is_last else 0.0
        ions = v + beyond + _step(plot) * (squares + abs(first)) + plot.base
    else:
        ions = 2 * np.maximum(v, plot.near)
    return np.asarray((system.titrant_concentration * ions / 2 + system.background * system.sample_volume) / whole)
