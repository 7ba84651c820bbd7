"""Where a fit starts: the amounts from the steepest places of a curve, and a point whose x can be told."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from analysis.equivalence import equivalence_steps
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
BESIDE = 3  # steps about a jump in which no other is looked for


def first_amounts(system: System, volume: FloatArray, linear: FloatArray, guess: float | None) -> FloatArray:
    """Equivalents of each analyte to start from [mL].

    One jump is looked for in an acid-base curve, whose first step finds the amounts from any start;
    elsewhere one for each analyte, in the order in which they are done with.
    """
    count = len(system.analytes)
    wanted = 1 if system.kind == "acid_base" else count
    ends = _steepest(volume, linear, wanted)
    if guess is not None:
        ends = ends * (guess / ends[:, -1:])
    if system.kind == "acid_base":
        return np.repeat(ends / count, count, axis=1)
    amounts = np.empty_like(ends)
    before: set[int] = set()
    for place, step in enumerate(equivalence_steps(system)):
        (new,) = set(np.flatnonzero(step.share)) - before
        amounts[:, new] = ends[:, place] - (ends[:, place - 1] if place else 0.0)
        before.add(int(new))
    return np.asarray(np.maximum(amounts, 1e-3))


def _steepest(volume: FloatArray, linear: FloatArray, wanted: int) -> FloatArray:
    """Where each curve is steepest [mL], in order; the first two steps are left out, for a curve may begin
    steeply.
    """
    step = np.diff(volume, axis=1)
    slope = np.abs(np.diff(linear, axis=1)) / np.where(step > 0, step, np.inf)
    slope[:, :2] = 0.0
    places = np.arange(slope.shape[1])[None, :]
    found = []
    for _ in range(wanted):
        at = slope.argmax(axis=1)[:, None]
        found.append(0.5 * (np.take_along_axis(volume, at, 1) + np.take_along_axis(volume, at + 1, 1)))
        slope = np.where(np.abs(places - at) <= BESIDE, 0.0, slope)
    return np.asarray(np.sort(np.maximum(np.concatenate(found, axis=1), 1e-3), axis=1))


def anchor(
    system: System, volume: FloatArray, points: FloatArray, guess: FloatArray
) -> tuple[FloatArray, npt.NDArray[np.intp]]:
    """A point whose x can be told: excess titrant at the end of a precipitation, free metal at the start of
    a complex.
    """
    c, rows = system.titrant_concentration, np.arange(volume.shape[0])
    at = np.zeros(volume.shape[0], dtype=np.intp) if system.kind == "complex" else (points - 1).astype(np.intp)
    away = np.maximum(np.abs(volume[rows, at] - guess), 0.02 * guess)
    return -np.log10(c * away / (system.sample_volume + volume[rows, at])), at
