"""Gran's lines on every kind of chemistry, in pH and in mV, against the amount that was put in."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.curve import clean_curve
from analysis.gran import gran
from analysis.system import Analyte, System
from tests.support.known_curves import ACETIC, STRONG, recorded, strong_acid

AMMONIA = System("acid_base", "acid", 0.1, 50.0, (Analyte("ammonia", (9.246,), 1),))
CHLORIDE = System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", charge=-1, pKs=9.752),))
SILVER = System("precipitation", "halide", 0.1, 50.0, (Analyte("silver", charge=1, pKs=9.752),))
IRON = System("redox", "oxidant", 0.1, 50.0, (Analyte("iron(II)", potential=680.0),), titrant_potential=1440.0)
IODINE = System("redox", "reductant", 0.1, 50.0, (Analyte("iodine", potential=540.0),), titrant_potential=90.0)
CALCIUM = System("complex", "ligand", 0.1, 50.0, (Analyte("calcium", charge=2, log_K=10.25),))


@pytest.mark.parametrize("system", [STRONG, ACETIC, AMMONIA], ids=["strong", "acetic", "ammonia"])
@pytest.mark.parametrize("quantity", ["pH", "mV"])
def test_gran_finds_an_acid_or_a_base_in_pH_and_in_mV(system: System, quantity: str) -> None:
    volume, u = gran(recorded(system, 1.0, quantity=quantity), system=system, near=10.0)
    assert volume == pytest.approx(10.0, abs=0.03)  # activity is taken as constant
    assert abs(volume - 10.0) < 4 * u


@pytest.mark.parametrize(
    "system", [CHLORIDE, SILVER, IRON, IODINE, CALCIUM], ids=["chloride", "silver", "iron", "iodine", "calcium"]
)  # fmt: skip
def test_gran_finds_the_endpoint_of_every_other_kind(system: System) -> None:
    volume, u = gran(recorded(system, 1.0), system=system, near=10.0)
    assert volume == pytest.approx(10.0, abs=0.02)
    assert abs(volume - 10.0) < 4 * u


def test_gran_is_exact_without_scatter_and_activity() -> None:
    # Strong acid in closed form: (V0 + V) 10^-pH is a straight line to zero at the equivalence point.
    volume, u = gran(strong_acid(np.linspace(0.0, 16.0, 65), at=10.03), system=STRONG, near=10.0)
    assert volume == pytest.approx(10.03, abs=1e-4)
    assert u < 1e-3


def test_gran_uses_one_side_where_the_curve_stops() -> None:
    volume, _ = gran(strong_acid(np.linspace(0.0, 10.4, 53), at=10.0), system=STRONG, near=10.0)
    assert volume == pytest.approx(10.0, abs=1e-3)


def test_gran_knows_less_where_its_lines_disagree() -> None:
    citric = System("acid_base", "base", 0.1, 50.0, (Analyte("citric acid", (3.128, 4.761, 6.396)),))
    _, u = gran(recorded(citric, 0.4, end=19.0, near=12.0), system=citric, near=12.0)
    assert u > 0.1  # the line before is not straight while three steps overlap


def test_gran_says_that_it_has_too_few_points() -> None:
    curve = clean_curve([0, 0.1, 0.2, 9.9, 10, 10.1, 30, 31], [3, 3.1, 3.2, 5, 7, 9, 11, 11.1], quantity="pH")
    with pytest.raises(ValueError, match="Gran's lines need four usable points before or after the endpoint"):
        gran(curve, system=STRONG, near=10.0)


def test_gran_refuses_lines_that_end_outside_the_curve() -> None:
    curve = clean_curve(np.linspace(0, 10, 41), np.linspace(3.0, 3.1, 41), quantity="pH")  # a buffer without end
    with pytest.raises(ValueError, match=r"Gran's lines end at .* mL, outside the curve \(0 to 10 mL\)"):
        gran(curve, system=STRONG, near=9.9)
