"""Accuracy of the equilibrium fit under ideal noise: seven systems by three grids against the Cramer-Rao
bound.

Run: python -m tests.benchmarks.endpoint_accuracy [curves per cell]
Must reach: RMS error at most 1.10 of the bound, coverage of the 95 % interval 92 to 98 %.
"""

from __future__ import annotations

import sys

import numpy as np

from analysis.batch import fit_equilibrium_batch
from analysis.fit_problem import FitSettings
from tests.benchmarks.curves import CASES, GRIDS, NEAR, Case, as_curves, covered, ideal, machine, table

SEED = 20261201
MOST_RATIO, LEAST_COVERAGE, MOST_COVERAGE = 1.10, 92.0, 98.0


def cell(case: Case, volumes: np.ndarray, *, count: int, generator: np.random.Generator) -> tuple[list[str], bool]:
    """One system on one grid, and whether it reaches what it must."""
    readings, truth, bound = ideal(case, volumes, count=count, generator=generator)
    settings = FitSettings(nuisance=("offset", "pKa"))
    found = fit_equilibrium_batch(as_curves(volumes, readings), system=case.system, settings=settings)
    error = found.volumes[:, case.step] - truth
    rms, least = float(np.sqrt((error**2).mean())), float(np.sqrt((bound**2).mean()))
    coverage = 100 * float(covered(found, truth, step=case.step).mean())
    good = rms <= MOST_RATIO * least and LEAST_COVERAGE <= coverage <= MOST_COVERAGE
    percent = 100 / NEAR
    return [
        f"{rms * percent:.4f}", f"{least * percent:.4f}", f"{rms / least:.3f}",
        f"{error.mean() * percent:+.4f}",
        f"{coverage:.1f}", "yes" if good else "NO",
    ], good  # fmt: skip


def main(count: int = 1000) -> int:
    """Print the table; 1 when a cell misses."""
    generator, rows, all_good = np.random.default_rng(SEED), [], True
    for case in CASES:
        for name, volumes in GRIDS.items():
            texts, good = cell(case, volumes, count=count, generator=generator)
            rows.append([case.name, name, *texts])
            all_good = all_good and good
    print(f"{count} curves a cell, seed {SEED}; {machine()}")
    print("noise 0.5 mV and 0.003 mL, both unknown to the fit; offset and pKa drawn from their priors; % of the titre")
    print(table(["system", "grid", "RMS %", "bound %", "ratio", "bias %", "coverage %", "reached"], rows))
    return 0 if all_good else 1


if __name__ == "__main__":
    sys.exit(main(*map(int, sys.argv[1:])))
