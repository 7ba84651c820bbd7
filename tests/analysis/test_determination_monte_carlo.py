"""Determinations by drawing against their budgets."""

from __future__ import annotations

import copy

import pytest

from analysis.determination import compute
from analysis.determination_monte_carlo import check_by_monte_carlo

BURETTE = {
    "key": "burette:B",
    "identifier": "B",
    "nominal": "50",
    "resolution": "0.01",
    "tolerance": "0.05",
    "table": [],
}
READINGS = [("0.4200", "20.61"), ("0.4200", "20.62"), ("0.4200", "20.61"), ("0.4200", "20.60")] * 5
STANDARDIZATION = {
    "kind": "standardization",
    "engine": "1",
    "method": {
        "titration": "direct", "ratio": "1", "policy": "all", "limit": "0.5", "limit_kind": "rsd_percent",
        "replicates_needed": 3, "coverage": "k2", "indicator_bias_mL": "0", "indicator_u_mL": "0.01", "curve": None,
    },
    "standard": {
        "basis": "mass", "key": "standard:K", "label": "K", "formula": "C8H5KO4", "molar_mass": "204.222",
        "molar_mass_u": "0.0096", "purity": "0.9998", "purity_u": "0.0001",
    },
    "sample": {"by": "mass", "unit": "g", "u": "0.0001", "key": "balance:W", "label": "balance W"},
    "burette": BURETTE,
    "nominal": "0.1",
    "window": {"low": "0.095", "high": "0.105"},
    "replicates": [
        {"number": place, "amount": amount, "start": "0.00", "end": end, "excluded": False}
        for place, (amount, end) in enumerate(READINGS, start=1)
    ],
    "blanks": [],
}  # fmt: skip


def test_many_replicates_are_confirmed():
    found = check_by_monte_carlo(STANDARDIZATION, seed=7)
    assert found["value"] == pytest.approx(compute(STANDARDIZATION)["value"], rel=1e-5)
    assert found["u"] == pytest.approx(compute(STANDARDIZATION)["u"], rel=0.02)


def test_three_replicates_give_a_wider_interval_and_the_sentence_says_so():
    few = copy.deepcopy(STANDARDIZATION)
    few["replicates"] = few["replicates"][:2]
    few["replicates"][1]["end"] = "20.75"
    found = check_by_monte_carlo(few, seed=7)
    assert not found["is_confirmed"]
    assert "times as wide" in found["sentence"]
    # Student's t at one degree of freedom has no mean: the middle of the draws is told, and it stands still.
    assert found["value"] == pytest.approx(found["budget_value"], rel=2e-4)
    assert check_by_monte_carlo(few, seed=8)["value"] == pytest.approx(found["value"], rel=2e-4)


def test_same_seed_gives_the_same_numbers_and_progress_is_told():
    told: list[int] = []
    first = check_by_monte_carlo(STANDARDIZATION, seed=3, progress=told.append)
    assert check_by_monte_carlo(STANDARDIZATION, seed=3) == first
    assert told[-1] == first["draws"]


def test_no_result_cannot_be_checked():
    empty = STANDARDIZATION | {"replicates": []}
    with pytest.raises(ValueError, match="There is no result to check"):
        check_by_monte_carlo(empty)
