"""Curves whose endpoint is known, for the tests of the families; the chemistry is written in plain numpy."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from analysis.curve import Curve, clean_curve
from analysis.simulate import grid, simulate_curve
from analysis.system import Analyte, System

FloatArray = npt.NDArray[np.float64]
ACETIC = System("acid_base", "base", 0.1, 50.0, (Analyte("acetic acid", (4.756,)),))
STRONG = System("acid_base", "base", 0.1, 50.0, (Analyte("hydrochloric acid"),))


def strong_acid(volumes: FloatArray, *, at: float = 10.0, noise: float = 0.0, seed: int = 1) -> Curve:
    """pH of 0.1 mol/L base into 50 mL of a strong acid, in closed form: x - 1/x = excess of base (pKw 14)."""
    excess = 0.1 * (volumes - at) / (50.0 + volumes) / 1e-7
    pH = 7.0 + np.arcsinh(excess / 2) / np.log(10.0)
    return clean_curve(volumes, pH + np.random.default_rng(seed).normal(0.0, noise, volumes.size), quantity="pH")


def recorded(system: System, *amounts: float, end: float = 16.0, near: float = 10.0, **more: object) -> Curve:
    """A simulated curve with some scatter."""
    volumes = grid(end=end, near=near, coarse=0.25, fine=0.1)
    quantity = str(more.get("quantity", "pH" if system.kind == "acid_base" else "mV"))
    settings = {"noise": 0.003 if quantity == "pH" else 0.2, "generator": np.random.default_rng(11)} | more
    readings = simulate_curve(system, amounts=np.array(amounts), volumes=volumes, **settings)  # type: ignore[arg-type]
    return clean_curve(volumes, readings, quantity=quantity)


def two_lines(volumes: FloatArray, *, at: float, slopes: tuple[float, float], noise: float = 0.0) -> Curve:
    """Conductivity [mS/cm] that bends sharply."""
    first, second = slopes
    y = 5.0 + first * np.minimum(volumes, at) + second * np.maximum(volumes - at, 0.0)
    return clean_curve(
        volumes, y + np.random.default_rng(2).normal(0.0, noise, volumes.size), quantity="conductivity"
    )  # fmt: skip
