"""Molar masses against the library periodictable, and formulas that cannot be read."""

from __future__ import annotations

import math
import re

import periodictable
import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.atomic_weights import WEIGHTS
from analysis.substance import molar_mass, parse_formula

# The reagents of a titration laboratory, as their labels have them.
REAGENTS = [
    "NaOH", "KOH", "HCl", "H2SO4", "C2H4O2", "C6H8O7", "C8H5KO4", "Na2CO3", "NaCl", "AgNO3", "KMnO4", "K2Cr2O7",
    "KIO3", "C4H6O6", "CaCO3", "Ca(OH)2", "C10H14N2Na2O8", "(NH4)2Fe(SO4)2", "Al2(SO4)3", "C4H11NO3",
]  # fmt: skip


@pytest.mark.parametrize("formula", REAGENTS)
def test_molar_mass_agrees_with_periodictable(formula: str) -> None:
    # Tables of different years differ in the last figures of a weight, by up to 1 in 20 000 (lead, zinc, sulfur).
    assert molar_mass(formula).value == pytest.approx(periodictable.formula(formula).mass, rel=5e-5)


@pytest.mark.parametrize("formula", REAGENTS)
def test_parse_formula_counts_the_atoms_as_periodictable_does(formula: str) -> None:
    other = {str(element): count for element, count in periodictable.formula(formula).atoms.items()}
    assert dict(parse_formula(formula)) == other


@pytest.mark.parametrize("sign", ["·", "*", ".", "•"])
def test_parse_formula_reads_a_hydrate(sign: str) -> None:
    assert dict(parse_formula(f"Na2S2O3{sign}5H2O")) == {"Na": 2, "S": 2, "O": 8, "H": 10}
    whole = molar_mass(f"Na2S2O3{sign}5H2O").value
    assert whole == pytest.approx(
        periodictable.formula("Na2S2O3").mass + 5 * periodictable.formula("H2O").mass, rel=5e-5
    )


def test_molar_mass_adds_the_atoms_of_one_element_before_it_squares() -> None:
    # QUAM:2012.P1 example A2, step 3: half-widths rectangular, n atoms share one weight, elements in quadrature.
    found = molar_mass("C8H5KO4")
    by_hand = math.sqrt(
        sum((n * WEIGHTS[e][1] / math.sqrt(3)) ** 2 for e, n in {"C": 8, "H": 5, "K": 1, "O": 4}.items())
    )
    assert found.standard_uncertainty == pytest.approx(by_hand, rel=1e-12)


@given(
    st.lists(st.tuples(st.sampled_from(["H", "C", "O", "Na", "Cl", "Fe"]), st.integers(1, 30)), min_size=1, max_size=6)
)
def test_molar_mass_does_not_depend_on_the_order_of_elements(parts: list[tuple[str, int]]) -> None:
    there = "".join(f"{element}{count}" for element, count in parts)
    back = "".join(f"{element}{count}" for element, count in reversed(parts))
    assert molar_mass(there).value == molar_mass(back).value
    assert molar_mass(there).value == pytest.approx(sum(WEIGHTS[e][0] * n for e, n in parts), rel=1e-12)


@pytest.mark.parametrize(
    "formula", ["", " ", "na2", "Xx", "Na(OH", "NaOH)", "()", "2", "Na0", "·5H2O", "Na2·", "Na99999", "H2O!", "H" * 121]
)  # fmt: skip
def test_molar_mass_refuses_a_formula_by_name(formula: str) -> None:
    with pytest.raises(ValueError, match=f"^Formula is {re.escape(repr(formula))}"):
        molar_mass(formula)


@given(st.text(max_size=30))
def test_molar_mass_refuses_or_reads_any_text(text: str) -> None:
    said = ""
    try:
        assert molar_mass(text).value > 0
    except ValueError as refusal:
        said = str(refusal)
    assert said == "" or said.startswith("Formula is")
