"""Protons lost: sums, derivatives by differences, and a second route by logarithms."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.activity import LN_10
from analysis.protonation import fractions, protons_lost

CITRIC = (3.128, 4.761, 6.396)
PH = np.linspace(-1.0, 15.0, 65)[None, :]


def constants(pKa: tuple[float, ...]) -> list[np.ndarray]:
    return [np.full((1, 1), 10.0**-value) for value in pKa]


def test_fractions_sum_to_one() -> None:
    assert sum(fractions(10.0**PH, constants(CITRIC))) == pytest.approx(np.ones_like(PH), abs=1e-15)


def test_fractions_of_two_states_are_equal_at_pka() -> None:
    acid, base = fractions(10.0 ** np.array([[4.756]]), constants((4.756,)))
    assert acid[0, 0] == pytest.approx(base[0, 0])


@pytest.mark.parametrize("pKa", [(4.756,), (2.148, 7.198, 12.35), (0.0, 1.5, 2.0, 2.69, 6.13, 10.37)])
def test_protons_lost_agrees_with_a_sum_of_logarithms(pKa: tuple[float, ...]) -> None:
    k = np.arange(len(pKa) + 1)[:, None]
    logs = LN_10 * (k * PH - np.concatenate([[0.0], np.cumsum(pKa)])[:, None])
    weights = np.exp(logs - logs.max(axis=0))
    expected = (k * weights).sum(axis=0) / weights.sum(axis=0)
    assert protons_lost(10.0**PH, constants(pKa))[0][0] == pytest.approx(expected, abs=1e-12)


def test_protons_lost_changes_with_ph_by_the_sum_of_covariances() -> None:
    step = 1e-5
    up, down = (protons_lost(10.0 ** (PH + sign * step), constants(CITRIC))[0] for sign in (1, -1))
    covariances = protons_lost(10.0**PH, constants(CITRIC))[1]
    assert LN_10 * sum(covariances) == pytest.approx((up - down) / (2 * step), abs=1e-8)


@pytest.mark.parametrize("j", [0, 1, 2])
def test_protons_lost_changes_with_each_pka_by_its_covariance(j: int) -> None:
    step = 1e-5
    up, down = (
        protons_lost(10.0**PH, constants(tuple(p + sign * step * (k == j) for k, p in enumerate(CITRIC))))[0]
        for sign in (1, -1)
    )
    covariances = protons_lost(10.0**PH, constants(CITRIC))[1]
    assert -LN_10 * covariances[j] == pytest.approx((up - down) / (2 * step), abs=1e-8)
