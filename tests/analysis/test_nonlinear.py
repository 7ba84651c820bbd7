"""Fits of a formula: what they find, and which parameter cannot be known."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.formula import parse_model
from analysis.nonlinear import fit_formula
from analysis.regression import straight_line

X = [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]
Y = [2.1, 3.9, 6.2, 7.8, 10.1, 12.0]


def test_fit_formula_of_a_line_is_the_least_squares_line() -> None:
    found = fit_formula(parse_model("a + b*x"), x=X, y=Y, start={"a": 0.0, "b": 1.0})
    line = straight_line(X, Y)
    assert (found.parameters["a"], found.parameters["b"]) == pytest.approx((line.intercept, line.slope), rel=1e-9)
    assert (found.u["a"], found.u["b"]) == pytest.approx((line.u_intercept, line.u_slope), rel=1e-9)
    assert found.residual_sd == pytest.approx(line.residual_sd, rel=1e-9)


def test_fit_formula_states_uncertainties_that_cover() -> None:
    rng, x, inside = np.random.default_rng(43), np.linspace(0, 5, 40), 0
    for _ in range(300):
        y = 3 * np.exp(-0.7 * x) + rng.normal(0, 0.05, x.size)
        found = fit_formula(parse_model("a*exp(-k*x)"), x=x.tolist(), y=y.tolist(), start={"a": 2.0, "k": 1.0})
        inside += abs(found.parameters["k"] - 0.7) < 2 * found.u["k"]
    assert 0.91 < inside / 300 < 0.99


@pytest.mark.parametrize(
    ("formula", "start", "what"),
    [
        ("a + b*x + 0*c", {"a": 0.0, "b": 1.0, "c": 1.0}, "Parameter c cannot be known"),
        ("a*b*x", {"a": 1.0, "b": 1.0}, "cannot be known apart from the others"),
        ("log(a - x)", {"a": 2.0}, "gives no number"),
        ("a + b*x", dict.fromkeys("abcdef", 1.0), "6 points are given for 6 parameters"),
    ],
)
def test_fit_formula_says_what_it_cannot_know(formula: str, start: dict[str, float], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        fit_formula(parse_model(formula), x=X, y=Y, start=start)
