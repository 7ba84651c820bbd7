"""The crossing of two straight lines against lines that are known, and against every split by numpy."""

from __future__ import annotations

import time

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.curve import clean_curve
from analysis.segments import crossing
from tests.support.known_curves import two_lines

VOLUMES = np.linspace(0.0, 20.0, 41)


@pytest.mark.parametrize("slopes", [(-0.4, 0.3), (0.05, 0.6), (0.5, 0.0)])
@pytest.mark.parametrize("truth", [5.0, 9.87, 15.2])
def test_crossing_of_exact_lines_is_exact(slopes: tuple[float, float], truth: float) -> None:
    volume, u = crossing(two_lines(VOLUMES, at=truth, slopes=slopes))
    assert volume == pytest.approx(truth, abs=1e-9)
    assert u < 1e-6


def test_crossing_states_an_uncertainty_that_covers_the_truth() -> None:
    away = []
    for seed in range(200):
        noise = np.random.default_rng(seed).normal(0.0, 0.02, VOLUMES.size)
        curve = two_lines(VOLUMES, at=10.1, slopes=(-0.4, 0.3))
        volume, u = crossing(clean_curve(VOLUMES, curve.reading + noise, quantity="conductivity"))
        away.append((volume - 10.1) / u)
    assert np.std(away) == pytest.approx(1.0, abs=0.25)


def test_crossing_is_not_led_astray_by_a_round_bend() -> None:
    bent = 5.0 + 0.05 * VOLUMES + 0.3 * np.logaddexp(0.0, 2.0 * (VOLUMES - 10.0))  # rounded over about 2 mL
    volume, _ = crossing(clean_curve(VOLUMES, bent, quantity="conductivity"))
    assert volume == pytest.approx(10.0, abs=0.05)


@given(st.integers(0, 10_000), st.floats(4.0, 16.0))
def test_crossing_tries_every_split_as_numpy_does_one_by_one(seed: int, truth: float) -> None:
    noise = np.random.default_rng(seed).normal(0.0, 0.01, VOLUMES.size)
    y = two_lines(VOLUMES, at=truth, slopes=(-0.4, 0.3)).reading + noise

    def misfit(part: slice) -> float:
        line = np.polyfit(VOLUMES[part], y[part], 1)
        return float(((y[part] - np.polyval(line, VOLUMES[part])) ** 2).sum())

    best = min(range(3, 39), key=lambda k: misfit(slice(None, k)) + misfit(slice(k, None)))
    (b1, a1), (b2, a2) = np.polyfit(VOLUMES[:best], y[:best], 1), np.polyfit(VOLUMES[best:], y[best:], 1)
    guess = (a2 - a1) / (b1 - b2)
    left, right = VOLUMES - guess < -1.0, VOLUMES - guess > 1.0  # 5 % of the range on both sides is left out
    (b1, a1), (b2, a2) = np.polyfit(VOLUMES[left], y[left], 1), np.polyfit(VOLUMES[right], y[right], 1)
    volume, _ = crossing(clean_curve(VOLUMES, y, quantity="conductivity"))
    assert volume == pytest.approx((a2 - a1) / (b1 - b2), rel=1e-9)


def test_crossing_takes_ten_thousand_points_in_less_than_a_second() -> None:
    curve = two_lines(np.linspace(0.0, 20.0, 10_000), at=10.1, slopes=(-0.4, 0.3), noise=0.05)
    start = time.perf_counter()
    volume, u = crossing(curve)
    assert time.perf_counter() - start < 1.0
    assert abs(volume - 10.1) < 4 * u


@pytest.mark.parametrize("slope", [0.0, 0.3])
@pytest.mark.parametrize("noise", [0.0, 0.02])
def test_crossing_refuses_one_straight_line(slope: float, noise: float) -> None:
    with pytest.raises(ValueError, match="The two segments are"):
        crossing(two_lines(VOLUMES, at=10.0, slopes=(slope, slope), noise=noise))


def test_crossing_refuses_lines_that_cross_outside_the_curve() -> None:
    y = np.where(VOLUMES < 10.0, 5.0 + 0.1 * VOLUMES, 15.0 + 0.4 * (VOLUMES - 10.0))  # they would meet at -20 mL
    with pytest.raises(ValueError, match=r"The two segments cross at -20 mL, outside the curve \(0 to 20 mL\)"):
        crossing(clean_curve(VOLUMES, y, quantity="conductivity"))
