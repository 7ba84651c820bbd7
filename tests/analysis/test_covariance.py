"""Several results from correlated inputs, by a second route."""

from __future__ import annotations

import numpy as np
import pytest
from uncertainties import correlated_values, correlation_matrix, umath

from analysis.covariance import mean_covariance, propagate_together
from analysis.formula import parse_model
from analysis.uncertainty import Input

FORMULAS = ("V*cos(phi)/I", "V*sin(phi)/I", "V/I")


def sources() -> list[Input]:
    values = {"V": (4.999, 0.0032), "I": (0.019661, 0.0000095), "phi": (1.04446, 0.00075)}
    return [Input(name, name, name, value, u, "") for name, (value, u) in values.items()]


def test_propagate_together_agrees_with_the_uncertainties_package() -> None:
    r = {("V", "I"): -0.36, ("V", "phi"): 0.86, ("I", "phi"): -0.65}
    found = propagate_together([parse_model(text) for text in FORMULAS], sources(), correlations=r)
    matrix = np.array([[1, -0.36, 0.86], [-0.36, 1, -0.65], [0.86, -0.65, 1]])
    u = np.array([item.u for item in sources()])
    v, i, phi = correlated_values([item.value for item in sources()], matrix * np.outer(u, u))
    other = [v * umath.cos(phi) / i, v * umath.sin(phi) / i, v / i]
    assert found.values == pytest.approx([each.n for each in other], rel=1e-12)
    assert found.u == pytest.approx([each.s for each in other], rel=1e-8)
    assert found.correlation == pytest.approx(correlation_matrix(other), abs=1e-8)


def test_propagate_together_of_results_that_share_a_titrant_correlates_them() -> None:
    titrant = Input("c", "lot N26-117", "titrant", 0.1, 0.0001, "mol/L")
    volumes = [Input(f"V{k}", f"V{k}", f"titre {k}", 10.0, 0.01, "mL") for k in (1, 2)]
    found = propagate_together([parse_model("c*V1"), parse_model("c*V2")], [titrant, *volumes])
    assert found.correlation[0, 1] == pytest.approx(0.5, rel=1e-9)


def test_mean_covariance_is_that_of_numpy_over_the_number_of_readings() -> None:
    rows = np.random.default_rng(3).normal(size=(3, 8))
    assert mean_covariance(rows.tolist()) == pytest.approx(np.cov(rows) / 8)


@pytest.mark.parametrize(
    ("r", "what"),
    [
        ({("V", "x"): 0.1}, "two different inputs are expected"), ({("V", "I"): 1.5}, "is 1.5; -1 to 1"),
        ({("V", "I"): 1.0, ("I", "phi"): 1.0, ("V", "phi"): -1.0}, "cannot all hold at once"),
    ],
)  # fmt: skip
def test_propagate_together_refuses_correlations_that_cannot_be(r, what: str) -> None:
    with pytest.raises(ValueError, match=what):
        propagate_together([parse_model("V")], sources(), correlations=r)
