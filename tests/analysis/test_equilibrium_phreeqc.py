"""PHREEQC as an independent source of curves: another code, other activity coefficients, ion pairs."""

from __future__ import annotations

import numpy as np
import pytest
from phreeqpython import PhreeqPython

from analysis.curve import Curve
from analysis.equilibrium import fit_equilibrium
from analysis.simulate import simulate_curve
from tests.benchmarks.curves import GRIDS
from tests.benchmarks.endpoint_phreeqc import SEALED, SOLUTIONS, Solution, phreeqc_curve

VOLUMES = GRIDS["0.1 mL near"]


@pytest.fixture(scope="module")
def engine() -> PhreeqPython:
    return PhreeqPython(database="phreeqc.dat")


@pytest.mark.parametrize("solution", SOLUTIONS, ids=lambda solution: solution.name)
def test_fit_equilibrium_finds_the_endpoint_of_a_phreeqc_curve(engine: PhreeqPython, solution: Solution) -> None:
    reading = phreeqc_curve(engine, solution, volumes=VOLUMES, endpoint=9.93)
    fit = fit_equilibrium(Curve(VOLUMES, reading, "pH", ()), system=solution.system, settings=SEALED, noise=0.004)
    assert fit.equivalences[solution.step].volume == pytest.approx(9.93, rel=2e-4)


@pytest.mark.parametrize("solution", SOLUTIONS, ids=lambda solution: solution.name)
def test_simulate_curve_follows_phreeqc(engine: PhreeqPython, solution: Solution) -> None:
    """Within what Davies and the database's own activity coefficients differ."""
    reading = phreeqc_curve(engine, solution, volumes=VOLUMES, endpoint=9.93)
    amount = np.array([9.93 * solution.system.titrant_concentration / solution.protons])
    here = simulate_curve(solution.system, amounts=amount, volumes=VOLUMES)
    assert np.median(np.abs(here - reading)) < 0.05
