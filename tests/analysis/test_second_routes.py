"""The same numbers by reference libraries: statsmodels, scipy and GTC."""

from __future__ import annotations

import GTC
import numpy as np
import pytest
from scipy import stats
from statsmodels.regression.linear_model import OLS
from statsmodels.tools import add_constant

from analysis.buffer import electrode_slope, nernst_slope
from analysis.catalogue import calculate
from analysis.groups import one_way
from analysis.regression import straight_line
from analysis.solution_ph import Species, solution_ph, titrated_ph


def test_straight_line_agrees_with_statsmodels() -> None:
    rng = np.random.default_rng(31)
    x = np.linspace(1, 9, 12)
    y = 2.5 - 0.3 * x + rng.normal(0, 0.1, 12)
    found, other = straight_line(x.tolist(), y.tolist()), OLS(y, add_constant(x)).fit()
    assert (found.intercept, found.slope) == pytest.approx(tuple(other.params), rel=1e-12)
    assert (found.u_intercept, found.u_slope) == pytest.approx(tuple(other.bse), rel=1e-12)
    assert found.r_squared == pytest.approx(other.rsquared, rel=1e-12)


def test_one_way_agrees_with_scipy_for_groups_of_unequal_size() -> None:
    rng = np.random.default_rng(37)
    groups = [rng.normal(10 + k * 0.1, 0.2, n).tolist() for k, n in enumerate((3, 5, 4, 7))]
    found, other = one_way(groups), stats.f_oneway(*groups)
    assert (found.f, found.p) == pytest.approx((other.statistic, other.pvalue), rel=1e-10)


def test_one_way_finds_the_spread_between_days() -> None:
    rng = np.random.default_rng(41)
    groups = [(rng.normal(0, 0.3) + rng.normal(0, 0.1, 4)).tolist() for _ in range(3000)]
    found = one_way(groups)
    assert (found.repeatability_sd, found.between_sd) == pytest.approx((0.1, 0.3), rel=0.05)


def test_uncertainty_budget_agrees_with_gtc() -> None:
    inputs = {
        "m": {"value": 0.5105, "u": 0.0002, "degrees_of_freedom": 8},
        "V": {"value": 24.85, "u": 0.02, "degrees_of_freedom": 4},
    }  # fmt: skip
    found = calculate("uncertainty_budget", {"formula": "1000*m/(204.221*V)", "inputs": inputs})
    m, v = (GTC.ureal(each["value"], each["u"], each["degrees_of_freedom"]) for each in inputs.values())
    other = 1000 * m / (204.221 * v)
    assert found["value"] == pytest.approx(GTC.value(other), rel=1e-14)
    assert found["u"] == pytest.approx(GTC.uncertainty(other), rel=1e-12)
    assert found["degrees_of_freedom"] == pytest.approx(GTC.dof(other), rel=1e-9)


def test_solution_ph_of_a_strong_acid_is_its_logarithm() -> None:
    assert solution_ph([], strong=-0.01) == pytest.approx(2.0, abs=1e-10)


def test_solution_ph_of_a_buffer_is_its_pka_by_henderson_and_hasselbalch() -> None:
    assert solution_ph([Species(0.2, (7.0,))], strong=0.1) == pytest.approx(7.0, abs=1e-6)


def test_titrated_ph_half_way_between_two_steps_is_their_mean() -> None:
    # The first equivalence point of carbonate with acid lies at (pK1 + pK2) / 2, about 8.34.
    found = titrated_ph(
        [Species(0.05, (6.352, 10.329))], strong=0.1, sample_volume=50, titrant_volume=25,
        titrant_concentration=0.1, titrant_charge=-1,
    )  # fmt: skip
    assert found == pytest.approx((6.352 + 10.329) / 2, abs=0.01)


def test_electrode_slope_of_an_ideal_electrode_is_100_percent() -> None:
    slope = nernst_slope(25.0)
    found = electrode_slope(
        first_ph=4.005, first_mv=slope * 2.995, second_ph=9.18, second_mv=-slope * 2.18, temperature=25.0
    )
    assert found == pytest.approx(100.0, rel=1e-12)
