"""Outlier tests: critical values against simulation and other formulas; what a test says."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from analysis.outlier_critical import (
    dixon_critical,
    dixon_tail,
    grubbs_critical,
    opposite_critical,
    pair_critical,
)
from analysis.outliers import dixon, dixon_ratio, esd, grubbs, grubbs_opposite, grubbs_pair

SAMPLES = 60_000


@pytest.fixture(scope="module")
def samples() -> dict[int, np.ndarray]:
    rng = np.random.default_rng(20261124)
    return {n: np.sort(rng.normal(size=(SAMPLES, n)), axis=1) for n in (4, 5, 6, 9, 12, 16)}


@pytest.mark.parametrize(("ratio", "n"), [("r10", 5), ("r11", 9), ("r21", 12), ("r22", 16)])
def test_dixon_critical_is_exceeded_as_often_as_alpha_says(samples, ratio: str, n: int) -> None:
    j, i = {"r10": (1, 1), "r11": (1, 2), "r21": (2, 2), "r22": (2, 3)}[ratio]
    x = samples[n]
    found = (x[:, -1] - x[:, -1 - j]) / (x[:, -1] - x[:, i - 1])
    share = np.mean(found > dixon_critical(n, 0.05, 1, ratio))
    assert share == pytest.approx(0.05, abs=4 * np.sqrt(0.05 * 0.95 / SAMPLES))


@pytest.mark.parametrize("n", [4, 5, 6, 9, 16])
def test_pair_critical_is_undercut_as_often_as_alpha_says(samples, n: int) -> None:
    x = samples[n]
    ratio = x[:, :-2].var(axis=1) * (n - 2) / (x.var(axis=1) * n)
    assert np.mean(ratio < pair_critical(n, 0.05, 1)) == pytest.approx(0.05, abs=0.004)


@pytest.mark.parametrize("n", [4, 6, 12])
def test_opposite_critical_is_exceeded_as_often_as_alpha_says(samples, n: int) -> None:
    x = samples[n]
    ratio = (x[:, -1] - x[:, 0]) / x.std(axis=1, ddof=1)
    assert np.mean(ratio > opposite_critical(n, 0.05)) == pytest.approx(0.05, abs=0.004)


def test_dixon_tail_of_three_values_has_the_closed_form_of_dixon_1951() -> None:
    # For n = 3, P(r10 > r) of one end is the integral of 3 sqrt(3) / (2 pi (1 - r + r^2)).
    for r in (0.3, 0.6, 0.941):
        angle = np.arctan((2 * r - 1) / np.sqrt(3))
        exact = 3 / np.pi * (np.arctan(1 / np.sqrt(3)) - angle) / 1
        assert dixon_tail(r, 3, "r10") == pytest.approx(exact, abs=1e-9)


def test_grubbs_critical_of_three_values_nears_the_largest_possible_statistic() -> None:
    assert grubbs_critical(3, 1e-6, 1) == pytest.approx(2 / np.sqrt(3), abs=1e-9)


@pytest.mark.parametrize(("n", "ratio"), [(3, "r10"), (7, "r10"), (8, "r11"), (11, "r21"), (13, "r21"), (14, "r22")])
def test_dixon_ratio_follows_the_number_of_values(n: int, ratio: str) -> None:
    assert dixon_ratio(n) == ratio


def test_dixon_suspects_the_low_end_as_it_does_the_high_end() -> None:
    high, low = dixon([1, 2, 3, 4, 9]), dixon([-1, -2, -3, -4, -9])
    assert (high.suspect, low.suspect) == (9, -9)
    assert high.statistic == low.statistic


def test_grubbs_pair_finds_the_two_that_hide_each_other() -> None:
    values = [10.00, 10.02, 10.01, 9.99, 10.03, 9.98, 10.90, 10.95]
    assert not grubbs(values, alpha=0.01).is_beyond
    found = grubbs_pair(values, alpha=0.01)
    assert found.is_beyond
    assert found.sentence.startswith("Grubbs, a pair at one end: 10.95 and 10.9 give")


def test_grubbs_opposite_names_both_ends() -> None:
    found = grubbs_opposite([5.0, 10.00, 10.01, 10.02, 9.99, 10.0, 15.0])
    assert (found.suspect, found.others, found.is_beyond) == (5.0, (15.0,), True)


def test_esd_counts_up_to_the_last_step_that_is_beyond() -> None:
    rng = np.random.default_rng(3)
    values = [*rng.normal(size=30), 9.0, 9.4, -8.0]
    steps, count = esd(values, most=5)
    assert count == 3
    assert [step.suspect for step in steps[:3]] == [9.4, 9.0, -8.0]


def test_tests_never_change_the_values_given() -> None:
    values = [10.0, 10.1, 12.0, 10.05]
    for test in (grubbs, dixon, grubbs_pair, grubbs_opposite):
        test(values)
    assert values == [10.0, 10.1, 12.0, 10.05]


@pytest.mark.parametrize("test", [grubbs, dixon])
def test_tests_refuse_values_that_are_all_the_same(test) -> None:
    with pytest.raises(ValueError, match="All values are the same"):
        test([1.0, 1.0, 1.0])


def test_dixon_critical_refuses_too_few_values_for_a_ratio() -> None:
    with pytest.raises(ValueError, match="r22 is for 6 to 100"):
        dixon_critical(5, 0.05, 2, "r22")


def test_grubbs_critical_matches_the_scipy_distribution_of_one_deviation() -> None:
    # One studentized deviation is a scaled beta variable: the bound n * P(deviation > g) = alpha / 2.
    n, g = 8, grubbs_critical(8, 0.05, 2)
    share = stats.beta.sf(n * g**2 / (n - 1) ** 2, 0.5, (n - 2) / 2) / 2
    assert n * share == pytest.approx(0.025, rel=1e-9)
