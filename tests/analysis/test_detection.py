"""How many endpoints a curve has: every jump once, and none where only scatter rises and falls."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import optimize

from analysis.curve import clean_curve
from analysis.detection import endpoints_near, monotone
from analysis.noise import noise_of
from analysis.system import Analyte, System
from tests.support.known_curves import ACETIC, recorded, strong_acid


def base(*analytes: Analyte) -> System:
    return System("acid_base", "base", 0.1, 50.0, analytes)


@pytest.mark.parametrize(
    ("system", "amounts", "truths"),
    [
        (ACETIC, (1.0,), (10.0,)),
        (base(Analyte("phosphoric acid", (2.148, 7.198, 12.35))), (0.6,), (6.0, 12.0)),
        (base(Analyte("citric acid", (3.128, 4.761, 6.396))), (0.4,), (12.0,)),
        (base(Analyte("hydrochloric acid"), Analyte("acetic acid", (4.756,))), (0.5, 0.5), (5.0, 10.0)),
    ],
)
def test_endpoints_near_counts_the_jumps(system: System, amounts: tuple, truths: tuple) -> None:
    curve = recorded(system, *amounts)
    found = endpoints_near(curve, noise=noise_of(curve))
    assert len(found) == len(truths)
    assert found == pytest.approx(list(truths), abs=0.3)


def test_endpoints_near_finds_two_halides_with_silver() -> None:
    halides = (Analyte("iodide", charge=-1, pKs=16.08), Analyte("chloride", charge=-1, pKs=9.752))
    curve = recorded(System("precipitation", "silver", 0.1, 50.0, halides), 0.5, 0.5)
    assert endpoints_near(curve, noise=noise_of(curve)) == pytest.approx([5.0, 10.0], abs=0.3)


@pytest.mark.parametrize("noise", [0.0, 0.005, 0.02])
def test_endpoints_near_finds_none_in_a_buffer(noise: float) -> None:
    volumes = np.linspace(0.0, 10.0, 51)
    readings = 4.0 + 0.15 * volumes + np.random.default_rng(4).normal(0.0, noise, 51)
    curve = clean_curve(volumes, readings, quantity="pH")
    assert endpoints_near(curve, noise=noise_of(curve)) == []


@pytest.mark.parametrize("seed", range(20))
def test_endpoints_near_counts_one_in_spite_of_scatter(seed: int) -> None:
    curve = strong_acid(np.linspace(0.0, 20.0, 81), noise=0.02, seed=seed)
    assert endpoints_near(curve, noise=noise_of(curve)) == pytest.approx([10.0], abs=0.5)


@pytest.mark.parametrize("seed", range(5))
@pytest.mark.parametrize(
    ("pKa", "amount", "truths"),
    [((9.5,), 1.0, (10.0,)), ((4.0, 6.5), 0.5, (5.0, 10.0)), ((4.0, 6.5, 9.0), 0.4, (4.0, 8.0, 12.0))],
)
def test_endpoints_near_tells_weak_jumps_from_scatter_of_2_mV(
    pKa: tuple, amount: float, truths: tuple, seed: int
) -> None:
    generator = np.random.default_rng(seed)
    curve = recorded(base(Analyte("acid", pKa)), amount, end=15.0, noise=2 / 59.16, generator=generator)
    assert endpoints_near(curve, noise=noise_of(curve)) == pytest.approx(list(truths), abs=0.75)


@pytest.mark.parametrize("off", [-3.0, -0.5, 0.5, 3.0])
@pytest.mark.parametrize("at", [0, 1, 20, 49, 50])
def test_endpoints_near_takes_no_bad_reading_for_a_jump(off: float, at: int) -> None:
    volumes = np.linspace(0.0, 10.0, 51)
    readings = 4.0 + 0.15 * volumes
    readings[at] += off
    assert endpoints_near(clean_curve(volumes, readings, quantity="pH"), noise=0.0) == []


def test_endpoints_near_finds_none_before_a_jump_and_none_after_it() -> None:
    whole = strong_acid(np.linspace(0.0, 20.0, 201))
    for part in (whole.volume < 9.5, whole.volume > 10.5):
        curve = clean_curve(whole.volume[part], whole.reading[part], quantity="pH")
        assert endpoints_near(curve, noise=noise_of(curve)) == []


@given(st.lists(st.floats(-10, 10), min_size=1, max_size=8))
def test_monotone_is_the_nearest_rising_sequence(values: list[float]) -> None:
    y = np.array(values)
    found = monotone(y)
    assert found.size == y.size
    assert np.all(np.diff(found) >= -1e-12)
    reference = optimize.isotonic_regression(y).x  # another implementation of the same problem
    assert found == pytest.approx(reference, abs=1e-9)


def test_noise_of_finds_the_scatter_and_not_the_jump() -> None:
    found = [noise_of(strong_acid(np.linspace(0.0, 20.0, 101), noise=0.01, seed=seed)) for seed in range(40)]
    assert np.median(found) == pytest.approx(0.01, rel=0.2)
    assert noise_of(strong_acid(np.linspace(0.0, 20.0, 101))) < 1e-3
