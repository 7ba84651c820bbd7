"""The systems, grids, bounds and tables that the benchmarks of endpoints share."""

from __future__ import annotations

import os
import platform
from collections.abc import Sequence
from dataclasses import dataclass

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np
import numpy.typing as npt
import scipy
from scipy import stats

from analysis.batch import BatchFit
from analysis.curve import Curve
from analysis.simulate import grid, shiftable, simulate_curve, true_x
from analysis.system import Analyte, System

FloatArray = npt.NDArray[np.float64]
NOISE, VOLUME_NOISE = 0.5 / 59.16, 0.003  # pH, mL
OFFSET_SD, PKA_SD = 0.06, 0.03
NEAR = 10.0  # mL, about where the endpoint lies


@dataclass(frozen=True)
class Case:
    """A system, the amount of each analyte for an endpoint at 1 mL, and which equivalence point is looked
    at.
    """

    name: str
    system: System
    per_mL: tuple[float, ...]
    step: int = 0


def acid_base(
    titrant: str, *analytes: Analyte, c: float = 0.1, activity: bool = True, carbonate: float = 0.0
) -> System:
    """An acid-base system with 50 mL in the vessel."""
    return System("acid_base", titrant, c, 50.0, analytes, activity=activity, carbonate=carbonate)


CASES = (
    Case("HCl 0.1", acid_base("base", Analyte("hydrochloric acid")), (0.1,)),
    Case("HCl 0.01", acid_base("base", Analyte("hydrochloric acid"), c=0.01), (0.01,)),
    Case("acetic", acid_base("base", Analyte("acetic acid", (4.756,))), (0.1,)),
    Case("pKa 9", acid_base("base", Analyte("acid", (9.0,))), (0.1,)),
    Case("ammonia", acid_base("acid", Analyte("ammonia", (9.246,), 1)), (0.1,)),
    Case("carbonate first", acid_base("acid", Analyte("carbonate", (6.352, 10.329))), (0.1,)),
    Case("phosphoric first", acid_base("base", Analyte("phosphoric acid", (2.148, 7.198, 12.35))), (0.1,)),
)
GRIDS: dict[str, FloatArray] = {
    "0.5 mL": np.arange(0.0, 15.01, 0.5),
    "0.1 mL near": grid(end=15.0, near=NEAR, coarse=0.5, fine=0.1, width=1.0),
    "0.05 mL near": grid(end=15.0, near=NEAR, coarse=0.5, fine=0.05, width=0.6),
}


def machine() -> str:
    """What the figures were measured on."""
    versions = f"Python {platform.python_version()}, numpy {np.__version__}, scipy {scipy.__version__}"
    return f"{platform.machine()}, {versions}"


def as_curves(volumes: FloatArray, readings: FloatArray, *, quantity: str = "pH") -> list[Curve]:
    """One Curve a row."""
    return [Curve(volumes, row, quantity, ()) for row in readings]


def covered(found: BatchFit, truth: FloatArray, *, step: int) -> FloatArray:
    """Whether the 95 % interval of each curve holds the truth."""
    factor = stats.t.ppf(0.975, found.degrees_of_freedom)
    return np.asarray(np.abs(found.volumes[:, step] - truth) <= factor * found.volume_us[:, step])


def ideal(
    case: Case, volumes: FloatArray, *, count: int, generator: np.random.Generator
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Readings with ideal noise, true endpoints [mL] and the bound on the standard deviation of each [mL].

    Amount, pKa and offset differ from curve to curve: the last two as their priors say.
    """
    truth = NEAR + generator.uniform(-0.3, 0.3, count)
    names = [name for name in shiftable(case.system) if name.startswith("pKa")]
    shifts = {name: generator.normal(0.0, PKA_SD, count) for name in names}
    amounts = truth[:, None] * np.array(case.per_mL)
    readings = simulate_curve(
        case.system, amounts=amounts, volumes=volumes, constants=shifts, generator=generator, noise=NOISE,
        volume_noise=VOLUME_NOISE, offset=generator.normal(0.0, OFFSET_SD, count),
    )  # fmt: skip
    return readings, truth, cramer_rao(case, volumes, amounts=amounts, shifts=shifts)


def cramer_rao(case: Case, volumes: FloatArray, *, amounts: FloatArray, shifts: dict[str, FloatArray]) -> FloatArray:
    """The least standard deviation of each endpoint [mL] of any unbiased estimate, priors counted as data.

    By differences of the simulated curves alone; nothing of the fit is used.
    """
    step = 1e-5

    def x(amount: FloatArray, constants: dict[str, FloatArray], at: FloatArray) -> FloatArray:
        return true_x(case.system, amounts=amount, volumes=at, constants=constants)

    of_volume = 2 * step * amounts.sum(axis=1, keepdims=True) / sum(case.per_mL)
    here = [(x(amounts * (1 + step), shifts, volumes) - x(amounts * (1 - step), shifts, volumes)) / of_volume]
    here.append(np.ones_like(here[0]))
    for name, value in shifts.items():
        up, down = {**shifts, name: value + step}, {**shifts, name: value - step}
        here.append((x(amounts, up, volumes) - x(amounts, down, volumes)) / (2 * step))
    inside = np.maximum(volumes, step)
    steep = (x(amounts, shifts, inside + step) - x(amounts, shifts, inside - step)) / (2 * step)
    scaled = np.stack(here, axis=1) / np.sqrt(NOISE**2 + (steep * VOLUME_NOISE) ** 2)[:, None, :]
    prior = np.diag([0.0, OFFSET_SD**-2.0, *[PKA_SD**-2.0] * len(shifts)])
    return np.asarray(np.sqrt(np.linalg.inv(scaled @ scaled.transpose(0, 2, 1) + prior)[:, 0, 0]))


def table(header: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    """A table in fixed columns."""
    widths = [max(len(row[k]) for row in [header, *rows]) for k in range(len(header))]
    lines = [header, ["-" * width for width in widths], *rows]
    return "\n".join("  ".join(text.ljust(width) for text, width in zip(line, widths, strict=True)) for line in lines)
