"""Curves of textbooks by the equilibrium model, with the constants the books use and without activities.

The books take Kw as 1.00e-14 where the model has 1.01e-14; values in excess base may differ by 0.006 for
that.
"""

from __future__ import annotations

import numpy as np
import pytest

from analysis.activity import nernst
from analysis.simulate import true_x
from analysis.system import Analyte, System

OF_KW = 0.006


def pH(analyte: Analyte, volume: float, *, sample: float, c_sample: float, c_titrant: float) -> float:
    system = System("acid_base", "base", c_titrant, sample, (analyte,), activity=False)
    found = true_x(system, amounts=np.array([[sample * c_sample]]), volumes=np.array([max(volume, 1e-9)]))
    return float(found[0, 0])


@pytest.mark.parametrize(
    ("volume", "expected"),
    [(0, 1.00), (10, 1.30), (20, 1.85), (25, 7.00), (30, 12.10), (40, 12.52), (50, 12.70)],
)  # Harvey, Analytical Chemistry 2.1, section 9.2: 50.0 mL 0.100 mol/L HCl, 0.200 mol/L NaOH; from memory
def test_true_x_gives_harveys_strong_acid(volume: float, expected: float) -> None:
    found = pH(Analyte("HCl"), volume, sample=50.0, c_sample=0.1, c_titrant=0.2)
    assert found == pytest.approx(expected, abs=0.006 + OF_KW)


@pytest.mark.parametrize(
    ("volume", "expected"),
    [
        (25.0, 7.00),
        (25.1, 10.30),
        (25.5, 11.00),
        (26.0, 11.29),
        (28.0, 11.75),
        (30.0, 11.96),
        (35.0, 12.22),
        (40.0, 12.36),
        (45.0, 12.46),
        (50.0, 12.52),
    ],
)  # OpenStax Chemistry: Atoms First, table 14.4: 25.0 mL 0.100 mol/L HCl, 0.100 mol/L NaOH; found
def test_true_x_gives_the_strong_acid_of_openstax(volume: float, expected: float) -> None:
    found = pH(Analyte("HCl"), volume, sample=25.0, c_sample=0.1, c_titrant=0.1)
    assert found == pytest.approx(expected, abs=0.006 + OF_KW)


ACETIC = Analyte("acetic acid", (-np.log10(1.8e-5),))


@pytest.mark.parametrize(
    ("volume", "expected"), [(25.0, 8.72), (25.1, 10.30), (25.5, 11.00), (26.0, 11.29), (30.0, 11.96)]
)  # OpenStax Chemistry: Atoms First, table 14.4: 25.0 mL 0.100 mol/L acetic acid; found
def test_true_x_gives_the_acetic_acid_of_openstax(volume: float, expected: float) -> None:
    found = pH(ACETIC, volume, sample=25.0, c_sample=0.1, c_titrant=0.1)
    assert found == pytest.approx(expected, abs=0.006 + OF_KW)


@pytest.mark.parametrize(
    ("volume", "expected"),
    [
        (20, 4.14),
        (50, 4.74),
        (75, 5.22),
        (90, 5.70),
        (95, 6.02),
        (99, 6.74),
        (100, 8.72),
        (101, 10.70),
        (110, 11.68),
        (120, 11.96),
    ],
)  # Whitten et al., General Chemistry, table 19-6: 100.0 mL 0.100 mol/L acetic acid; found. The
# printed 2.89 of the start is not used: the exact value is 2.875.
def test_true_x_gives_the_acetic_acid_of_whitten(volume: float, expected: float) -> None:
    found = pH(ACETIC, volume, sample=100.0, c_sample=0.1, c_titrant=0.1)
    assert found == pytest.approx(expected, abs=0.007 + OF_KW)


@pytest.mark.parametrize(
    ("formal", "analyte", "pKa", "expected"),
    [
        (0.1, "acetic acid", (4.756,), 2.88),  # exact quadratic
        (0.01, "citric acid", (3.128, 4.761, 6.396), 2.62),  # exact cubic by hand; from memory
        (0.1, "phosphoric acid", (2.148, 7.198, 12.35), 1.63),  # textbooks print 1.62 to 1.64; from memory
    ],
)
def test_true_x_gives_the_start_of_weak_acids(
    formal: float, analyte: str, pKa: tuple[float, ...], expected: float
) -> None:
    found = pH(Analyte(analyte, pKa), 0.0, sample=50.0, c_sample=formal, c_titrant=0.1)
    assert found == pytest.approx(expected, abs=0.01)


@pytest.mark.parametrize(
    ("system", "amount", "volume", "expected"),
    [
        # Harris, Quantitative Chemical Analysis: 0.05 mol/L I- with 0.05 mol/L Ag+, pKs 16.08; from memory
        (System("precipitation", "silver", 0.05, 25.0, (Analyte("iodide", pKs=16.08),)), 1.25, 25.0, 8.04),
        # Skoog and West: 50.0 mL 0.0500 mol/L NaCl, 0.1000 mol/L AgNO3, Ks 1.82e-10; pAg 4.87; from memory
        (System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", pKs=9.740),)), 2.5, 25.0, 4.87),
        # the same at 10.00 mL, pAg 8.14, and at 26.00 mL, pAg 2.88; from memory
        (System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", pKs=9.740),)), 2.5, 10.0, 8.14),
        (System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", pKs=9.740),)), 2.5, 26.0, 2.88),
        # Skoog and West: 50.0 mL 0.00500 mol/L Ca with 0.0100 mol/L EDTA at pH 10, K' 1.75e10: pCa 6.36, and
        # 2.81 at 15.00 mL, 8.84 at 26.00 mL; from memory
        (System("complex", "ligand", 0.01, 50.0, (Analyte("Ca", charge=2, log_K=10.243),)), 0.25, 25.0, 6.36),
        (System("complex", "ligand", 0.01, 50.0, (Analyte("Ca", charge=2, log_K=10.243),)), 0.25, 15.0, 2.81),
        (System("complex", "ligand", 0.01, 50.0, (Analyte("Ca", charge=2, log_K=10.243),)), 0.25, 26.0, 8.84),
    ],
)
def test_true_x_gives_printed_points_of_other_titrations(
    system: System, amount: float, volume: float, expected: float
) -> None:
    found = true_x(system, amounts=np.array([[amount]]), volumes=np.array([volume]))[0, 0]
    assert found == pytest.approx(expected, abs=0.012)


@pytest.mark.parametrize(
    ("volume", "expected"),
    [(5.0, 0.64), (15.0, 0.69), (20.0, 0.72), (25.0, 1.06), (25.1, 1.30), (26.0, 1.36)],
)  # Skoog and West: 50.0 mL 0.0500 mol/L Fe2+ with 0.1000 mol/L Ce4+ in sulfuric acid, in V; from memory
def test_true_x_gives_iron_with_cerium(volume: float, expected: float) -> None:
    iron = Analyte("iron(II)", potential=680.0)
    system = System("redox", "oxidant", 0.1, 50.0, (iron,), titrant_potential=1440.0)
    x = true_x(system, amounts=np.array([[2.5]]), volumes=np.array([volume]))[0, 0]
    assert nernst() * x / 1000 == pytest.approx(expected, abs=0.0055)
