"""Endpoints at a fixed reading: interpolated by hand, once only, and honest where the curve is flat."""

from __future__ import annotations

import math

import numpy as np
import pytest

from analysis.curve import Curve, clean_curve
from analysis.fixed import fixed_reading
from analysis.noise import noise_of
from tests.support.known_curves import strong_acid

VOLUMES = [float(k) for k in range(8)]
FALLING = [9.0, 8.3, 7.5, 6.8, 6.2, 5.0, 4.0, 3.4]


def test_fixed_reading_interpolates_between_the_two_points_beside_it() -> None:
    volume, _ = fixed_reading(clean_curve(VOLUMES, FALLING, quantity="pH"), reading=4.5, noise=0.0)
    assert volume == pytest.approx(5.5, rel=1e-12)


def test_fixed_reading_admits_the_electrode_and_the_bend_between_two_points() -> None:
    # From 5.0 to 4.0 at 1 pH/mL. The line before, 1.2 pH/mL, reaches 4.5 after 0.5/1.2 mL; the line after, 0.6 pH/mL,
    # has left it 0.5/0.6 mL before the end of the interval: 0.4167 and 0.1667 mL into it, and 0.5 mL straight across.
    _, u = fixed_reading(clean_curve(VOLUMES, FALLING, quantity="pH"), reading=4.5, noise=0.0)
    assert u == pytest.approx(math.hypot(0.06 / 1.0, (1 / 2 - 1 / 6) / math.sqrt(12)), rel=1e-9)


@pytest.mark.parametrize("at", [9.93, 10.02, 10.21])
def test_fixed_reading_admits_the_step_where_the_curve_jumps_within_one(at: float) -> None:
    volume, u = fixed_reading(strong_acid(np.linspace(0.0, 20.0, 41), at=at), reading=7.0, noise=0.0)
    assert abs(volume - at) < 1.96 * u < 0.5


def test_fixed_reading_bends_nowhere_on_a_straight_curve() -> None:
    _, u = fixed_reading(clean_curve(VOLUMES, np.linspace(9.0, 2.0, 8), quantity="pH"), reading=4.4, noise=0.0)
    assert u == pytest.approx(0.06, rel=1e-9)


def test_fixed_reading_takes_a_point_that_is_the_reading() -> None:
    assert fixed_reading(clean_curve(VOLUMES, FALLING, quantity="pH"), reading=5.0, noise=0.0)[0] == 5.0


def test_fixed_reading_takes_the_first_of_several_crossings() -> None:
    readings = [9.0, 8.0, 6.0, 8.0, 6.0, 5.0, 4.0, 3.0]
    assert fixed_reading(clean_curve(VOLUMES, readings, quantity="pH"), reading=7.0, noise=0.0)[0] == 1.5


def test_fixed_reading_says_where_the_curve_runs() -> None:
    with pytest.raises(ValueError, match=r"The curve runs from 3\.4 to 9 pH and does not pass 2\.5"):
        fixed_reading(clean_curve(VOLUMES, FALLING, quantity="pH"), reading=2.5, noise=0.0)


def flat(seed: int) -> Curve:
    """A dense curve of 0.5 pH a millilitre that passes pH 4.5 at 5 mL, with a scatter of 0.02 pH."""
    volumes = np.linspace(0.0, 10.0, 1001)
    scatter = np.random.default_rng(seed).normal(0.0, 0.02, volumes.size)
    return clean_curve(volumes, 7.0 - 0.5 * volumes + scatter, quantity="pH")


def test_fixed_reading_is_not_fooled_by_two_scattered_neighbours() -> None:
    found = [fixed_reading(curve, reading=4.5, noise=noise_of(curve)) for curve in map(flat, range(60))]
    volumes, us = np.array(found).T
    assert np.mean(volumes) == pytest.approx(5.0, abs=0.03)
    assert np.median(us) == pytest.approx(math.hypot(0.06, 0.02) / 0.5, rel=0.25)
    assert np.abs(volumes - 5.0).max() < 3 * us.min()
