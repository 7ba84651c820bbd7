"""Titration curves with known truth: what a burette and an electrode would record.

The balance is solved for x at each volume, activity coefficients consistent with the solution found; the
electrode then shows it with offset, slope, drift, lag, scatter and now and then a bad reading. Used by the
tests, the benchmarks and the demo laboratory.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np
import numpy.typing as npt

from analysis.activity import nernst
from analysis.balance import NUISANCE, Chemistry, prior_of, solved_with_activity
from analysis.electrode import displayed
from analysis.fit_problem import MODELS
from analysis.system import System

FloatArray = npt.NDArray[np.float64]
Value = float | FloatArray


def simulate_curve(
    system: System, *, amounts: FloatArray, volumes: FloatArray, standard: float = 0.0,
    constants: Mapping[str, Value] | None = None, generator: np.random.Generator | None = None,
    noise: float = 0.0, volume_noise: float = 0.0, resolution: float = 0.0, offset: Value = 0.0,
    slope: Value = 1.0, drift: Value = 0.0, lag: Value = 0.0, outliers: float = 0.0,
    quantity: str | None = None,
) -> FloatArray:  # fmt: skip
    """Readings at each volume.

    Parameters
    ----------
    system : System
    amounts : array
        Amount of each analyte [mmol]; curves by analytes for several curves at once.
    volumes : array
        Volume of titrant as recorded [mL].
    standard : float
        Standard potential of the electrode [mV].
    constants : mapping, optional
        Shifts of the parameters by name: "pKa of acetic acid", "sample carbonate" and so on, see
        ``shiftable``.
    generator : Generator, optional
        Needed for noise and outliers.
    noise, volume_noise : float
        Standard deviation of a reading [pH or mV] and of a delivered volume [mL].
    resolution : float
        What was truly delivered lies anywhere within this width about the recorded volume [mL].
    offset, slope, drift, lag : float
        Electrode: offset and drift over the whole curve [pH or mV], slope as a fraction, lag as in
        electrode.py; like the constants each may be an array with one value a curve.
    outliers : float
        Share of readings that are off by up to 40 standard deviations.
    quantity : str, optional
        pH or mV.
    """
    amounts, volumes = np.atleast_2d(amounts), np.asarray(volumes, dtype=float)
    _check(system, amounts=amounts, generator=generator, random=noise + volume_noise + resolution + outliers)
    unit, shown = _unit(system, quantity)
    delivered = np.broadcast_to(volumes, (amounts.shape[0], volumes.shape[-1])).copy()
    if generator is not None and volume_noise + resolution > 0:
        error = generator.normal(0.0, volume_noise, delivered.shape)
        error += resolution * (generator.random(delivered.shape) - 0.5)
        delivered += np.where(delivered > 0, error, 0.0)  # before the first addition nothing is delivered
        delivered = np.maximum(delivered, 0.0)
    x = true_x(system, amounts=amounts, volumes=delivered, constants=constants)
    centre = 7.0 if shown == "pH" else float(np.median(x))
    electrode = {"offset": _column(offset) / abs(unit), "drift": _column(drift) / abs(unit)}
    reading = unit * displayed(x, centre=centre, slope=_column(slope) - 1, lag=_column(lag), **electrode)
    reading += (-7.0 * unit if system.kind == "acid_base" and shown == "mV" else 0.0) + standard
    if generator is not None and noise > 0:
        reading = _scattered(reading, generator, noise=noise, outliers=outliers)
    return reading if amounts.shape[0] > 1 or volumes.ndim > 1 else np.asarray(reading[0])


def true_x(
    system: System, *, amounts: FloatArray, volumes: FloatArray, constants: Mapping[str, Value] | None = None
) -> FloatArray:
    """pH, pAg, pM or potential over the Nernst slope at each volume, without an electrode; curves by
    points.
    """
    chemistry: Chemistry = MODELS[system.kind](system, prior=prior_of(NUISANCE, {}))
    names = shiftable(system)
    theta = np.zeros((amounts.shape[0], chemistry.count + len(names)))
    theta[:, : chemistry.count] = amounts / system.titrant_concentration * _equivalents(system)
    for name, value in (constants or {}).items():
        if name not in names:
            raise ValueError(f"Constant is {name!r}; expected one of {', '.join(names)}.")
        theta[:, chemistry.count + names.index(name)] = value
    return solved_with_activity(chemistry, np.broadcast_to(volumes, (len(theta), np.shape(volumes)[-1])), theta)


def shiftable(system: System) -> tuple[str, ...]:
    """Names of the constants of a system that a simulation can shift."""
    return tuple(item.name for item in MODELS[system.kind](system, prior=prior_of(NUISANCE, {})).parameters)


def grid(*, end: float, near: float, coarse: float = 0.5, fine: float = 0.1, width: float = 0.8) -> FloatArray:
    """Volumes [mL] as a titration is recorded: coarse steps, finer ones about the endpoint."""
    outside = np.arange(0.0, end + coarse / 2, coarse)
    inside = np.arange(max(near - width, 0.0), near + width + fine / 2, fine)
    outside = outside[(outside < inside[0] - fine / 2) | (outside > inside[-1] + fine / 2)]
    return np.round(np.sort(np.concatenate([outside, inside])), 3)


def _column(value: Value) -> FloatArray:
    """One value for all curves, or one for each, as a column."""
    return np.asarray(np.reshape(value, (-1, 1)), dtype=float)


def _check(system: System, *, amounts: FloatArray, generator: Any, random: float) -> None:
    if amounts.shape[1] != len(system.analytes):
        raise ValueError(f"{amounts.shape[1]} amounts are given; {len(system.analytes)} are expected, one an analyte.")
    if not (np.isfinite(amounts).all() and (amounts >= 0).all()):
        raise ValueError(f"Amounts are {amounts.tolist()}; finite numbers from 0 are expected [mmol].")
    if random > 0 and generator is None:
        raise ValueError("Noise is wanted and no generator is given; a numpy Generator is expected.")


def _unit(system: System, quantity: str | None) -> tuple[float, str]:
    """Reading per decimal unit of x, and the quantity that is shown."""
    shown = quantity or ("pH" if system.kind == "acid_base" else "mV")
    if shown == "pH":
        return 1.0, shown
    slope = nernst(system.temperature)
    if system.kind == "complex":
        return -slope / max(abs(system.analytes[0].charge), 1), shown
    rises = (system.kind == "redox" and system.titrant == "oxidant") or system.titrant == "halide"
    return (slope if rises else -slope), shown


def _equivalents(system: System) -> FloatArray:
    """Electrons an analyte trades for one of the titrant's; 1 for all but redox."""
    if system.kind != "redox":
        return np.ones(len(system.analytes))
    return np.array([item.electrons / system.titrant_electrons for item in system.analytes])


def _scattered(reading: FloatArray, generator: np.random.Generator, *, noise: float, outliers: float) -> FloatArray:
    found = reading + generator.normal(0.0, noise, reading.shape)
    if outliers > 0 and not math.isclose(outliers, 0.0):
        bad = generator.random(reading.shape) < outliers
        found = found + bad * generator.uniform(-40, 40, reading.shape) * noise
    return np.asarray(found)
