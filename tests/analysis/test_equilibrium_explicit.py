"""Precipitation, redox and complexometric curves: the fit finds the truth; constants by a second route."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.balance import NUISANCE, prior_of
from analysis.curve import Curve
from analysis.equilibrium import fit_equilibrium
from analysis.explicit import Complex, Precipitation, Redox, conditional_constant
from analysis.simulate import shiftable, simulate_curve
from analysis.system import Analyte, System

CHLORIDE, IODIDE = Analyte("chloride", charge=-1, pKs=9.752), Analyte("iodide", charge=-1, pKs=16.08)
BROMIDE = Analyte("bromide", charge=-1, pKs=12.28)
IRON, TIN = Analyte("iron(II)", potential=680.0), Analyte("tin(II)", potential=140.0, electrons=2)
SILVER_SALT = Analyte("silver", charge=1, pKs=9.752)


def precipitation(titrant: str, *analytes: Analyte) -> System:
    return System("precipitation", titrant, 0.1, 50.0, analytes)


IODINE = Analyte("iodine", potential=536.0, electrons=2)
CALCIUM = Analyte("calcium", charge=2, log_K=10.2)


def redox(titrant: str, potential: float, *analytes: Analyte) -> System:
    return System("redox", titrant, 0.1, 50.0, analytes, titrant_potential=potential)


SYSTEMS = [
    (precipitation("silver", CHLORIDE), (1.0,), 550.0, (10.0,)),
    (precipitation("silver", CHLORIDE, IODIDE), (0.5, 0.4), 550.0, (4.0, 9.0)),
    (precipitation("silver", IODIDE, BROMIDE, CHLORIDE), (0.4, 0.4, 0.5), 550.0, (4.0, 8.0, 13.0)),
    (precipitation("halide", SILVER_SALT), (1.0,), 300.0, (10.0,)),
    (redox("oxidant", 1440.0, IRON), (1.0,), 0.0, (10.0,)),
    (redox("oxidant", 1440.0, IRON, TIN), (0.4, 0.3), 0.0, (6.0, 10.0)),
    (redox("reductant", 80.0, IODINE), (0.5,), 0.0, (10.0,)),
    (System("complex", "ligand", 0.1, 50.0, (CALCIUM,)), (1.0,), 100.0, (10.0,)),
]  # fmt: skip


@pytest.mark.parametrize(("system", "amounts", "standard", "expected"), SYSTEMS)
def test_fit_equilibrium_finds_every_jump_in_mV(
    system: System, amounts: tuple[float, ...], standard: float, expected: tuple[float, ...]
) -> None:
    volumes = np.arange(0.2, 18.0, 0.2)
    reading = simulate_curve(
        system, amounts=np.array(amounts), volumes=volumes, standard=standard, noise=0.5, volume_noise=0.003,
        generator=np.random.default_rng(17), slope=0.99,
    )  # fmt: skip
    fit = fit_equilibrium(Curve(volumes, reading, "mV", ()), system=system)
    assert len(fit.endpoints) == len(expected)
    for found, u, truth in zip(fit.endpoints, fit.endpoint_us, expected, strict=True):
        assert abs(found - truth) < 4 * u
        assert u < 0.02


@pytest.mark.parametrize("system", [system for system, *_ in SYSTEMS])
def test_balance_changes_as_its_derivatives_say(system: System) -> None:
    model = {"precipitation": Precipitation, "redox": Redox, "complex": Complex}[system.kind]
    chemistry = model(system, prior=prior_of(NUISANCE, {}))
    low, high = (2.0, 7.0) if system.kind == "precipitation" else (chemistry.limits[0] + 3, chemistry.limits[1] - 3)
    x, volume = np.linspace(low, high, 12)[None, :], np.linspace(1.0, 14.0, 12)[None, :]
    theta = np.concatenate([np.full((1, chemistry.count), 5.0), np.zeros((1, len(shiftable(system))))], axis=1)
    found, step = chemistry.balance(x, volume, theta, None), 1e-6
    for name, up, down in (
        ("by_x", (x + step, volume), (x - step, volume)),
        ("by_volume", (x, volume + step), (x, volume - step)),
    ):
        ahead, behind = (chemistry.balance(*at, theta, None).value for at in (up, down))
        expected = (ahead - behind) / (2 * step)
        assert getattr(found, name) == pytest.approx(expected, rel=1e-4, abs=1e-4)
    for k, column in enumerate(found.columns):
        move = step * (np.arange(theta.shape[1]) == k)
        ahead, behind = (chemistry.balance(x, volume, theta + sign * move, None).value for sign in (1, -1))
        assert column == pytest.approx((ahead - behind) / (2 * step), rel=1e-4, abs=1e-4)


EDTA = (0.0, 1.5, 2.0, 2.69, 6.13, 10.37)


@pytest.mark.parametrize(
    ("pH", "expected"), [(7.0, 4.80e-4), (8.0, 5.39e-3), (9.0, 5.21e-2), (10.0, 0.355), (11.0, 0.85)]
)  # Share of EDTA that is Y4-; Skoog and West, Fundamentals of Analytical Chemistry; from memory
def test_conditional_constant_holds_the_share_of_free_edta(pH: float, expected: float) -> None:
    share = 10.0 ** conditional_constant(0.0, pH=pH, pKa=(1.99, 2.67, 6.16, 10.26))
    assert share == pytest.approx(expected, rel=0.02)


def test_conditional_constant_falls_by_the_side_reactions_of_the_metal() -> None:
    plain = conditional_constant(16.5, pH=10.0, pKa=EDTA)
    assert conditional_constant(16.5, pH=10.0, pKa=EDTA, log_alpha_metal=4.2) == pytest.approx(plain - 4.2)
