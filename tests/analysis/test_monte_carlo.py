"""Monte Carlo: repeatable, honest about its own scatter, and in agreement with the law of propagation."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from analysis.formula import parse_model
from analysis.monte_carlo import BLOCK, LEAST_BLOCKS, monte_carlo, shortest_interval
from analysis.uncertainty import Input, propagate


def source(
    name: str, value: float, u: float, *, key: str = "", distribution: str = "normal", nu: float = math.inf
) -> Input:
    return Input(name, key or name, name, value, u, "", distribution, degrees_of_freedom=nu)


TITRATION = parse_model("1000*m*P/(M*V)")
SOURCES = (
    source("m", 0.3888, 0.00013, distribution="rectangular"),
    source("P", 1.0, 0.00029, distribution="rectangular"),
    source("M", 204.2212, 0.0038), source("V", 18.64, 0.0136, distribution="triangular"),
)  # fmt: skip


def test_monte_carlo_agrees_with_the_law_of_propagation_for_a_nearly_linear_model() -> None:
    found, law = monte_carlo(TITRATION, SOURCES), propagate(TITRATION, SOURCES)
    assert found.value == pytest.approx(law.value, rel=1e-5)
    assert found.u == pytest.approx(law.u, rel=0.01)
    assert found.is_stable


def test_monte_carlo_with_one_seed_gives_the_same_bits() -> None:
    assert monte_carlo(TITRATION, SOURCES, seed=5) == monte_carlo(TITRATION, SOURCES, seed=5)


def test_monte_carlo_draws_ten_blocks_before_it_may_stop() -> None:
    seen: list[int] = []
    monte_carlo(parse_model("x"), [source("x", 1.0, 0.0)], progress=seen.append)
    assert seen == [BLOCK * count for count in range(1, LEAST_BLOCKS + 1)]


def test_monte_carlo_says_when_its_digits_do_not_stand_still() -> None:
    found = monte_carlo(parse_model("x"), [source("x", 0.0, 1.02)], digits=3, most_draws=BLOCK * LEAST_BLOCKS)
    assert not found.is_stable
    assert found.draws == BLOCK * LEAST_BLOCKS


def test_monte_carlo_draws_one_thing_once_wherever_it_is_used() -> None:
    shared = [source("a", 5.0, 1.0, key="burette"), source("b", 2.0, 1.0, key="burette")]
    assert monte_carlo(parse_model("a - b"), shared).u == pytest.approx(0, abs=1e-12)


@pytest.mark.parametrize("distribution", ["normal", "rectangular", "triangular", "u_shaped"])
def test_monte_carlo_gives_each_distribution_its_standard_deviation(distribution: str) -> None:
    found = monte_carlo(parse_model("x"), [source("x", 3.0, 0.5, distribution=distribution)])
    assert found.u == pytest.approx(0.5, rel=0.01)


def test_monte_carlo_of_few_degrees_of_freedom_has_the_tails_of_student() -> None:
    found = monte_carlo(parse_model("x"), [source("x", 0.0, 1.0, distribution="t", nu=5.0)])
    assert found.interval[1] == pytest.approx(stats.t.ppf(0.975, 5), rel=0.02)


def test_shortest_interval_of_a_skewed_distribution_begins_at_its_steep_side() -> None:
    draws = np.sort(np.random.default_rng(1).exponential(size=200_000))
    low, high = shortest_interval(draws, level=0.95)
    assert low == pytest.approx(0, abs=0.01)
    assert high == pytest.approx(-math.log(0.05), rel=0.02)


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"level": 1.0}, "Level is 1.0"), ({"digits": 7}, "Digits is 7"),
        ({"most_draws": 10}, "Most draws is 10"),
    ],
)  # fmt: skip
def test_monte_carlo_refuses_settings_outside_their_range(changes: dict[str, float], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        monte_carlo(TITRATION, SOURCES, **changes)


def test_monte_carlo_refuses_draws_that_give_no_number() -> None:
    with pytest.raises(ValueError, match="give no number"):
        monte_carlo(parse_model("log(x)"), [source("x", 0.0, 1.0)])


def test_monte_carlo_refuses_a_distribution_it_does_not_know() -> None:
    with pytest.raises(ValueError, match="Distribution of x is 'bent'"):
        monte_carlo(parse_model("x"), [source("x", 0.0, 1.0, distribution="bent")])
