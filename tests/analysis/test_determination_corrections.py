"""Buoyancy and temperature in a determination: they change a result by exactly the published factors."""

from __future__ import annotations

import math

import pytest

from analysis.determination import compute
from tests.support.determinations import Data, by_mass, line, lines, method, primary, run, standardization

WARM = {"correct": True, "solution": "water", "glass": "borosilicate", "within": "0.5"}


def at(temperature: str | None) -> list[Data]:
    ends = ("20.00", "20.05", "20.00")
    return [line(n, end, amount="10.00", temperature=temperature) for n, end in enumerate(ends, start=1)]


def share(found: Data, key: str) -> Data:
    return next(item for item in found["budget"] if item["key"] == key)


def test_standard_is_weighed_in_air() -> None:
    # Potassium hydrogen phthalate of 1.636 g/cm3: true mass 1.00058 times the apparent one (Harris, Quantitative
    # Chemical Analysis, buoyancy; density from the CRC Handbook).
    titrations = lines(["20.00", "20.00", "20.00"], amount="0.4080")
    plain = compute(standardization(titrations, standard=primary(), sample=by_mass()))
    weighed = primary(buoyancy={"density": "1.636", "air": "1.2", "within": "0.05"})
    found = compute(standardization(titrations, standard=weighed, sample=by_mass()))
    assert found["value"] / plain["value"] == pytest.approx(1.00058, abs=0.00001)
    air = share(found, "air")
    assert air["u"] == pytest.approx(0.05 / math.sqrt(3))
    assert air["contribution"] / found["value"] == pytest.approx(air["u"] * (1 / 1636 - 1 / 8000), rel=1e-2)


def test_sample_is_weighed_in_air() -> None:
    wanted = method(quantity="mass_fraction", unit="%", replicates_needed=1)
    titrations = lines(["20.00"], amount="1.0000")
    plain = compute(run(titrations, method=wanted, sample=by_mass()))
    light = by_mass() | {"buoyancy": {"density": "0.9982"}}
    found = compute(run(titrations, method=wanted, sample=light))
    # 1.00105 is the factor of water (Harris, Quantitative Chemical Analysis, buoyancy).
    assert plain["value"] / found["value"] == pytest.approx(1.00105, abs=0.00001)


def test_volume_read_warm_is_less_at_twenty_degrees() -> None:
    # Densities of water 0.997047 at 25 degC and 0.998207 at 20 degC (CRC Handbook); glass 9.9e-6 per K (ISO 4787).
    plain, found = compute(run(at("25.0"))), compute(run(at("25.0"), temperature=WARM))
    expected = 0.997047 / 0.998207 * (1 + 9.9e-6 * 5)
    assert found["value"] / plain["value"] == pytest.approx(expected, abs=2e-6)
    assert compute(run(at("20.0"), temperature=WARM))["value"] == pytest.approx(plain["value"], rel=1e-12)


def test_ethanolic_alkali_expands_by_its_own_coefficient() -> None:
    # 0.0011 per K: EN 14104.
    found = compute(run(at("25.0"), temperature=WARM | {"solution": "ethanolic alkali"}))
    expected = 1 + (9.9e-6 - 1.1e-3) * 5
    assert found["value"] / compute(run(at("25.0")))["value"] == pytest.approx(expected, rel=1e-9)


def test_temperature_that_is_not_corrected_is_an_uncertainty() -> None:
    # 100 mL within 4 degC of 20: 0.05 mL (QUAM:2012.P1, example A1, by the expansion of water alone).
    found = compute(run(at(None), temperature={"correct": False, "within": "4"}))
    line_ = share(found, "temperature")
    assert line_["u"] == pytest.approx(4 / math.sqrt(3))
    assert abs(line_["contribution"]) / found["value"] * 100 == pytest.approx(0.05, abs=0.005)
    assert found["value"] == compute(run(at(None)))["value"]


def test_missing_temperature_is_asked_for() -> None:
    found = compute(run(at(None), temperature=WARM))
    assert found["value"] is None
    assert "temperature of titration 1, titration 2, titration 3 is not entered" in found["reasons"][0]
    assert found["titrations"][0]["titre"] == 20.0


@pytest.mark.parametrize(
    ("wrong", "sentence"),
    [
        ({"correct": True, "glass": "quartz"}, "Glass is 'quartz'"),
        ({"correct": True, "solution": "mercury"}, "Solution expands like 'mercury'"),
        ({"correct": False, "within": "-1"}, "not below 0"),
    ],
)
def test_unknown_settings_are_refused(wrong, sentence) -> None:
    with pytest.raises(ValueError, match=sentence):
        compute(run(at("25.0"), temperature=wrong))


def test_impossible_temperature_names_its_titration() -> None:
    with pytest.raises(ValueError, match=r"Temperature of titration 1: Temperature is 120\.0 degC"):
        compute(run(at("120.0"), temperature=WARM))


def test_drift_is_taken_off_over_the_time_of_a_titration() -> None:
    # 20 uL/min over 5 min are 0.1 mL (definition of drift, common practice of coulometric and volumetric titration).
    titrations = [line(n, "20.00", amount="10.00", drift="20", minutes="5.0") for n in (1, 2, 3)]
    plain, found = compute(run(titrations)), compute(run(titrations, drift={"u": "2"}))
    assert found["value"] / plain["value"] == pytest.approx(19.9 / 20.0, rel=1e-12)
    unsure = share(found, "drift")
    assert abs(unsure["contribution"]) / found["value"] == pytest.approx(2 * 5 / 1000 / 19.9, rel=1e-6)


def test_missing_drift_and_duration_are_asked_for() -> None:
    found = compute(run([line(1, "20.00", amount="10.00")], drift={"u": "2"}))
    assert found["value"] is None
    assert found["reasons"][:2] == [
        "The drift of titration 1 is not entered; the titres are corrected for it.",
        "The duration of titration 1 is not entered; the titres are corrected for drift.",
    ]


def test_negative_duration_is_refused() -> None:
    with pytest.raises(ValueError, match="Duration of titration 1 is -1 min"):
        compute(run([line(1, "20.00", amount="10.00", drift="2", minutes="-1")], drift={"u": "2"}))
