"""Activity coefficients and constants against printed values."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.activity import davies_a, log_gamma, nernst, water_pK


@pytest.mark.parametrize(
    ("charge", "strength", "expected"),
    [(1, 0.01, 0.90), (1, 0.1, 0.78), (2, 0.01, 0.66), (2, 0.1, 0.37), (3, 0.1, 0.11)],
)  # Butler, Ionic Equilibrium, Davies coefficients; from memory
def test_log_gamma_gives_the_davies_coefficients(charge: int, strength: float, expected: float) -> None:
    found = 10.0 ** log_gamma(np.array([strength]), charge=charge)[0]
    assert found == pytest.approx(expected, abs=0.006)


@pytest.mark.parametrize(
    ("temperature", "expected"),
    [(0, 14.944), (10, 14.535), (20, 14.167), (25, 13.997), (30, 13.833), (50, 13.262)],
)  # Harned and Owen (1958), ionization of water; from memory
def test_water_pK_gives_the_ionization_of_water(temperature: float, expected: float) -> None:
    assert water_pK(temperature) == pytest.approx(expected, abs=0.006)


@pytest.mark.parametrize(("temperature", "expected"), [(0, 54.20), (18, 57.77), (25, 59.16), (50, 64.12)])
# SI constants of 2019; tabulated in handbooks of pH
def test_nernst_gives_the_slope(temperature: float, expected: float) -> None:
    assert nernst(temperature) == pytest.approx(expected, abs=0.0051)


@pytest.mark.parametrize(("temperature", "expected"), [(15, 0.500), (25, 0.509), (35, 0.519)])
# Robinson and Stokes, Electrolyte Solutions, appendix 7.1 (volume basis); from memory
def test_davies_a_grows_with_temperature(temperature: float, expected: float) -> None:
    assert davies_a(temperature) == pytest.approx(expected, abs=0.003)
