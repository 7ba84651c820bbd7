"""Densities, buoyancy and temperature: against derivatives, limits and what must cancel."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.water import air_density, water_density, water_expansion
from analysis.weighing import buoyancy_factor, volume_at, volume_of_water, z_factor

TEMPERATURES = st.floats(5, 40)


@given(TEMPERATURES)
def test_water_expansion_is_the_slope_of_the_density(t: float) -> None:
    slope = -(water_density(t + 1e-3) - water_density(t - 1e-3)) / 2e-3 / water_density(t)
    assert water_expansion(t) == pytest.approx(slope, abs=1e-9)


def test_water_is_densest_near_4_degrees() -> None:
    assert water_expansion(3.983035) == pytest.approx(0, abs=1e-12)
    assert water_density(3.983035) == pytest.approx(999.97495)


@given(st.floats(0, 50), TEMPERATURES)
def test_volume_at_its_reference_temperature_is_the_volume(volume: float, t: float) -> None:
    assert volume_at(volume, temperature=t, reference=t) == volume


def test_volume_at_shrinks_a_warm_solution_by_water_less_glass() -> None:
    # About 2.1e-4 - 1e-5 per kelvin near 20 degC (QUAM, A1.4).
    assert volume_at(50.0, temperature=21.0) == pytest.approx(50.0 * (1 - 2.0e-4), abs=1e-3)


def test_volume_of_water_of_a_hot_flask_is_less_at_20_degrees() -> None:
    warm = volume_of_water(99.7, temperature=25.0, glass=9.9e-6)
    assert warm == pytest.approx(99.7 * z_factor(25.0) * (1 - 9.9e-6 * 5), rel=1e-14)


def test_buoyancy_factor_of_the_density_of_the_weights_is_one() -> None:
    assert buoyancy_factor(8000.0) == 1.0


def test_z_factor_is_the_buoyancy_factor_over_the_density_of_water() -> None:
    air = air_density(pressure=1013.0)
    expected = buoyancy_factor(water_density(22.0), air=air) / water_density(22.0) * 1000
    assert z_factor(22.0) == pytest.approx(expected, rel=1e-14)


@pytest.mark.parametrize(
    ("call", "what"),
    [
        (lambda: water_density(-1.0), "Temperature is -1.0 degC"),
        (lambda: air_density(pressure=80), "Pressure is 80 hPa"),
        (lambda: air_density(humidity=120), "Humidity is 120 %"),
        (lambda: buoyancy_factor(1.0), "Density is 1.0 kg/m3"),
        (lambda: volume_of_water(0.0, temperature=20.0), "Mass is 0.0 g"),
        (lambda: volume_at(float("nan"), temperature=20.0), "Volume is nan mL"),
    ],
)  # fmt: skip
def test_corrections_refuse_by_name_and_value(call, what: str) -> None:
    with pytest.raises(ValueError, match=what):
        call()
