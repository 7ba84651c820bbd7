"""Gran's lines of acids and bases: what is left, or in excess, against the volume, from the charge balance.

With a the ion that the titrant takes away (H+ for a base titrant, OH- for an acid), b the other one, E one proton of
an analyte in mL of titrant and f how many of its protons up to the chosen endpoint are left:

V_e - V = sum of E f + (V0 + V) (a - b) / c

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

from analysis.acid_base import CARBONIC, lost_at_start, may_have, steps_of
from analysis.activity import davies_a, log_gamma, nernst, water_pK
from analysis.curve import Curve
from analysis.equivalence import Step
from analysis.line import weighted_line
from analysis.protonation import protons_lost
from analysis.system import Analyte, System

FloatArray = npt.NDArray[np.float64]
LEAST = 4
FIRST, LAST_BEFORE, FIRST_AFTER, LAST_AFTER = 0.25, 0.995, 0.005, 0.7  # of the step before and of the one after
DOMINANT = 5.0  # times the other terms, that the term of a line is at least
LOWEST_SCATTER, VOLUME_SD = 0.002, 0.003  # pH, mL
CALIBRATIONS, SAME_OFFSET = 5, 0.002  # times at most, pH
LOWEST_PH, HIGHEST_PH = -3.0, 17.0
LN_10 = math.log(10.0)
Side = tuple[float, float]
Sides = tuple[Side | None, Side | None]
Line = tuple[float, float, float]


@dataclass(frozen=True, slots=True)
class Plot:
    """The balance up to one endpoint, about at ``near``, after the one at ``begin`` and before the one at ``beyond``
    [mL]; ``equivalents`` [mL] of one proton of each analyte.

    What is not known for certain: ``shift`` [pH] and ``stretch`` of the electrode, ``lean`` [pH] of the free ions
    alone, ``apart`` [pK] between the chosen constant and all others, carbonate in the sample and in the titrant over
    the titrant's concentration.
    """

    curve: Curve
    system: System
    step: Step
    is_last: bool
    near: float
    begin: float
    beyond: float
    equivalents: tuple[float, ...]
    scatter: float
    shift: float = 0.0
    stretch: float = 1.0
    lean: float = 0.0
    apart: float = 0.0
    carbonate: float = 0.0
    titrant_carbonate: float = 0.0


@dataclass(frozen=True, slots=True)
class Terms:
    """The terms of the balance at each point [mL of titrant]: left of the analytes, taken by a, in excess as b."""

    v: FloatArray
    left: FloatArray
    taken: FloatArray
    excess: FloatArray


def sides_of(plot: Plot) -> Sides:
    """Endpoint and standard uncertainty [mL] of the line before and of the line after; None without enough points.

    The offset of the electrode is taken from the slope of the line before, or else of the line after.
    """
    found: Sides = (None, None)
    for _ in range(CALIBRATIONS):
        terms = _terms(plot)
        before, after = _before(plot, terms), _after(plot, terms)
        found = (None if before is None else (before[0], before[2]), None if after is None else (after[0], after[2]))
        offset = _offset(plot, (before, after))
        if abs(offset) < SAME_OFFSET:
            break
        plot = replace(plot, shift=plot.shift + min(max(offset, -1.0), 1.0))
    return found


def unknowns_of(plot: Plot) -> list[Plot]:
    """The plot with each thing that no slope of a line tells moved by a standard deviation, one at a time.

    The slope of the electrode, its offset for the free ions alone, the distance of the constants, and carbonate, as
    the model of a curve takes them.
    """
    found = [replace(plot, lean=0.04), replace(plot, stretch=1.02), replace(plot, apart=0.04)]
    if may_have("sample carbonate", plot.system):
        found.append(replace(plot, carbonate=0.0015))
    if may_have("titrant carbonate", plot.system):
        found.append(replace(plot, titrant_carbonate=0.0015))
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
    step = plot.near - plot.begin
    inside = (terms.v > plot.begin + FIRST * step) & (terms.v < plot.begin + LAST_BEFORE * step)
    is_strong = not _chosen(plot).pKa
    line, others = (terms.taken, terms.left - terms.excess) if is_strong else (terms.left, terms.taken - terms.excess)
    return _line(plot, terms.v + others, line, inside & (line > DOMINANT * np.abs(others)))


def _after(plot: Plot, terms: Terms) -> Line | None:
    """The line of what is in excess: of the titrant beyond the last endpoint, of the next proton beyond another."""
    step = plot.beyond - plot.near
    inside = (terms.v > plot.near + FIRST_AFTER * step) & (terms.v < plot.near + LAST_AFTER * step)
    line, others = (
        (-terms.excess, terms.left + terms.taken) if plot.is_last else (terms.left, terms.taken - terms.excess)
    )
    return _line(plot, terms.v + others, line, inside & (-line > DOMINANT * np.abs(others)))


def _line(plot: Plot, at: FloatArray, line: FloatArray, use: npt.NDArray[np.bool_]) -> Line | None:
    if np.count_nonzero(use) < LEAST:
        return None
    sd = np.hypot(LN_10 * max(plot.scatter, LOWEST_SCATTER) * line[use], VOLUME_SD)
    found = weighted_line(line[use], at[use], sd=sd)
    return found if found is not None and found[1] < 0 else None


def _terms(plot: Plot) -> Terms:
    system, v = plot.system, plot.curve.volume
    pH, whole = _pH(plot), system.sample_volume + v
    gamma = 10 ** log_gamma(_ionic_strength(plot, whole), a=davies_a(system.temperature))
    gamma = gamma if system.activity else np.ones_like(v)
    h, oh = 10 ** -(pH + plot.lean) / gamma, 10 ** (pH + plot.lean - water_pK(system.temperature)) / gamma
    a, b = (h, oh) if system.titrant == "base" else (oh, h)
    left = np.zeros_like(v)
    for place, item in enumerate(system.analytes):
        if item.pKa:
            left += plot.equivalents[place] * _undone(plot, place, pH=pH, gamma=gamma)
    left -= (1.0 if system.titrant == "base" else -1.0) * _carbonate(plot, pH=pH, gamma=gamma)
    return Terms(v, left, whole * a / system.titrant_concentration, whole * b / system.titrant_concentration)


def _pH(plot: Plot) -> FloatArray:
    reading = plot.curve.reading
    pH = reading if plot.curve.quantity == "pH" else 7.0 - reading / nernst(plot.system.temperature)
    return np.clip(7.0 + plot.stretch * (pH - 7.0) + plot.shift, LOWEST_PH, HIGHEST_PH)


def _undone(plot: Plot, place: int, *, pH: FloatArray, gamma: FloatArray) -> FloatArray:
    """How many protons of an analyte up to the endpoint are left; less than none where the next one has begun."""
    item, system = plot.system.analytes[place], plot.system
    centre = steps_of(_chosen(plot), system)[plot.step.proton - 1]
    constants = [
        10.0 ** -(pKa + plot.apart * np.sign(pKa - centre)) * gamma ** (2 * (item.charge - k) - 1)
        for k, pKa in enumerate(item.pKa)
    ]
    lost = protons_lost(10**pH, constants)[0] - lost_at_start(item, system)
    return np.asarray(plot.step.share[place] - (lost if system.titrant == "base" else -lost))


def _carbonate(plot: Plot, *, pH: FloatArray, gamma: FloatArray) -> FloatArray:
    """What carbon dioxide takes up beside the analytes [mL of titrant]."""
    of_sample, of_titrant = plot.carbonate, plot.titrant_carbonate + plot.system.carbonate
    whole = of_sample * plot.system.sample_volume + of_titrant * plot.curve.volume
    constants = [10.0**-pKa * gamma ** (-2 * k - 1) for k, pKa in enumerate(CARBONIC.pKa)]
    return np.asarray(whole * protons_lost(10**pH, constants)[0])


def _ionic_strength(plot: Plot, whole: FloatArray) -> FloatArray:
    """Half the sum of c z^2 [mol/L], proton after proton of the chosen analyte; counter-ions are univalent."""
    system, v = plot.system, plot.curve.volume
    item, one = _chosen(plot), plot.equivalents[system.analytes.index(_chosen(plot))]
    if item.pKa:
        base = max(plot.near - plot.step.proton * one, 0.0)
        turn, first = (-1 if system.titrant == "base" else 1), item.charge - lost_at_start(item, system)
        steps = np.arange(plot.step.proton + 2 - plot.is_last)
        squares = np.interp((v - base) / one, steps, (first + turn * steps) ** 2.0)
        beyond = np.maximum(v - plot.near, 0.0) if plot.is_last else 0.0
        ions = v + beyond + one * (squares + abs(first)) + base
    else:
        ions = 2 * np.maximum(v, plot.near)
    return np.asarray((system.titrant_concentration * ions / 2 + system.background * system.sample_volume) / whole)


def _chosen(plot: Plot) -> Analyte:
    return next(item for item in plot.system.analytes if item.name == plot.step.analyte)
