"""What must not change a result, and what must change it by exactly so much."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.determination import compute

TITRES = st.lists(st.integers(995, 1005), min_size=3, max_size=6)  # hundredths of a millilitre
METHOD = {
    "titration": "direct", "ratio": "1/2", "quantity": "mass_concentration", "unit": "g/L", "basis": "as_is",
    "loss_percent": None, "loss_u": None, "policy": "all", "limit": "0.20", "limit_kind": "range_mL",
    "replicates_needed": 3, "places": 3, "coverage": "k2", "indicator_bias_mL": None, "indicator_u_mL": None,
    "curve": None, "equivalent_formula": None,
}  # fmt: skip


def run(
    titres: list[int], *, amount: str = "15.00", zero: str = "0.00", blank: str | None = None, **method: Any
) -> dict:
    """A run with titres in hundredths of a millilitre, all begun at one reading of the burette."""
    start = Decimal(zero)
    lines = [
        {"number": k, "amount": amount, "start": str(start), "end": str(start + Decimal(t) / 100),
         "temperature": None, "curve": None, "excluded": False}
        for k, t in enumerate(titres, start=1)
    ]  # fmt: skip
    blanks = [] if blank is None else [{**lines[0], "amount": None, "start": "0.00", "end": blank}]
    return compute(
        {
            "kind": "run", "engine": "1.0.0", "method": {**METHOD, **method},
            "substance": {"name": "tartaric acid", "formula": "C4H6O6", "molar_mass": "150.086",
                          "u": "0.004"},
            "titrant": {"lot": "N1", "concentration": "0.1", "u": "0.0001", "degrees_of_freedom": None,
                        "components": []},
            "excess": None, "temperature_correction": False, "dilutions": [], "specification": None,
            "burette": {
                "key": "burette:B-1", "identifier": "B-1", "nominal": "50", "resolution": "0.05",
                "tolerance": "0.05", "table": [], "temperature_reference": "20",
            },
            "sample": {
                "by": "volume", "unit": "mL", "u": "0.008", "key": "pipette:P-1", "label": "pipette P-1",
                "buoyancy_density": None,
            },
            "replicates": lines, "blanks": blanks,
        }
    )  # fmt: skip


@given(TITRES, st.integers(0, 3500))
def test_the_zero_of_the_burette_does_not_change_a_result(titres: list[int], zero: int) -> None:
    one, other = run(titres), run(titres, zero=str(Decimal(zero) / 100))
    assert (other["value"], other["u"]) == (one["value"], one["u"])


@given(TITRES, st.randoms(use_true_random=False))
def test_the_order_of_replicates_does_not_change_a_result(titres: list[int], random) -> None:
    shuffled = titres.copy()
    random.shuffle(shuffled)
    one, other = run(titres), run(shuffled)
    assert other["value"] == pytest.approx(one["value"], rel=1e-13)
    assert other["u"] == pytest.approx(one["u"], rel=1e-13)


@given(TITRES, st.integers(1, 100))
def test_a_blank_takes_away_exactly_what_it_adds_to_every_titre(titres: list[int], blank: int) -> None:
    with_blank = run([t + blank for t in titres], blank=str(Decimal(blank) / 100))
    assert with_blank["value"] == pytest.approx(run(titres)["value"], rel=1e-12)


@given(TITRES)
def test_half_the_sample_with_half_the_titre_is_the_same_result(titres: list[int]) -> None:
    whole = run([2 * t for t in titres], amount="15.00", limit="0.40")
    half = run(titres, amount="7.50")
    assert half["value"] == pytest.approx(whole["value"], rel=1e-13)


@given(TITRES)
def test_another_unit_scales_value_and_uncertainty_alike(titres: list[int]) -> None:
    per_litre, per_100_ml = run(titres), run(titres, unit="g/100 mL")
    for key in ("value", "u", "U"):
        assert per_100_ml[key] == pytest.approx(per_litre[key] / 10, rel=1e-12)


@given(TITRES)
def test_the_ratio_of_the_reaction_scales_a_result(titres: list[int]) -> None:
    assert run(titres, ratio="1")["value"] == pytest.approx(2 * run(titres)["value"], rel=1e-13)


@given(TITRES)
def test_outlier_tests_never_take_a_titre_away(titres: list[int]) -> None:
    found = run([*titres, 1015], limit="0.50")
    assert found["statistics"]["n"] == len(titres) + 1
    assert all(line["in_set"] for line in found["titrations"])


@given(TITRES)
def test_the_shares_of_the_budget_add_up_to_one(titres: list[int]) -> None:
    found = run(titres)
    assert sum(line["share"] for line in found["budget"]) == pytest.approx(1, abs=1e-12)
    assert sum(line["contribution"] ** 2 for line in found["budget"]) == pytest.approx(found["u"] ** 2, rel=1e-12)


def test_the_same_inputs_give_the_same_bits() -> None:
    assert run([1000, 1002, 1001]) == run([1000, 1002, 1001])
