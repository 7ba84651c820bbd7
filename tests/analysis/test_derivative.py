"""Endpoints from the slope: where the truth is known, and no better than the grid allows."""

from __future__ import annotations

import math

import numpy as np
import pytest

from analysis.curve import Curve
from analysis.derivative import (
    derivative_parabola,
    first_derivative,
    inverse_square_parabola,
    local_polynomial,
    second_derivative_zero,
)
from analysis.system import Analyte, System
from tests.support.known_curves import recorded, strong_acid

FAMILIES = (second_derivative_zero, derivative_parabola, inverse_square_parabola, local_polynomial)
FINE = np.round(np.arange(0.0, 20.01, 0.1), 3)


def by_hand(volume: list[float], reading: list[float]) -> Curve:
    return Curve(np.array(volume), np.array(reading), "pH", ())


def test_first_derivative_is_the_difference_quotient_at_the_middle() -> None:
    middle, slope = first_derivative(by_hand([0.0, 1.0, 3.0], [2.0, 3.0, 7.0]))
    assert (middle.tolist(), slope.tolist()) == ([0.5, 2.0], [1.0, 2.0])


def test_second_derivative_zero_by_the_textbook_table() -> None:
    # Differences 4, 10, 6 per 0.1 mL: second differences +6 and -4, zero 6/10 of the way from 10.0 to 10.1.
    curve = by_hand([9.9, 10.0, 10.1, 10.2], [0.0, 4.0, 14.0, 20.0])
    volume, u = second_derivative_zero(curve, near=10.05)
    assert volume == pytest.approx(10.0 + 0.1 * 6 / (6 + 4), rel=1e-12)
    assert u == pytest.approx(0.1 / math.sqrt(12))


@pytest.mark.parametrize("family", FAMILIES)
@pytest.mark.parametrize("truth", [10.0, 10.03, 10.05, 10.08])
def test_every_family_finds_the_endpoint_within_the_grid(family, truth: float) -> None:
    volume, u = family(strong_acid(FINE, at=truth), near=truth)
    assert abs(volume - truth) < 0.05  # half a step
    assert 0.1 / math.sqrt(12) == pytest.approx(u, rel=1e-6) or 0.2 / math.sqrt(12) == pytest.approx(u, rel=1e-6)


@pytest.mark.parametrize("family", FAMILIES)
def test_every_family_reads_a_falling_curve_alike(family) -> None:
    rising = strong_acid(FINE, at=10.03)
    falling = Curve(rising.volume, 14.0 - rising.reading, "pH", ())
    assert family(falling, near=10.03)[0] == pytest.approx(family(rising, near=10.03)[0], abs=1e-9)


@pytest.mark.parametrize("family", FAMILIES)
@pytest.mark.parametrize("near", [0.0, 20.0])
def test_every_family_stays_within_the_curve_at_its_edges(family, near: float) -> None:
    volume, u = family(strong_acid(FINE), near=near)
    assert 0.0 <= volume <= 20.0
    assert u > 0


def test_derivative_parabola_and_second_derivative_are_one_method() -> None:
    curve = strong_acid(FINE, at=10.03)
    assert derivative_parabola(curve, near=10.0)[0] == pytest.approx(
        second_derivative_zero(curve, near=10.0)[0], abs=1e-9
    )  # fmt: skip


WEAK = System("acid_base", "base", 0.1, 50.0, (Analyte("acid", (9.0,)),))


@pytest.mark.parametrize("family", FAMILIES)
def test_every_family_states_an_uncertainty_that_covers_a_weak_acid_in_scatter(family) -> None:
    # Steps of 0.05 mL about a flat jump: the steepest interval is any of a dozen, 0.2 mL from the truth at times.
    away = []
    for seed in range(40):
        curve = recorded(WEAK, 1.0, noise=0.0085, generator=np.random.default_rng(seed))
        volume, u = family(curve, near=10.0)
        away.append(abs(volume - 10.0) / u)
    assert np.quantile(away, 0.95) < 1.96


def test_local_polynomial_takes_more_points_where_six_do_not_stand_out() -> None:
    found = []
    for seed in range(40):
        curve = recorded(WEAK, 1.0, noise=0.0085, generator=np.random.default_rng(seed))
        found.append([family(curve, near=10.0)[0] for family in (local_polynomial, second_derivative_zero)])
    smooth, rough = np.std(found, axis=0)
    assert smooth < 0.7 * rough


def test_local_polynomial_takes_what_there_is_where_it_is_asked_for_more() -> None:
    assert local_polynomial(strong_acid(FINE[::25]), near=10.0, points=99)[0] == pytest.approx(10.0, abs=2.5)
