"""Charts with memory: against their recursions, and point by point."""

from __future__ import annotations

import math

import numpy as np
import pytest

from analysis.ewma_cusum import cusum, ewma, shift_estimate
from analysis.run_rules import RULES, signals
from analysis.running import RunningChart


@pytest.fixture(scope="module")
def series() -> list[float]:
    return np.random.default_rng(11).normal(10.02, 0.1, 400).tolist()


def test_ewma_follows_its_recursion(series: list[float]) -> None:
    found = ewma(series, target=10.0, sigma=0.1, weight=0.25)
    z = 10.0
    for place, value in enumerate(series):
        z = 0.25 * value + 0.75 * z
        assert found.z[place] == pytest.approx(z, rel=1e-13)


def test_ewma_limits_widen_to_the_steady_ones(series: list[float]) -> None:
    found = ewma(series, target=10.0, sigma=0.1, weight=0.2, width=3.0)
    steady = ewma(series, target=10.0, sigma=0.1, weight=0.2, width=3.0, is_steady=True)
    assert found.upper[0] == pytest.approx(10.0 + 3 * 0.1 * 0.2)
    assert np.all(np.diff(found.upper) >= 0)
    assert found.upper[-1] == pytest.approx(steady.upper[-1], rel=1e-12)


def test_ewma_with_weight_one_is_the_chart_of_single_points(series: list[float]) -> None:
    assert ewma(series, target=10.0, sigma=0.1, weight=1.0).z.tolist() == pytest.approx(series, rel=1e-15)


@pytest.mark.parametrize("head_start", [0.0, 2.5])
def test_cusum_follows_its_recursion(series: list[float], head_start: float) -> None:
    found = cusum(series, target=10.0, sigma=0.1, reference=0.5, interval=5.0, head_start=head_start)
    up = down = head_start
    for place, value in enumerate(series):
        z = (value - 10.0) / 0.1
        up, down = max(0.0, up + z - 0.5), max(0.0, down - z - 0.5)
        assert found.upper[place] == pytest.approx(up, abs=1e-10)
        assert found.lower[place] == pytest.approx(down, abs=1e-10)


def test_cusum_of_mirrored_values_changes_its_sides(series: list[float]) -> None:
    one = cusum(series, target=10.0, sigma=0.1)
    other = cusum([20.0 - value for value in series], target=10.0, sigma=0.1)
    assert other.lower == pytest.approx(one.upper, abs=1e-9)


def test_shift_estimate_finds_when_and_how_far_the_mean_moved() -> None:
    values = [10.0] * 30 + [10.2] * 10
    found = shift_estimate(cusum(values, target=10.0, sigma=0.1))
    assert found is not None
    start, mean = found
    assert start == 30
    assert mean == pytest.approx(10.2)


def test_shift_estimate_without_a_signal_is_none() -> None:
    assert shift_estimate(cusum([10.0] * 5, target=10.0, sigma=0.1)) is None


def test_running_chart_is_identical_to_the_whole_series(series: list[float]) -> None:
    chart = RunningChart(10.0, 0.1, tuple(RULES), head_start=2.5)
    z = ewma(series, target=10.0, sigma=0.1).z
    sums = cusum(series, target=10.0, sigma=0.1, head_start=2.5)
    broken = signals(series, centre=10.0, sigma=0.1, rules=RULES)
    for place, value in enumerate(series):
        chart = chart.with_value(value)
        assert chart.average == z[place]
        assert (chart.cusum_upper, chart.cusum_lower) == (sums.upper[place], sums.lower[place])
        assert chart.broken == tuple(name for name in RULES if place in broken.get(name, []))


def test_running_chart_in_one_go_is_the_same_as_point_by_point(series: list[float]) -> None:
    start = RunningChart(10.0, 0.1, tuple(RULES))
    assert start.with_values(series) == start.with_values(series[:100]).with_values(series[100:])


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"sigma": 0}, "Sigma is 0"), ({"target": math.nan}, "Target is nan"), ({"weight": 0}, "Weight is 0"),
        ({"weight": 1.1}, "Weight is 1.1"), ({"width": -1}, "Width is -1"),
    ],
)  # fmt: skip
def test_ewma_refuses_settings_outside_their_range(changes: dict[str, float], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        ewma([1.0], **{"target": 0.0, "sigma": 1.0, **changes})


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"reference": -1}, "Reference value is -1"),
        ({"interval": 0}, "interval is 0"),
        ({"head_start": 9}, "Head start is 9"),
    ],
)
def test_cusum_refuses_settings_outside_their_range(changes: dict[str, float], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        cusum([1.0], **{"target": 0.0, "sigma": 1.0, **changes})
