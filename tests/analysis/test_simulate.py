"""Simulated curves against closed formulas, the electrode there and back, and what is refused."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import optimize

from analysis.activity import log_gamma, nernst, water_pK
from analysis.balance import NUISANCE, prior_of
from analysis.electrode import displayed, electrode
from analysis.scatter import scatter
from analysis.simulate import grid, simulate_curve, true_x
from analysis.system import Analyte, System

ACETIC = System("acid_base", "base", 0.1, 50.0, (Analyte("acetic acid", (4.756,)),))


def test_simulate_curve_keeps_the_charge_balance_with_activities() -> None:
    pH = float(simulate_curve(ACETIC, amounts=np.array([1.0]), volumes=np.array([4.0, 6.0]))[0])

    def charge(x: float) -> float:
        g = 1.0
        for _ in range(50):
            h, oh = 10.0**-x / g, 10.0 ** (x - water_pK()) / g
            acetate = (1.0 / 54.0) / (1 + 10.0 ** (4.756 - x) * g)
            sodium = 0.4 / 54.0
            g = 10.0 ** float(log_gamma(np.array([0.5 * (h + oh + acetate + sodium)]))[0])
        return sodium + h - oh - acetate

    assert pH == pytest.approx(optimize.brentq(charge, 2.0, 12.0, xtol=1e-12), abs=1e-6)


def test_simulate_curve_of_a_base_mirrors_that_of_an_acid() -> None:
    volumes = np.linspace(0.0, 20.0, 41)
    acid = System("acid_base", "base", 0.1, 50.0, (Analyte("hydrochloric acid"),))
    base = System("acid_base", "acid", 0.1, 50.0, (Analyte("sodium hydroxide"),))
    rising, falling = (simulate_curve(s, amounts=np.array([1.0]), volumes=volumes) for s in (acid, base))
    assert rising + falling == pytest.approx(np.full(41, water_pK()), abs=1e-9)


def test_simulate_curve_is_the_same_for_the_same_seed() -> None:
    volumes = grid(end=15.0, near=10.0)
    one, two = (
        simulate_curve(
            ACETIC, amounts=np.array([1.0]), volumes=volumes, generator=np.random.default_rng(7), noise=0.01,
            volume_noise=0.003, outliers=0.1,
        )
        for _ in range(2)
    )  # fmt: skip
    assert np.array_equal(one, two)


def test_simulate_curve_of_silver_chloride_is_half_the_constant_at_equivalence() -> None:
    chloride = System("precipitation", "silver", 0.1, 50.0, (Analyte("chloride", charge=-1, pKs=9.752),))
    x = true_x(chloride, amounts=np.array([[1.0]]), volumes=np.array([10.0]))
    assert x[0, 0] == pytest.approx(9.752 / 2, abs=1e-9)


def test_simulate_curve_of_iron_with_cerium_is_the_mean_potential_at_equivalence() -> None:
    iron = System("redox", "oxidant", 0.1, 50.0, (Analyte("iron(II)", potential=680.0),), titrant_potential=1440.0)
    reading = simulate_curve(iron, amounts=np.array([1.0]), volumes=np.array([5.0, 10.0, 20.0]))
    # half of the iron, equivalence, twice the cerium: E of one couple, their mean, E of the other
    assert reading == pytest.approx([680.0, 1060.0, 1440.0], abs=1e-6)


def test_simulate_curve_of_calcium_with_edta_keeps_both_balances() -> None:
    calcium = System("complex", "ligand", 0.1, 50.0, (Analyte("calcium", charge=2, log_K=10.25),))
    metal = 10.0 ** -true_x(calcium, amounts=np.array([[1.0]]), volumes=np.array([4.0, 10.0, 12.0]))[0]
    for free, volume in zip(metal, (4.0, 10.0, 12.0), strict=True):
        bound = 1.0 / (50 + volume) - free
        ligand = 0.1 * volume / (50 + volume) - bound
        assert bound / (free * ligand) == pytest.approx(10.0**10.25, rel=1e-5)


def test_displayed_is_read_back_to_the_same_x() -> None:
    x = np.linspace(3.0, 11.0, 30)[None, :]
    theta = np.array([[0.05, -0.03, 0.02, 0.01]])  # offset, slope, lag, drift
    columns = (np.array([[value]]) for value in (0.05, -0.03, 0.01, 0.02))
    shown = displayed(x, centre=7.0, **dict(zip(("offset", "slope", "drift", "lag"), columns, strict=True)))
    there = electrode(shown, points=np.array([30.0]), prior=prior_of(NUISANCE, {}), first=0, centre=7.0)
    assert there.read(theta, there.behind)[0] == pytest.approx(x, abs=1e-12)


def test_scatter_finds_the_noise_and_not_the_jump_or_bad_readings() -> None:
    volumes = grid(end=15.0, near=10.0, coarse=0.25, fine=0.1)
    readings = simulate_curve(
        ACETIC, amounts=np.full((200, 1), 1.0), volumes=volumes, generator=np.random.default_rng(3),
        noise=0.01, outliers=0.03,
    )  # fmt: skip
    found = scatter(np.broadcast_to(volumes, readings.shape), readings)
    assert np.median(found) == pytest.approx(0.01, rel=0.25)


def test_simulate_curve_in_mV_falls_by_the_nernst_slope() -> None:
    volumes = np.linspace(0.0, 15.0, 31)
    pH = simulate_curve(ACETIC, amounts=np.array([1.0]), volumes=volumes)
    mV = simulate_curve(ACETIC, amounts=np.array([1.0]), volumes=volumes, quantity="mV")
    assert mV == pytest.approx(-nernst() * (pH - 7.0), abs=1e-9)


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        ({"amounts": np.array([1.0, 2.0])}, "2 amounts are given; 1 are expected"),
        ({"amounts": np.array([-1.0])}, "finite numbers from 0 are expected"),
        ({"noise": 0.1}, "no generator is given"),
        (
            {"constants": {"pKa of water": 1.0}},
            "Constant is 'pKa of water'; expected one of pKa of acetic acid",
        ),
    ],
)
def test_simulate_curve_refuses_by_name(changes: dict[str, object], sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        simulate_curve(ACETIC, **({"amounts": np.array([1.0]), "volumes": np.arange(9.0)} | changes))
