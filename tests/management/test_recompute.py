"""Stored results against their recomputation."""

from __future__ import annotations

import json
from io import StringIO

import pytest
from django.core.management import CommandError, call_command

from labrecords.models import Calculation
from labrecords.queries.recompute import first_difference, recomputed
from tests.factories.bench import approved_standardization, set_up_bench


@pytest.fixture
def calculation(analyst, supervisor) -> Calculation:
    return approved_standardization(set_up_bench(analyst, supervisor)).calculation


def test_recomputed_gives_the_same_bits(calculation):
    assert [result.verdict for result in recomputed()] == ["same"]


def test_recompute_says_how_many(calculation):
    out = StringIO()
    call_command("recompute", "--check", stdout=out)
    assert "1 calculations: 1 same" in out.getvalue()


def test_recompute_names_an_altered_result(calculation, as_enemy):
    altered = calculation.outputs | {"value": calculation.outputs["value"] * 1.001}
    as_enemy("UPDATE labrecords_calculation SET outputs = %s", json.dumps(altered))
    with pytest.raises(CommandError, match="1 results do not come out"):
        call_command("recompute", "--check", stdout=StringIO())


def test_recomputed_leaves_other_versions_alone(calculation, as_enemy):
    as_enemy("UPDATE labrecords_calculation SET engine_version = '0.9'")
    assert [result.verdict for result in recomputed()] == ["other version"]


def test_first_difference_allows_the_last_digits_of_another_machine():
    assert first_difference({"value": 0.1}, {"value": 0.1 * (1 + 1e-13)}) == ""


@pytest.mark.parametrize(
    ("stored", "found", "place"),
    [
        ({"a": [1.0, 2.0]}, {"a": [1.0, 2.1]}, "a[1] was 2.0 and is 2.1"),
        ({"a": "yes"}, {"a": None}, "a was 'yes' and is None"),
        ({"a": [1]}, {"a": [1, 2]}, "a was [1] and is [1, 2]"),
        ({}, {"b": 1}, "b was None and is 1"),
    ],
)
def test_first_difference_names_the_place(stored, found, place):
    assert first_difference(stored, found) == place
