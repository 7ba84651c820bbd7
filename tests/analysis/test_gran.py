"""Gran's lines on every kind of chemistry, in pH and in mV, against the amount that was put in."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from analysis.curve import clean_curve
from analysis.gran import gran, gran_endpoints
from analysis.system import Analyte, System
from tests.support.known_curves import ACETIC, STRONG, recorded, strong_acid

AMMONIA = System("acid_base", "acid", 0.1, 50.0, (Analyte("ammonia", (9.246,), 1),))
IDEAL = replace(STRONG, activity=False)
CHLORIDE = System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", charge=-1, pKs=9.752),))
SILVER = System("precipitation", "halide", 0.1, 50.0, (Analyte("silver", charge=1, pKs=9.752),))
IRON = System("redox", "oxidant", 0.1, 50.0, (Analyte("iron(II)", potential=680.0),), titrant_potential=1440.0)
IODINE = System("redox", "reductant", 0.1, 50.0, (Analyte("iodine", potential=540.0),), titrant_potential=90.0)
CALCIUM = System("complex", "ligand", 0.1, 50.0, (Analyte("calcium", charge=2, log_K=10.25),))
BOTH = replace(ACETIC, analytes=(*STRONG.analytes, *ACETIC.analytes))
HALIDES = replace(CHLORIDE, analytes=(Analyte("iodide", charge=-1, pKs=16.08), *CHLORIDE.analytes))


def base(name: str, *pKa: float) -> System:
    return System("acid_base", "base", 0.1, 50.0, (Analyte(name, pKa),))


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
    volume, u = gran(strong_acid(np.linspace(0.0, 16.0, 65), at=10.03), system=IDEAL, near=10.0)
    assert volume == pytest.approx(10.03, abs=1e-4)
    assert u < 0.04  # the electrode's slope is not known better


def test_gran_uses_one_side_where_the_curve_stops() -> None:
    volume, _ = gran(strong_acid(np.linspace(0.0, 10.1, 53), at=10.0), system=IDEAL, near=10.0)
    assert volume == pytest.approx(10.0, abs=1e-3)


@pytest.mark.parametrize("quantity", ["pH", "mV"])
@pytest.mark.parametrize(
    ("system", "amounts"),
    [
        (base("citric acid", 3.128, 4.761, 6.396), (1 / 3,)),
        (base("phosphoric acid", 2.148, 7.198, 12.35), (0.5,)),
        (base("malonic acid", 2.85, 5.70), (0.5,)),
        (System("acid_base", "acid", 0.1, 50.0, (Analyte("carbonate", (6.352, 10.329)),)), (0.5,)),
        (System("acid_base", "base", 0.1, 50.0, (Analyte("hydrogen phthalate", (2.95, 5.408), lost=1),)), (1.0,)),
        (BOTH, (0.5, 0.5)),
    ],
    ids=["citric", "phosphoric", "malonic", "carbonate", "phthalate", "hydrochloric and acetic"],
)
def test_gran_finds_the_last_jump_of_several_protons(system: System, amounts: tuple, quantity: str) -> None:
    volume, u = gran(recorded(system, *amounts, quantity=quantity), system=system, near=10.1)
    assert volume == pytest.approx(10.0, abs=0.015)
    assert abs(volume - 10.0) < 3 * u < 0.3


@pytest.mark.parametrize(("step", "truth"), [(0, 5.0), (1, 10.0)])
def test_gran_finds_the_chosen_proton(step: int, truth: float) -> None:
    system = base("phosphoric acid", 2.148, 7.198, 12.35)
    volume, u = gran(recorded(system, 0.5, near=truth), system=system, near=truth, step=step)
    assert volume == pytest.approx(truth, abs=0.03)
    assert abs(volume - truth) < 3 * u


def test_gran_leans_on_the_line_that_carbonate_leaves_alone() -> None:
    # 0.15 % of the titrant's concentration in 50 mL: 0.075 mL of it stand beside the acid on the line after.
    curve = recorded(ACETIC, 1.0, constants={"sample carbonate": 0.0015})
    volume, u = gran(curve, system=ACETIC, near=10.0)
    assert abs(volume - 10.0) < 2 * u
    assert volume == pytest.approx(10.0, abs=0.075)


def test_gran_takes_the_carbonate_of_the_titrant_as_given() -> None:
    known = replace(ACETIC, carbonate=0.01)
    curve = recorded(known, 1.0)
    assert gran(curve, system=known, near=10.0)[0] == pytest.approx(10.0, abs=0.03)
    assert abs(gran(curve, system=ACETIC, near=10.0)[0] - 10.0) > 0.03


def test_gran_does_not_need_the_zero_of_the_electrode() -> None:
    # 15 mV off, about what a glass electrode drifts to (common practice); its slope tells.
    curve = recorded(ACETIC, 1.0, quantity="mV", offset=15.0)
    assert gran(curve, system=ACETIC, near=10.0)[0] == pytest.approx(10.0, abs=0.02)


@pytest.mark.parametrize(
    ("system", "amounts", "truths"),
    [
        (base("phosphoric acid", 2.148, 7.198, 12.35), (0.5,), (5.0, 10.0)),
        (base("acid", 4.0, 6.5), (0.5,), (5.0, 10.0)),
        (BOTH, (0.6, 0.4), (6.0, 10.0)),
        (HALIDES, (0.7, 0.3), (7.0, 10.0)),
    ],
    ids=["phosphoric", "neighbours", "hydrochloric and acetic", "iodide and chloride"],
)
def test_gran_endpoints_are_those_of_every_jump(system: System, amounts: tuple, truths: tuple) -> None:
    jumps = [truth + 0.1 for truth in truths]  # no better than a detection gives them
    found = gran_endpoints(recorded(system, *amounts), system=system, jumps=jumps)
    for (volume, u), truth in zip(found, truths, strict=True):
        assert volume == pytest.approx(truth, abs=0.03)
        assert abs(volume - truth) < 3 * u


def test_gran_endpoints_give_the_last_where_another_number_was_found() -> None:
    found = gran_endpoints(recorded(ACETIC, 1.0), system=ACETIC, jumps=[3.0, 10.0])
    assert [volume for volume, _ in found] == pytest.approx([10.0], abs=0.03)


@pytest.mark.parametrize(("step", "truth"), [(0, 6.0), (1, 10.0)])
def test_gran_finds_the_jumps_of_several_acids_by_itself(step: int, truth: float) -> None:
    assert gran(recorded(BOTH, 0.6, 0.4), system=BOTH, near=truth, step=step)[0] == pytest.approx(truth, abs=0.03)


def test_gran_refuses_acids_that_are_titrated_together() -> None:
    both = replace(ACETIC, analytes=(Analyte("formic acid", (3.745,)), *ACETIC.analytes))
    with pytest.raises(ValueError, match=r"^Formic acid and acetic acid are titrated together; Gran's lines need one"):
        gran(recorded(both, 0.5, 0.5), system=both, near=10.0)


def test_gran_refuses_steps_and_places_that_cannot_be() -> None:
    curve, citric = recorded(ACETIC, 1.0), base("citric acid", 3.128, 4.761, 6.396)
    with pytest.raises(ValueError, match=r"^Step is 1; 0 to 0 is expected"):
        gran(curve, system=ACETIC, near=10.0, step=1)
    with pytest.raises(
        ValueError, match=r"^The curve does not jump at step 2 of citric acid; Gran's lines need a jump"
    ):
        gran(curve, system=citric, near=10.0, step=1)
    with pytest.raises(ValueError, match=r"^The endpoint is sought near 0 mL; more than 0 mL is expected"):
        gran(curve, system=ACETIC, near=0.0)


def test_gran_refuses_jumps_that_are_not_those_of_the_chemistry() -> None:
    curve = recorded(BOTH, 0.5, 0.5)
    with pytest.raises(ValueError, match=r"^Endpoints found on the curve: 3; the chemistry has 2"):
        gran(curve, system=BOTH, near=10.0, jumps=[2.0, 5.0, 10.0])
    with pytest.raises(ValueError, match=r"^The endpoints at 12, 10 mL are not those of the chemistry"):
        gran(curve, system=BOTH, near=10.0, jumps=[12.0, 10.0])


def test_gran_says_that_it_has_too_few_points() -> None:
    curve = clean_curve([0, 0.1, 0.2, 9.9, 10, 10.1, 30, 31], [3, 3.1, 3.2, 5, 7, 9, 11, 11.1], quantity="pH")
    with pytest.raises(ValueError, match="Gran's lines need four usable points before or after the endpoint"):
        gran(curve, system=STRONG, near=10.0)


def test_gran_refuses_lines_that_end_outside_the_curve() -> None:
    curve = clean_curve(np.linspace(0, 10, 41), np.linspace(3.0, 3.1, 41), quantity="pH")  # a buffer without end
    with pytest.raises(ValueError, match=r"Gran's lines end at .* mL, outside the curve \(0 to 10 mL\)"):
        gran(curve, system=STRONG, near=9.9)
