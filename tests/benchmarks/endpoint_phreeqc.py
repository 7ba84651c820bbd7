"""The equilibrium fit on curves that PHREEQC computed with its stock database: another code, other activity
coefficients, ion pairs the model does not know.

Run: python -m tests.benchmarks.endpoint_phreeqc [curves per cell]
Must reach: bias at most 0.01 % of the titre, coverage of the 95 % interval 92 to 98 %.
"""

from __future__ import annotations

import sys
from dataclasses import dataclass

import numpy as np

try:
    from phreeqpython import PhreeqPython
except ImportError:  # a laboratory's installation has no test libraries
    raise SystemExit(print("Left out: phreeqpython, the independent source of curves, is not installed.")) from None

from analysis.batch import fit_equilibrium_batch
from analysis.fit_problem import FitSettings
from analysis.system import Analyte, System
from tests.benchmarks.curves import (
    GRIDS,
    NEAR,
    NOISE,
    OFFSET_SD,
    VOLUME_NOISE,
    FloatArray,
    acid_base,
    as_curves,
    covered,
    machine,
    table,
)  # fmt: skip

SEED = 20261203
MOST_BIAS, LEAST_COVERAGE, MOST_COVERAGE = 0.01, 92.0, 98.0  # %
KILOGRAM_OF_WATER = 55.50837  # mol
SEALED = FitSettings(nuisance=("offset", "slope", "pKa", "drift"))  # no carbon dioxide, and readings that have settled
INPUT = """SOLUTION 1
    units mol/kgw
    water 0.05
    temp 25
    pH 7 charge
    {totals}
REACTION 1
    {titrant} 1 H2O {water}
    {moles} moles
SELECTED_OUTPUT
    -reset false
    -pH true
END
"""


@dataclass(frozen=True)
class Solution:
    """What is titrated, as PHREEQC and as the model are told; constants are those of the database."""

    name: str
    system: System
    totals: tuple[tuple[str, float], ...]  # mol of each element per mol of analyte
    titrant: str
    step: int
    protons: int


PHOSPHORIC = Analyte("phosphoric acid", (2.168, 7.207, 12.346))
SOLUTIONS = (
    Solution("hydrochloric acid", acid_base("base", Analyte("HCl")), (("Cl", 1.0),), "NaOH", 0, 1),
    Solution("sodium hydroxide", acid_base("acid", Analyte("NaOH")), (("Na", 1.0),), "HCl", 0, 1),
    Solution("boric acid", acid_base("base", Analyte("boric acid", (9.24,))), (("B", 1.0),), "NaOH", 0, 1),
    Solution(
        "hydrogen carbonate", acid_base("acid", Analyte("carbonate", (6.352, 10.329), lost=1)),
        (("Na", 1.0), ("C(4)", 1.0)), "HCl", 0, 1,
    ),
    Solution(
        "carbonate, second", acid_base("acid", Analyte("carbonate", (6.352, 10.329))),
        (("Na", 2.0), ("C(4)", 1.0)), "HCl", 1, 2,
    ),
    Solution(
        "phosphoric, first", acid_base("base", PHOSPHORIC), (("P", 1.0),), "NaOH", 0, 1,
    ),
    Solution(
        "phosphoric, second", acid_base("base", PHOSPHORIC), (("P", 1.0),), "NaOH", 1, 2,
    ),
)  # fmt: skip


def phreeqc_curve(engine: PhreeqPython, solution: Solution, *, volumes: FloatArray, endpoint: float) -> FloatArray:
    """pH at each volume [mL per kilogram of water as a litre] for an endpoint [mL]."""
    c, vessel = solution.system.titrant_concentration, solution.system.sample_volume
    molality = endpoint * c / vessel / solution.protons
    engine.ip.run_string(
        INPUT.format(
            totals="\n    ".join(f"{element} {share * molality:.15g}" for element, share in solution.totals),
            titrant=solution.titrant,
            water=KILOGRAM_OF_WATER / c,
            moles=" ".join(f"{max(v, 1e-9) * c / 1000:.15g}" for v in volumes),
        )
    )
    rows = engine.ip.get_selected_output_array()
    return np.array([row[0] for row in rows[-volumes.size :]], dtype=float)


def cell(
    engine: PhreeqPython,
    solution: Solution,
    volumes: FloatArray,
    *,
    count: int,
    generator: np.random.Generator,
) -> tuple[list[str], bool]:
    """One solution on one grid, and whether it reaches what it must."""
    truth = NEAR + generator.uniform(-0.3, 0.3, count)
    error = generator.normal(0.0, VOLUME_NOISE, (count, volumes.size))
    delivered = volumes + np.where(volumes > 0, error, 0.0)
    readings = np.array(
        [
            phreeqc_curve(engine, solution, volumes=row, endpoint=float(endpoint))
            for row, endpoint in zip(delivered, truth, strict=True)
        ]
    )
    readings += generator.normal(0.0, NOISE, readings.shape) + generator.normal(0.0, OFFSET_SD, (count, 1))
    found = fit_equilibrium_batch(as_curves(volumes, readings), system=solution.system, settings=SEALED)
    error = 100 * (found.volumes[:, solution.step] - truth) / truth
    coverage = 100 * float(covered(found, truth, step=solution.step).mean())
    bias, rms = float(error.mean()), float(np.sqrt((error**2).mean()))
    good = abs(bias) <= MOST_BIAS and LEAST_COVERAGE <= coverage <= MOST_COVERAGE
    return [
        f"{rms:.4f}", f"{bias:+.4f}", f"{rms / np.sqrt(count):.4f}", f"{coverage:.1f}",
        f"{found.chi2_nu.mean():.2f}",
        "yes" if good else "NO",
    ], good  # fmt: skip


def main(count: int = 1000) -> int:
    """Print the table; 1 when a cell misses."""
    engine = PhreeqPython(database="phreeqc.dat")
    generator, rows, all_good = np.random.default_rng(SEED), [], True
    for solution in SOLUTIONS:
        for name in ("0.1 mL near", "0.05 mL near"):
            texts, good = cell(engine, solution, GRIDS[name], count=count, generator=generator)
            rows.append([solution.name, name, *texts])
            all_good = all_good and good
    print(f"{count} curves a cell, seed {SEED}; {machine()}")
    print("PHREEQC with phreeqc.dat; noise 0.5 mV and 0.003 mL, offset of the electrode 0.06 pH")
    print(table(["solution", "grid", "RMS %", "bias %", "u(bias) %", "coverage %", "chi2/nu", "reached"], rows))
    return 0 if all_good else 1


if __name__ == "__main__":
    sys.exit(main(*map(int, sys.argv[1:])))
