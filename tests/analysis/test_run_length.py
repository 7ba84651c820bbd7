"""Average run lengths: solved ones against simulated ones, and chosen settings that give what was wanted."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from analysis.rule_run_length import ZONE_RULES, rules_run_length
from analysis.run_length import (
    cusum_interval_for,
    cusum_run_length,
    ewma_run_length,
    ewma_width_for,
    shewhart_run_length,
    siegmund_run_length,
)
from analysis.run_rules import flags_of

RUNS = 4000


def simulated(rules: list[str], shift: float) -> tuple[float, float]:
    """Mean run length of many simulated charts, and its standard error."""
    rng, lengths = np.random.default_rng(17), []
    for _ in range(RUNS):
        z = rng.normal(shift, 1, 200)
        broken = np.logical_or.reduce(list(flags_of(z, 0, 1, rules).values()))
        lengths.append(int(broken.argmax()) + 1 if broken.any() else 201)
    return float(np.mean(lengths)), float(np.std(lengths) / np.sqrt(RUNS))


@pytest.mark.parametrize(
    "rules",
    [
        ["one point beyond three sigma", "nine points in a row on one side"],
        ["two of three beyond two sigma", "four of five beyond one sigma"],
    ],
)
def test_rules_run_length_is_that_of_simulated_charts(rules: list[str]) -> None:
    mean, error = simulated(rules, 1.0)
    assert rules_run_length(rules, shift=1.0) == pytest.approx(mean, abs=4 * error)


def test_rules_run_length_of_points_within_one_sigma_is_that_of_a_run() -> None:
    # The mean wait for r successes in a row of probability p is (1 - p^r) / ((1 - p) p^r).
    p = stats.norm.cdf(1) - stats.norm.cdf(-1)
    wait = (1 - p**15) / ((1 - p) * p**15)
    assert rules_run_length(["fifteen points within one sigma"]) == pytest.approx(wait, rel=1e-9)


def test_rules_run_length_falls_with_every_rule_that_is_added() -> None:
    names = list(ZONE_RULES)[:4]
    lengths = [rules_run_length(names[: count + 1]) for count in range(len(names))]
    assert lengths == sorted(lengths, reverse=True)


def test_rules_run_length_of_one_rule_is_that_of_the_chart_of_single_points() -> None:
    for shift in (0.0, 0.7, -2.0):
        alone = rules_run_length(["one point beyond three sigma"], shift=shift)
        assert alone == pytest.approx(shewhart_run_length(shift=shift), rel=1e-10)


def test_ewma_run_length_nears_single_points_as_the_weight_nears_one() -> None:
    assert ewma_run_length(weight=0.999, width=3.0) == pytest.approx(shewhart_run_length(), rel=2e-3)
    assert ewma_run_length(weight=1.0, width=3.0, shift=1.0) == shewhart_run_length(shift=1.0)


@pytest.mark.parametrize("weight", [0.05, 0.2, 0.6])
def test_ewma_width_for_gives_the_run_length_that_was_wanted(weight: float) -> None:
    assert ewma_run_length(weight=weight, width=ewma_width_for(370, weight=weight)) == pytest.approx(370, rel=1e-6)


@pytest.mark.parametrize("reference", [0.25, 0.5, 1.25])
def test_cusum_interval_for_gives_the_run_length_that_was_wanted(reference: float) -> None:
    interval = cusum_interval_for(370, reference=reference)
    assert cusum_run_length(reference=reference, interval=interval) == pytest.approx(370, rel=1e-6)


def test_cusum_run_length_of_two_sides_is_symmetric() -> None:
    settings = {"reference": 0.5, "interval": 4.0}
    assert cusum_run_length(**settings, shift=0.8) == pytest.approx(cusum_run_length(**settings, shift=-0.8))


def test_siegmund_run_length_is_near_the_solved_one() -> None:
    solved = cusum_run_length(reference=0.5, interval=5.0, sides=1, shift=1.0)
    assert siegmund_run_length(reference=0.5, interval=5.0, shift=1.0) == pytest.approx(solved, rel=0.01)


@pytest.mark.parametrize("rules", [[], ["six points in a row rising or falling"]])
def test_rules_run_length_refuses_rules_that_cannot_be_solved(rules: list[str]) -> None:
    with pytest.raises(ValueError, match=r"[Rr]ule"):
        rules_run_length(rules)
