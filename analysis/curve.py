"""A recorded titration curve, checked and put in order."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
QUANTITIES = ("pH", "mV", "conductivity", "temperature", "absorbance")
LEAST_POINTS = 8
MOST_VOLUME, SAME_VOLUME = 10_000.0, 6  # mL, and decimals of a millilitre: no burette tells a nanolitre
LARGEST = {
    "pH": (-2.0, 16.0), "mV": (-2000.0, 2000.0), "conductivity": (-1e7, 1e7), "temperature": (-273.15, 1000.0),
    "absorbance": (-1e4, 1e4),
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Curve:
    """Volume against reading.

    Attributes
    ----------
    volume : array
        Volume of titrant [mL], strictly increasing.
    reading : array
        Reading [pH, mV, mS/cm, degC or absorbance].
    quantity : str
        What was read.
    notes : tuple of str
        What was done with rows that repeat or go backwards, each named.
    """

    volume: FloatArray
    reading: FloatArray
    quantity: str
    notes: tuple[str, ...]


def clean_curve(volume: Sequence[float] | FloatArray, reading: Sequence[float] | FloatArray, *, quantity: str) -> Curve:
    """Check a curve and put it in order: rows that go backwards are left out, repeats are averaged, both are named.

    Parameters
    ----------
    volume : sequence of float
        Volume of titrant [mL].
    reading : sequence of float
        The readings at these volumes.
    quantity : str
        pH, mV, conductivity, temperature or absorbance.

    Raises
    ------
    ValueError
        When the lengths differ, a value is not finite or outside its range, or fewer than 8 points are usable.
    """
    if quantity not in QUANTITIES:
        raise ValueError(f"Quantity is {quantity!r}; expected one of {', '.join(QUANTITIES)}.")
    v, y = np.asarray(volume, dtype=float), np.asarray(reading, dtype=float)
    if v.ndim != 1 or v.shape != y.shape:
        raise ValueError(
            f"There are {v.size} volumes and {y.size} readings; as many of both are expected, in one row each."
        )
    _check_values(v, y, quantity=quantity)
    notes: list[str] = []
    forward = _forward(v, notes)
    v, y = _averaged(v[forward], y[forward], notes)
    if v.size < LEAST_POINTS:
        raise ValueError(f"No endpoint can be found: {v.size} usable points, at least {LEAST_POINTS} needed.")
    return Curve(volume=v, reading=y, quantity=quantity, notes=tuple(notes))


def _check_values(v: FloatArray, y: FloatArray, *, quantity: str) -> None:
    for name, values in (("Volume", v), ("Reading", y)):
        bad = np.flatnonzero(~np.isfinite(values))
        if bad.size:
            raise ValueError(f"{name} {bad[0] + 1} is {values[bad[0]]}; a finite number is expected.")
    if v.size and v.min() < 0:
        raise ValueError(f"Volume {int(v.argmin()) + 1} is {v.min():g} mL; volumes from 0 are expected.")
    if v.size and v.max() > MOST_VOLUME:
        raise ValueError(
            f"Volume {int(v.argmax()) + 1} is {v.max():g} mL; volumes up to {MOST_VOLUME:g} mL are expected."
        )
    low, high = LARGEST[quantity]
    outside = np.flatnonzero((y < low) | (y > high))
    if outside.size and quantity == "pH":
        raise ValueError(
            f"Reading {outside[0] + 1} is {y[outside[0]]:g}: values outside -2 to 16 look like mV, but pH was declared."
        )
    if outside.size:
        raise ValueError(f"Reading {outside[0] + 1} is {y[outside[0]]:g} {quantity}; {low:g} to {high:g} is expected.")


def _forward(v: FloatArray, notes: list[str]) -> FloatArray:
    highest = np.maximum.accumulate(v) if v.size else v
    backward = np.flatnonzero(v < highest)
    if backward.size:
        notes.append(
            f"{backward.size} rows go backwards in volume (first at row "
            f"{backward[0] + 1}, {v[backward[0]]:g} mL) and were left out."
        )
    return v >= highest  # type: ignore[return-value]


def _averaged(v: FloatArray, y: FloatArray, notes: list[str]) -> tuple[FloatArray, FloatArray]:
    unique, place = np.unique(np.round(v, SAME_VOLUME), return_inverse=True)
    if unique.size == v.size:
        return v, y
    counts = np.bincount(place)
    repeated = unique[counts > 1]
    notes.append(f"{repeated.size} volumes are repeated (first {repeated[0]:g} mL); their readings were averaged.")
    return unique, np.bincount(place, weights=y) / counts
