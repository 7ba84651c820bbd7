"""Every family of endpoints on the same curves: how far off, and how often its 95 % interval holds the truth.

Run: python -m tests.benchmarks.handbook_families [curves per cell]
Must reach: coverage of at least 90 % by every family in every row; where Gran's lines refuse, they say why.
"""

from __future__ import annotations

import sys
from collections.abc import Callable, Sequence

import numpy as np

from analysis.batch import fit_equilibrium_batch
from analysis.curve import Curve
from analysis.derivative import inverse_square_parabola, local_polynomial, second_derivative_zero
from analysis.detection import endpoints_near
from analysis.fit_problem import FitSettings
from analysis.fixed import fixed_reading
from analysis.gran import gran
from analysis.noise import noise_of
from analysis.simulate import true_x
from tests.benchmarks.curves import CASES, GRIDS, NEAR, Case, FloatArray, as_curves, covered, ideal, machine, table

SEED = 20261204
LEAST_COVERAGE = 90.0  # %
WIDE = 1.96  # standard uncertainties in a 95 % interval of a family without degrees of freedom
Found = tuple[float, float]  # volume and standard uncertainty [mL]


def families(case: Case) -> dict[str, Callable[[Curve, float], Found]]:
    """What a handbook does with a curve and the place of its jump; the fixed pH is that of the equivalence point."""
    at_end = np.array([[NEAR * amount for amount in case.per_mL]])
    pH = round(float(true_x(case.system, amounts=at_end, volumes=np.array([NEAR]))[0, 0]), 2)
    return {
        "derivative": lambda curve, near: second_derivative_zero(curve, near=near),
        "parabola": lambda curve, near: inverse_square_parabola(curve, near=near),
        "polynomial": lambda curve, near: local_polynomial(curve, near=near),
        "gran": lambda curve, near: gran(curve, system=case.system, near=near, step=case.step),
        "fixed": lambda curve, near: fixed_reading(curve, reading=pH, noise=noise_of(curve)),
    }


def by_handbook(case: Case, curves: Sequence[Curve]) -> tuple[dict[str, FloatArray], dict[str, str]]:
    """Volume and uncertainty of each family on each curve, not a number where it refuses; and why it refuses."""
    found: dict[str, list[Found]] = {name: [] for name in families(case)}
    said: dict[str, str] = {}
    for curve in curves:
        jumps = endpoints_near(curve, noise=noise_of(curve))
        for name, family in families(case).items():
            try:
                found[name].append(family(curve, jumps[case.step]))
            except ValueError as refusal:
                found[name].append((np.nan, np.nan))
                said[name] = str(refusal)
    return {name: np.array(pairs) for name, pairs in found.items()}, said


def cell(error: FloatArray, within: FloatArray, *, truth: FloatArray) -> tuple[str, bool]:
    """RMS error in per cent of the titre and coverage, and whether that is reached."""
    known = np.isfinite(error)
    if not known.any():
        return "refused", True
    coverage = 100 * float(within[known].mean())
    rms = float(np.sqrt(((100 * error[known] / truth[known]) ** 2).mean()))
    some = "" if known.all() else f" ({100 * known.mean():.0f} %)"
    return f"{rms:.3f} / {coverage:.0f}{some}", coverage >= LEAST_COVERAGE


def row(
    case: Case, volumes: FloatArray, *, count: int, generator: np.random.Generator
) -> tuple[list[str], bool, dict[str, str]]:
    """One system on one grid."""
    readings, truth, bound = ideal(case, volumes, count=count, generator=generator)
    curves = as_curves(volumes, readings)
    found, said = by_handbook(case, curves)
    cells = [
        cell(pairs[:, 0] - truth, np.abs(pairs[:, 0] - truth) <= WIDE * pairs[:, 1], truth=truth)
        for pairs in found.values()
    ]
    fits = fit_equilibrium_batch(curves, system=case.system, settings=FitSettings(nuisance=("offset", "pKa")))
    cells.append(cell(fits.volumes[:, case.step] - truth, covered(fits, truth, step=case.step), truth=truth))
    texts = [text for text, _ in cells]
    return [*texts, f"{100 * np.sqrt((bound**2).mean()) / NEAR:.3f}"], all(good for _, good in cells), said


def main(count: int = 300) -> int:
    """Print the table; 1 when a family misses."""
    generator, rows, all_good, refusals = np.random.default_rng(SEED), [], True, set()
    for case in CASES:
        for name, volumes in GRIDS.items():
            texts, good, said = row(case, volumes, count=count, generator=generator)
            rows.append([f"{case.name}, {name}", *texts, "yes" if good else "NO"])
            refusals |= {f"{case.name}, {name}, {family}: {why}" for family, why in said.items()}
            all_good = all_good and good
    print(f"{count} curves a cell, seed {SEED}; {machine()}")
    print("RMS error in % of the titre / coverage of the 95 % interval in %; noise 0.5 mV and 0.003 mL")
    header = ["system, grid", "derivative", "parabola", "polynomial", "Gran", "fixed", "model", "CRB", "reached"]
    print(table(header, rows))
    print("\n".join(sorted(refusals)))
    return 0 if all_good else 1


if __name__ == "__main__":
    sys.exit(main(*map(int, sys.argv[1:])))
