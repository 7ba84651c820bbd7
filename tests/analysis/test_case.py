"""Cases and the catalogue: what a laboratory may write, and what it is told when it cannot be read."""

from __future__ import annotations

from typing import Any

import pytest

from analysis.calculation import Calculation, table_of
from analysis.case import cases_from, check_case
from analysis.catalogue import CATALOGUE, calculate

CASE: dict[str, Any] = {
    "id": "own-1", "calculation": "replicate_statistics", "inputs": {"values": [1.0, 2.0, 3.0]},
    "expected": {"mean": 2.0, "sd": 1.0}, "tolerance": 1e-12, "source": "worked by hand", "provenance": "own",
}  # fmt: skip


def misses(**changes: Any) -> tuple[str, ...]:
    return check_case(cases_from([{**CASE, **changes}])[0]).misses


def test_check_case_meets_what_is_expected() -> None:
    assert misses() == ()


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"expected": {"mean": 2.1}}, "mean: expected 2.1 within 1e-12, found 2.0"),
        ({"expected": {"median": 2.0}}, "median: not among what was found"),
        ({"expected": {"n": True}}, "n: expected True, found 3"),
        ({"inputs": {"values": []}}, "refused: Values are empty"),
        (
            {"inputs": {"values": ["a"]}},
            "refused: replicate_statistics: an input is not of the kind expected",
        ),
        ({"inputs": {}}, "input 'values' is missing"),
        ({"inputs": {"values": [1.0], "n": 1}}, "input 'n' is not known"),
        ({"calculation": "astrology"}, "Calculation is 'astrology'"),
        ({"tolerance": "small"}, "Tolerance of mean is 'small'"),
        ({"expected": [2.0]}, "expected 1 values"),
    ],
)
def test_check_case_says_what_was_missed(changes: dict[str, Any], what: str) -> None:
    assert what in " ".join(misses(**changes))


def test_check_case_never_takes_nan_for_agreement() -> None:
    assert misses(expected={"mean": float("nan")})


@pytest.mark.parametrize(
    ("data", "what"),
    [
        ({"id": 1}, "a list of cases is expected"), ("text", "a list of cases is expected"),
        ([1], "Case 1 is int"), ([{**CASE, "id": ""}], "has '' as id"),
        ([CASE, CASE], "'own-1' is used twice"),
        ([{key: value for key, value in CASE.items() if key != "source"}], "Case 1 has no 'source'"),
        ([{**CASE, "result": 3}], "has a key 'result'"), ([{**CASE, "inputs": []}], "inputs of type list"),
    ],
)  # fmt: skip
def test_cases_from_refuses_by_place_and_key(data: Any, what: str) -> None:
    with pytest.raises(ValueError, match=what):
        cases_from(data)


def test_table_of_refuses_two_calculations_of_one_name() -> None:
    one = Calculation("a", "A", (), "nothing", lambda inputs: None)
    with pytest.raises(ValueError, match="same name"):
        table_of(one, one)


def test_every_calculation_says_what_it_does_takes_and_gives() -> None:
    for name, calculation in CATALOGUE.items():
        assert calculation.name == name
        assert calculation.title, name
        assert calculation.gives, name
        assert all(field.meaning for field in calculation.fields), name


@pytest.mark.parametrize("name", sorted(CATALOGUE))
def test_every_calculation_refuses_nonsense_with_a_sentence(name: str) -> None:
    fields = CATALOGUE[name].fields
    with pytest.raises(ValueError, match=r"\w"):
        calculate(name, {field.name: "nonsense" for field in fields} | {"surplus": 1})
    with pytest.raises(ValueError, match=r"\w"):
        calculate(name, {field.name: ["x"] for field in fields})
