"""Named calculations that no printed example covers: each against arithmetic or a route of its own."""

from __future__ import annotations

from typing import Any

import pytest

from analysis.catalogue import calculate
from analysis.solution_ph import Species, titrated_ph


def acetic_curve() -> dict[str, list[float]]:
    """A titration of acetic acid whose equivalence point is at 10 mL, without noise."""
    volumes = [round(0.5 * k, 2) for k in range(1, 36)]
    ph = [
        titrated_ph(
            [Species(0.02, (4.756,))],
            strong=0.0,
            sample_volume=50.0,
            titrant_volume=volume,
            titrant_concentration=0.1,
        )
        for volume in volumes
    ]
    return {"volume": volumes, "reading": [round(value, 4) for value in ph]}


def test_endpoint_of_a_curve_is_found_within_its_uncertainty() -> None:
    found = calculate("endpoint", {**acetic_curve(), "quantity": "pH", "deciding": "derivative"})
    assert abs(found["volume"] - 10.0) <= 2 * found["standard_uncertainty"]
    assert found["kind"] == "endpoint"


def test_endpoint_by_gran_agrees_with_the_equivalence_point() -> None:
    system = {
        "kind": "acid_base", "titrant": "base", "titrant_concentration": 0.1, "sample_volume": 50.0,
        "analytes": [{"name": "acetic acid", "pKa": [4.756], "charge": 0}], "carbonate": 0.0,
        "activity": False,
    }  # fmt: skip
    asked = {
        **acetic_curve(),
        "quantity": "pH",
        "deciding": "gran",
        "checking": "derivative",
        "system": system,
    }
    found = calculate("endpoint", asked)
    assert found["volume"] == pytest.approx(10.0, abs=0.01)
    assert found["kind"] == "equivalence point"


@pytest.mark.parametrize(
    ("inputs", "amount"),
    [
        ({"concentration": 0.1, "volume": 10.0, "ratio": "1/2"}, 0.0005),
        ({"concentration": 0.1, "volume": 4.0, "blank": 24.0, "titration": "blank_difference"}, 0.002),
        (
            {"concentration": 0.1, "volume": 5.0, "excess": 0.1, "excess_volume": 25.0, "titration": "back"},
            0.002,
        ),
    ],
)
def test_amount_is_that_of_each_kind_of_titration(inputs: dict[str, Any], amount: float) -> None:
    assert calculate("amount", inputs) == pytest.approx(amount, rel=1e-14)


def test_amount_refuses_a_kind_of_titration_it_does_not_know() -> None:
    with pytest.raises(ValueError, match="Titration is 'sideways'"):
        calculate("amount", {"concentration": 0.1, "volume": 1.0, "titration": "sideways"})


def test_titrant_by_mass_and_by_titrant_give_the_same_for_the_same_solution() -> None:
    by_mass = calculate("titrant_by_mass", {"mass": 0.51055, "purity": 1.0, "molar_mass": 204.22, "volume": 25.0})
    by_titrant = calculate("titrant_by_titrant", {"concentration": by_mass, "aliquot": 20.0, "volume": 20.0})
    assert by_mass == pytest.approx(0.1, rel=1e-6)
    assert by_titrant == by_mass


def test_burette_correction_is_linear_between_the_points_of_the_table() -> None:
    table = [["10.00", "0.010"], ["20.00", "0.030"]]
    assert calculate("burette_correction", {"reading": 15.0, "table": table}) == pytest.approx(0.02)
    assert calculate("burette_correction", {"reading": 30.0, "table": table}) == pytest.approx(0.03)


def test_concordance_names_places_from_one() -> None:
    found = calculate("concordance", {"values": [10.6, 10.05, 10.1], "limit": 0.1})
    assert (found["places"], found["mean"]) == ([2, 3], pytest.approx(10.075))


def test_run_rules_and_cusum_name_places_from_one() -> None:
    values = [0.0, 0.1, 4.0]
    rules = calculate("run_rules", {"values": values, "target": 0.0, "sigma": 1.0})
    sums = calculate("cusum", {"values": values, "target": 0.0, "sigma": 1.0, "reference": 0.5, "interval": 3.0})
    assert rules == {"one point beyond three sigma": [3]}
    assert sums["signals"] == [3]


def test_individuals_limits_take_exclusions_by_place_from_one() -> None:
    found = calculate("individuals_limits", {"values": [1.0, 9.0, 1.0, 1.2], "excluded": {"2": "spill"}})
    assert found["centre"] == pytest.approx(16 / 15)


def test_widths_and_intervals_for_a_run_length_are_consistent_with_the_run_lengths() -> None:
    width = calculate("ewma_width", {"run_length": 400, "weight": 0.1})
    interval = calculate("cusum_interval", {"run_length": 400, "reference": 0.5})
    lengths = calculate("ewma_run_lengths", {"weight": 0.1, "width": width, "shifts": [0.0]})
    lengths += calculate("cusum_run_lengths", {"reference": 0.5, "interval": interval, "shifts": [0.0]})
    assert lengths == pytest.approx([400, 400], rel=1e-6)


def test_outlier_tests_of_pairs_give_sentences() -> None:
    values = [10.0, 10.01, 10.02, 9.99, 10.01, 12.0, 12.1]
    for name in ("grubbs_pair", "grubbs_opposite"):
        assert calculate(name, {"values": values})["sentence"].startswith("Grubbs, ")
    critical = calculate("grubbs_opposite_critical", {"n": 7})
    assert calculate("grubbs_opposite", {"values": values})["critical"] == critical


def test_process_risks_of_a_perfect_process_are_small() -> None:
    found = calculate("process_risks", {"mean": 10, "sd": 0.01, "standard_uncertainty": 0.01, "lower": 9, "upper": 11})
    assert found["consumer"] < 1e-12
    assert found["accepted"] == pytest.approx(1)
