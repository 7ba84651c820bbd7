"""Rounding, verdicts, probabilities of conformity and risks."""

from __future__ import annotations

import math
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from analysis.conformity import Verdict, probability_within, round_places, round_significant, verdict
from analysis.risk import acceptance_limits, guard_band_for, process_risks, specific_risk

DECIMALS = st.decimals(min_value=-1000, max_value=1000, allow_nan=False, places=6)


def judged(value: float, **changes: object) -> Verdict:
    settings = {
        "standard_uncertainty": 0.05, "expanded": 0.10, "lower": "6.00", "upper": "6.40", "places": 2,
        "rounding": "half_up", "rule": "guard",
    }  # fmt: skip
    return verdict(value, **{**settings, **changes})


@given(DECIMALS, st.integers(0, 4))
def test_round_places_is_never_further_than_half_a_step(number: Decimal, places: int) -> None:
    for rounding in ("half_up", "half_even"):
        away = abs(round_places(number, places=places, rounding=rounding) - number)
        assert away <= Decimal(5).scaleb(-places - 1)


@given(DECIMALS, st.integers(0, 4))
def test_round_places_of_a_negative_number_is_the_mirror_image(number: Decimal, places: int) -> None:
    for rounding in ("half_up", "half_even"):
        mirrored = round_places(-number, places=places, rounding=rounding)
        assert mirrored == -round_places(number, places=places, rounding=rounding)


def test_round_places_takes_a_float_as_its_shortest_decimal() -> None:
    # 2.675 is a little less in binary; the reading was 2.675.
    assert round_places(2.675, places=2, rounding="half_up") == Decimal("2.68")


def test_round_significant_keeps_its_figures_when_a_power_of_ten_is_reached() -> None:
    assert str(round_significant(9.996, figures=3, rounding="half_up")) == "10.0"


@pytest.mark.parametrize(
    ("value", "outcome"),
    [
        (6.20, "conforms"), (6.10, "conforms"), (6.30, "conforms"), (6.0999, "inconclusive"),
        (6.31, "inconclusive"), (6.404, "inconclusive"), (6.41, "does_not_conform"),
        (5.99, "does_not_conform"),
    ],
)  # fmt: skip
def test_verdict_with_a_guard_band_at_its_edges(value: float, outcome: str) -> None:
    assert judged(value).outcome == outcome


def test_verdict_keeps_value_rounded_value_limits_and_guard_band() -> None:
    found = judged(6.1134)
    assert (found.value, str(found.rounded), found.guard) == (6.1134, "6.11", 0.1)
    assert (found.lower_acceptance, found.upper_acceptance) == (Decimal("6.10"), Decimal("6.30"))
    assert found.sentence == "6.11 after rounding is within the limits 6.00 to 6.40 and outside the guard band."


def test_verdict_says_when_no_result_can_conform() -> None:
    found = judged(6.20, expanded=0.30)
    assert found.outcome == "inconclusive"
    assert "no result can conform with this uncertainty" in found.sentence


def test_verdict_by_simple_acceptance_ignores_the_uncertainty() -> None:
    found = judged(6.39, rule="simple", expanded=9.0)
    assert (found.outcome, found.guard) == ("conforms", 0.0)


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"lower": None, "upper": None}, "both empty"), ({"lower": "6.5"}, "the lower must be below"),
        ({"lower": "six"}, "Lower limit is 'six'"), ({"rule": "lucky"}, "Rule is 'lucky'"),
        ({"expanded": math.nan}, "Expanded uncertainty is nan"),
        ({"guard_factor": "-1"}, "Guard factor is -1"),
        ({"rounding": "down"}, "Rounding is 'down'"), ({"upper": "NaN"}, "Upper limit is NaN"),
    ],
)  # fmt: skip
def test_verdict_refuses_what_it_cannot_compare(changes: dict[str, object], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        judged(6.2, **changes)


@given(st.floats(-20, 20), st.floats(0.1, 5))
def test_probability_within_below_and_above_add_up_to_one(value: float, u: float) -> None:
    inside = probability_within(value, standard_uncertainty=u, lower=-1, upper=2)
    below = probability_within(value, standard_uncertainty=u, lower=None, upper=-1)
    above = probability_within(value, standard_uncertainty=u, lower=2, upper=None)
    assert inside + below + above == pytest.approx(1, abs=1e-12)


def test_probability_within_keeps_its_digits_far_in_the_tail() -> None:
    exact = stats.norm.sf(30) - stats.norm.sf(31)
    assert probability_within(0, standard_uncertainty=1, lower=30, upper=31) == pytest.approx(exact, rel=1e-9)


def test_guard_band_for_a_risk_gives_that_risk_at_the_acceptance_limit() -> None:
    guard = guard_band_for(0.05, standard_uncertainty=0.3)
    assert specific_risk(guard=guard, standard_uncertainty=0.3) == pytest.approx(0.05, rel=1e-12)


@pytest.mark.parametrize("guard", [-0.05, 0.0, 0.08])
def test_process_risks_agree_with_the_bivariate_normal_distribution(guard: float) -> None:
    mean, sd, u, low, high = 100.05, 0.12, 0.04, 99.8, 100.2
    found = process_risks(mean=mean, sd=sd, standard_uncertainty=u, lower=low, upper=high, guard=guard)
    both = stats.multivariate_normal([mean, mean], [[sd**2, sd**2], [sd**2, sd**2 + u**2]], abseps=1e-10)
    accepted_and_good = both.cdf([high, high - guard], lower_limit=[low, low + guard])
    measured = stats.norm(mean, math.hypot(sd, u))
    accepted = measured.cdf(high - guard) - measured.cdf(low + guard)
    assert found.consumer == pytest.approx(accepted - accepted_and_good, abs=1e-7)
    assert found.producer == pytest.approx(1 - found.nonconforming - accepted_and_good, abs=1e-7)
    assert found.accepted == pytest.approx(accepted, abs=1e-12)


def test_process_risks_shift_from_consumer_to_producer_with_a_wider_guard_band() -> None:
    settings = {"mean": 100.0, "sd": 0.12, "standard_uncertainty": 0.04, "lower": 99.8, "upper": 100.2}
    risks = [process_risks(**settings, guard=guard) for guard in (-0.04, 0.0, 0.04, 0.08)]
    assert [risk.consumer for risk in risks] == sorted((risk.consumer for risk in risks), reverse=True)
    assert [risk.producer for risk in risks] == sorted(risk.producer for risk in risks)


def test_acceptance_limits_refuse_a_guard_band_that_leaves_nothing() -> None:
    with pytest.raises(ValueError, match="twice that is more than the limits"):
        acceptance_limits(lower=1.0, upper=2.0, guard=0.6)


def test_verdict_rounds_to_significant_figures() -> None:
    given = {"standard_uncertainty": 0.1, "expanded": 0.2, "lower": None, "upper": "120", "rounding": "half_up"}
    assert verdict(120.4, rule="simple", figures=3, **given).outcome == "conforms"
    assert verdict(120.4, rule="simple", places=1, **given).outcome == "does_not_conform"
    with pytest.raises(ValueError, match="to None decimals and None significant figures"):
        verdict(120.4, rule="simple", **given)
