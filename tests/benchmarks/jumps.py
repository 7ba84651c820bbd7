"""Curves with a known number of jumps, and curves with none at all, for the benchmark of detection."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from analysis.simulate import grid, simulate_curve
from analysis.system import Analyte, System
from tests.benchmarks.curves import FloatArray, acid_base

END = 15.0  # mL
NERNST = 59.16  # mV a decade at 25 degC


@dataclass(frozen=True)
class Jumps:
    """A system, the amounts [mmol] for its jumps at these volumes [mL], and what the electrode shows."""

    name: str
    system: System
    amounts: tuple[float, ...]
    at: tuple[float, ...]
    quantity: str = "pH"


def silver(*analytes: Analyte) -> System:
    """Halides with silver, 50 mL in the vessel."""
    return System("precipitation", "silver", 0.1, 50.0, analytes)


IODIDE, CHLORIDE = Analyte("iodide", charge=-1, pKs=16.08), Analyte("chloride", charge=-1, pKs=9.752)
POSITIVES = (
    Jumps("HCl", acid_base("base", Analyte("hydrochloric acid")), (1.0,), (10.0,)),
    Jumps("HCl 0.01", acid_base("base", Analyte("hydrochloric acid"), c=0.01), (0.1,), (10.0,)),
    Jumps("acetic", acid_base("base", Analyte("acetic acid", (4.756,))), (1.0,), (10.0,)),
    Jumps("acetic, mV", acid_base("base", Analyte("acetic acid", (4.756,))), (1.0,), (10.0,), "mV"),
    Jumps("pKa 9", acid_base("base", Analyte("acid", (9.0,))), (1.0,), (10.0,)),
    Jumps("pKa 9.5", acid_base("base", Analyte("acid", (9.5,))), (1.0,), (10.0,)),
    Jumps("citric", acid_base("base", Analyte("citric acid", (3.128, 4.761, 6.396))), (0.333,), (9.99,)),
    Jumps("NaOH with acid", acid_base("acid", Analyte("sodium hydroxide")), (1.0,), (10.0,)),
    Jumps("ammonia with acid", acid_base("acid", Analyte("ammonia", (9.246,), 1)), (1.0,), (10.0,)),
    Jumps("chloride, silver", silver(CHLORIDE), (1.0,), (10.0,), "mV"),
    Jumps("pKa 4 and 6.5", acid_base("base", Analyte("acid", (4.0, 6.5))), (0.5,), (5.0, 10.0)),
    Jumps("pKa 5.5 and 8", acid_base("base", Analyte("acid", (5.5, 8.0))), (0.5,), (5.0, 10.0)),
    Jumps("HCl and acetic", acid_base("base", Analyte("hydrochloric acid"), Analyte("acetic acid", (4.756,))),
          (0.5, 0.5), (5.0, 10.0)),
    Jumps("phosphoric", acid_base("base", Analyte("phosphoric acid", (2.148, 7.198, 12.35))), (0.5,), (5.0, 10.0)),
    Jumps("carbonate with acid", acid_base("acid", Analyte("carbonate", (6.352, 10.329))), (0.5,), (5.0, 10.0)),
    Jumps("iodide and chloride", silver(IODIDE, CHLORIDE), (0.5, 0.5), (5.0, 10.0), "mV"),
    Jumps("pKa 3, 6 and 9", acid_base("base", Analyte("acid", (3.0, 6.0, 9.0))), (0.4,), (4.0, 8.0, 12.0)),
    Jumps("pKa 4, 6.5 and 9", acid_base("base", Analyte("acid", (4.0, 6.5, 9.0))), (0.4,), (4.0, 8.0, 12.0)),
    Jumps("HCl and pKa 5, 8", acid_base("base", Analyte("hydrochloric acid"), Analyte("acid", (5.0, 8.0))),
          (0.4, 0.4), (4.0, 8.0, 12.0)),
    Jumps("pKa 5, 7.5, 10 with acid", acid_base("acid", Analyte("base", (5.0, 7.5, 10.0), 3)),
          (0.4,), (4.0, 8.0, 12.0)),
)  # fmt: skip


def volumes_of(case: Jumps, step: float) -> FloatArray:
    """Volumes [mL]: even steps of 0.5 mL, or finer ones within 0.8 mL of each jump."""
    if step == 0.5:
        return np.arange(0.0, END + 0.01, 0.5)
    return np.unique(np.concatenate([grid(end=END, near=at, fine=step, width=0.8) for at in case.at]))


def readings_of(
    case: Jumps, volumes: FloatArray, *, noise: float, count: int, generator: np.random.Generator
) -> tuple[FloatArray, FloatArray]:
    """Readings with this noise [mV], and the factor by which the amounts of each curve are off."""
    factors = generator.uniform(0.97, 1.03, count)
    unit = 1.0 if case.quantity == "mV" else 1 / NERNST
    readings = simulate_curve(
        case.system, amounts=factors[:, None] * np.array(case.amounts), volumes=volumes, generator=generator,
        noise=noise * unit, volume_noise=0.003, quantity=case.quantity,
    )  # fmt: skip
    return readings, factors


def _acetic(volumes: FloatArray, amount: float) -> FloatArray:
    system = acid_base("base", Analyte("acetic acid", (4.756,)))
    return simulate_curve(system, amounts=np.array([amount]), volumes=volumes)


def _strong(volumes: FloatArray) -> FloatArray:
    system = acid_base("base", Analyte("hydrochloric acid"))
    return simulate_curve(system, amounts=np.array([1.0]), volumes=volumes)


def _glitch(v: FloatArray, generator: np.random.Generator) -> FloatArray:
    """One reading of a buffer that is off by up to 3 pH, anywhere."""
    reading = _acetic(20.0 + v, 6.0)
    reading[generator.integers(v.size)] += generator.choice([-1, 1]) * generator.uniform(0.5, 3.0)
    return np.asarray(reading)


def _weak(v: FloatArray) -> FloatArray:
    system = acid_base("base", Analyte("acid", (11.5,)))
    return simulate_curve(system, amounts=np.array([1.0]), volumes=v)


NEGATIVES: Mapping[str, Callable[[FloatArray, np.random.Generator], FloatArray]] = {
    "flat line": lambda v, g: np.full_like(v, g.uniform(2, 12)),
    "drift": lambda v, g: 7.0 + g.uniform(-1, 1) * v / END,
    "settling": lambda v, g: 7.0 + g.uniform(-1, 1) * np.exp(-v / 3.0),
    "dilution only": lambda v, g: 2.0 + np.log10((50.0 + 4 * v) / 50.0),
    "strong buffer": lambda v, g: _acetic(20.0 + v, 6.0),
    "stops before the jump": lambda v, g: _acetic(v * g.uniform(0.90, 0.95), 1.5),
    "strong acid, stops before": lambda v, g: _strong(v * g.uniform(0.60, 0.64)),
    "begun after the jump": lambda v, g: _acetic(v + g.uniform(10.8, 11.5), 1.0),
    "acid too weak": lambda v, g: _weak(v),
    "one bad reading": _glitch,
}
