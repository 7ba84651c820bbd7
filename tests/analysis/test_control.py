"""Limits of control charts, and charts that grow point by point."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import integrate, stats

from analysis.control import individuals_limits, subgroup_limits
from analysis.control_constants import c4, chart_constants, d2, d3
from analysis.running import RunningBaseline, RunningSubgroups

SERIES = st.lists(st.floats(-1e3, 1e3, allow_subnormal=False), min_size=3, max_size=40)


@pytest.mark.parametrize("n", [2, 3, 5, 10, 25])
def test_d2_and_d3_agree_with_the_distribution_of_the_range(n: int) -> None:
    def density(w: float) -> float:
        return integrate.quad(
            lambda x: n * (n - 1) * stats.norm.pdf(x) * stats.norm.pdf(x + w)
            * (stats.norm.cdf(x + w) - stats.norm.cdf(x)) ** (n - 2), -8, 8 - w if w < 8 else 0.1, limit=200,
        )[0]  # fmt: skip

    nodes, weights = np.polynomial.legendre.leggauss(40)
    w = 6.0 * (nodes + 1)
    p = np.array([density(each) for each in w]) * 6.0 * weights
    assert d2(n) == pytest.approx(float(p @ w), abs=2e-6)
    assert d3(n) == pytest.approx(math.sqrt(float(p @ w**2) - float(p @ w) ** 2), abs=2e-5)


def test_d2_and_d3_of_two_values_are_exact() -> None:
    assert d2(2) == pytest.approx(2 / math.sqrt(math.pi), abs=1e-14)
    assert d3(2) == pytest.approx(math.sqrt(2 - 4 / math.pi), abs=1e-12)


def test_c4_is_the_mean_of_a_chi_distribution() -> None:
    for n in (2, 4, 9, 30):
        assert c4(n) == pytest.approx(stats.chi.mean(n - 1) / math.sqrt(n - 1), rel=1e-12)


def test_individuals_limits_leave_an_excluded_point_and_its_two_ranges_out() -> None:
    values = [10.0, 10.2, 15.0, 10.1, 10.3]
    found = individuals_limits(values, excluded={2: "wrong burette"})
    assert found.centre == pytest.approx(10.15)
    assert found.mean_moving_range == pytest.approx(0.2)
    assert (found.values, found.excluded) == (tuple(values), {2: "wrong burette"})


@given(SERIES, st.floats(-100, 100), st.floats(0.01, 100))
def test_individuals_limits_move_and_stretch_with_the_values(values: list[float], shift: float, by: float) -> None:
    if max(values) - min(values) < 1e-3:
        return
    one, other = individuals_limits(values), individuals_limits([by * v + shift for v in values])
    assert other.upper == pytest.approx(by * one.upper + shift, rel=1e-9, abs=1e-6)
    assert other.sigma == pytest.approx(by * one.sigma, rel=1e-9, abs=1e-9)


@given(SERIES)
def test_running_baseline_is_identical_to_the_whole_series(values: list[float]) -> None:
    if all(value == values[0] for value in values):
        return
    running = RunningBaseline()
    for value in values:
        running = running.with_value(value)
    assert running.limits() == individuals_limits(values)


@pytest.mark.parametrize("spread", ["range", "sd"])
def test_running_subgroups_are_identical_to_the_whole_baseline(spread: str) -> None:
    rng = np.random.default_rng(6)
    subgroups = [rng.normal(10, 0.1, n).tolist() for n in rng.integers(2, 7, 60)]
    running = RunningSubgroups(spread)
    for count, subgroup in enumerate(subgroups, start=1):
        running = running.with_subgroup(subgroup)
        assert running.limits() == subgroup_limits(subgroups[:count], spread=spread)


def test_subgroup_limits_of_unequal_sizes_widen_for_the_smaller_subgroup() -> None:
    found = subgroup_limits([[10.0, 10.2, 10.1], [10.1, 10.3], [9.9, 10.0, 10.2]], spread="range")
    three, two, _ = (high - low for low, high in found.mean_limits)
    assert two == pytest.approx(three * math.sqrt(3 / 2))
    assert found.sizes == (3, 2, 3)


@pytest.mark.parametrize(("spread", "factor"), [("range", "A2"), ("sd", "A3")])
def test_subgroup_limits_of_equal_sizes_use_the_factors_of_the_tables(spread: str, factor: str) -> None:
    subgroups = np.random.default_rng(2).normal(10, 0.1, (20, 4)).tolist()
    found = subgroup_limits(subgroups, spread=spread)
    width = getattr(chart_constants(4), factor) * np.mean(found.spreads)
    assert found.mean_limits[0][1] - found.centre == pytest.approx(width, rel=1e-12)


@pytest.mark.parametrize("spread", ["range", "sd"])
def test_subgroup_limits_estimate_the_spread_within_without_bias(spread: str) -> None:
    rng = np.random.default_rng(4)
    subgroups = [rng.normal(size=n).tolist() for n in rng.integers(2, 8, 4000)]
    assert subgroup_limits(subgroups, spread=spread).sigma == pytest.approx(1, abs=0.02)


def test_subgroup_limits_keep_an_excluded_subgroup_on_the_chart() -> None:
    found = subgroup_limits([[1.0, 1.2], [9.0, 9.3], [1.1, 1.2]], spread="sd", excluded={1: "other titrant lot"})
    assert len(found.means) == 3
    assert found.centre == pytest.approx(1.125)


@pytest.mark.parametrize(
    ("values", "excluded", "what"),
    [
        ([1.0], None, "1 values are given"), ([1.0, math.inf], None, "Value 2 is inf"),
        ([1.0, 1.0, 1.0], None, "All values are the same"), ([1.0, 2.0], {0: " "}, "without a reason"),
        ([1.0, 2.0], {5: "spill"}, "at place 5"),
        ([1.0, 2.0, 3.0], {1: "spill"}, "No two neighbouring values"),
    ],
)  # fmt: skip
def test_individuals_limits_refuse_a_baseline_that_is_none(values, excluded, what: str) -> None:
    with pytest.raises(ValueError, match=what):
        individuals_limits(values, excluded=excluded)


@pytest.mark.parametrize(
    ("subgroups", "spread", "what"),
    [
        ([[1.0]], "range", "Subgroup 1 holds 1 values"), ([[1.0, 1.0]], "sd", "No subgroup has any spread"),
        ([[1.0, 2.0]], "iqr", "Spread is 'iqr'"), ([[1.0, math.nan]], "sd", "Subgroup 1, value 2 is nan"),
        ([], "sd", "No subgroup is left"),
    ],
)  # fmt: skip
def test_subgroup_limits_refuse_what_gives_no_limits(subgroups, spread: str, what: str) -> None:
    with pytest.raises(ValueError, match=what):
        subgroup_limits(subgroups, spread=spread)
