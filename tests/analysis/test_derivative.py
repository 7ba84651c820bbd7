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
from tests.support.known_curves import strong_acid

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
    assert u == pytest.approx(0.1 / math.sqrt(12), rel=1e-6)


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
