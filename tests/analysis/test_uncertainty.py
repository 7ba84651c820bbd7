"""Budgets by second routes: the libraries GTC and uncertainties, and the sums written out."""

from __future__ import annotations

import math

import GTC
import pytest
import uncertainties
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from analysis.uncertainty import Input, coverage_factor, propagate

ONE = st.floats(0.5, 2.0)
SMALL = st.floats(1e-4, 1e-2)


def an_input(name: str, value: float, u: float, *, key: str | None = None, dof: float = math.inf) -> Input:
    return Input(name, key or name, name, value, u, "mL", degrees_of_freedom=dof)


def content(v) -> object:
    """Concentration times net titre over amount: quotients, products and a difference."""
    return v["c"] * (v["titre"] - v["blank"]) / v["m"]


@given(ONE, ONE, SMALL, SMALL, st.integers(2, 60))
def test_propagate_agrees_with_gtc(c: float, m: float, u_c: float, u_m: float, dof: int) -> None:
    parts = {"c": (c, u_c, math.inf), "titre": (16.7, 0.02, dof), "blank": (0.1, 0.01, 4), "m": (m, u_m, math.inf)}
    found = propagate(content, [an_input(name, x, u, dof=nu) for name, (x, u, nu) in parts.items()])
    other = content({name: GTC.ureal(x, u, nu) for name, (x, u, nu) in parts.items()})
    assert found.value == pytest.approx(GTC.value(other), rel=1e-14)
    assert found.u == pytest.approx(GTC.uncertainty(other), rel=1e-12)
    assert found.degrees_of_freedom == pytest.approx(GTC.dof(other), rel=1e-9)


@given(ONE, ONE, SMALL, SMALL)
def test_propagate_agrees_with_uncertainties(c: float, m: float, u_c: float, u_m: float) -> None:
    parts = {"c": (c, u_c), "titre": (16.7, 0.02), "blank": (0.1, 0.01), "m": (m, u_m)}
    found = propagate(content, [an_input(name, x, u) for name, (x, u) in parts.items()])
    other = content({name: uncertainties.ufloat(x, u, name) for name, (x, u) in parts.items()})
    assert found.u == pytest.approx(other.std_dev, rel=1e-12)
    errors = {variable.tag: error for variable, error in other.error_components().items()}
    for line in found.budget:
        assert abs(line.contribution) == pytest.approx(errors[line.key], rel=1e-10)


def test_propagate_takes_inputs_of_one_key_as_one_thing_as_gtc_does_with_correlation_one() -> None:
    """Titre and blank read on one burette: its shift is the same in both and leaves the difference alone."""
    shared = [
        an_input("c", 0.1, 1e-4), an_input("m", 10.0, 0.01),
        an_input("titre", 16.7, 0.03, key="burette"), an_input("blank", 0.1, 0.03, key="burette"),
    ]  # fmt: skip
    titre, blank = GTC.ureal(16.7, 0.03, independent=False), GTC.ureal(0.1, 0.03, independent=False)
    GTC.set_correlation(1.0, titre, blank)
    other = content({"c": GTC.ureal(0.1, 1e-4), "m": GTC.ureal(10.0, 0.01), "titre": titre, "blank": blank})
    found = propagate(content, shared)
    assert found.u == pytest.approx(GTC.uncertainty(other), rel=1e-12)
    assert found.u == pytest.approx(found.value * math.hypot(1e-3, 1e-3), rel=1e-9)  # c and m alone


def test_propagate_adds_signed_contributions_before_it_squares() -> None:
    pair = [an_input("a", 1.0, 0.3, key="one"), an_input("b", 1.0, 0.4, key="one")]
    assert propagate(lambda v: v["a"] + v["b"], pair).u == pytest.approx(0.7)
    assert propagate(lambda v: v["a"] - v["b"], pair).u == pytest.approx(0.1)
    apart = [an_input("a", 1.0, 0.3), an_input("b", 1.0, 0.4)]
    assert propagate(lambda v: v["a"] - v["b"], apart).u == pytest.approx(0.5)


def test_propagate_gives_shares_that_add_to_one() -> None:
    found = propagate(lambda v: 3 * v["a"] + v["b"], [an_input("a", 1.0, 0.1), an_input("b", 1.0, 0.4)])
    assert [line.share for line in found.budget] == pytest.approx([0.09 / 0.25, 0.16 / 0.25])


def test_propagate_finds_the_degrees_of_freedom_of_the_guide() -> None:
    # JCGM 100:2008 G.4.1, example: three factors with relative u of 0.25, 0.57 and 0.82 % from 10, 5 and 15 readings.
    parts = (("a", 0.0025, 9.0), ("b", 0.0057, 4.0), ("c", 0.0082, 14.0))
    found = propagate(lambda v: v["a"] * v["b"] * v["c"], [an_input(name, 1.0, u, dof=nu) for name, u, nu in parts])
    assert found.u == pytest.approx(0.0103, abs=5e-5)
    assert found.degrees_of_freedom == pytest.approx(19.0, abs=0.1)


@pytest.mark.parametrize(
    ("dof", "printed"), [(1, 12.71), (2, 4.30), (5, 2.57), (10, 2.23), (50, 2.01), (math.inf, 1.96)]
)
def test_coverage_factor_is_that_of_the_guide(dof: float, printed: float) -> None:
    assert coverage_factor(dof) == pytest.approx(printed, abs=0.005)  # JCGM 100:2008 table G.2, 95 %


def test_coverage_factor_cuts_degrees_of_freedom_to_a_whole_number() -> None:
    assert coverage_factor(4.99) == pytest.approx(float(stats.t.ppf(0.975, 4)))
    assert coverage_factor(4.99, rule="k2") == 2.0


@pytest.mark.parametrize(("u", "value"), [(-0.1, 1.0), (math.nan, 1.0), (math.inf, 1.0), (0.1, math.nan)])
def test_propagate_refuses_by_name(u: float, value: float) -> None:
    with pytest.raises(ValueError, match=f"^a is {value} with standard uncertainty {u}; finite, not below 0"):
        propagate(lambda v: v["a"], [an_input("a", value, u)])


def test_coverage_factor_refuses_by_name() -> None:
    with pytest.raises(ValueError, match="Coverage rule is 'k3'; expected k2 or effective"):
        coverage_factor(10, rule="k3")
    with pytest.raises(ValueError, match=r"Effective degrees of freedom are 0\.5; at least 1 are needed"):
        coverage_factor(0.5)
