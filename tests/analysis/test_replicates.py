"""Agreement of titres and their statistics."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.replicates import concordant_set, lag_1_autocorrelation, spread

TITRES = st.lists(st.integers(900, 1100).map(lambda hundredths: hundredths / 100), min_size=1, max_size=9)


def test_concordant_set_leaves_the_rough_titre_out() -> None:
    found = concordant_set([10.60, 10.05, 10.00, 10.10], limit=0.10)
    assert found.indices == (1, 2, 3)
    assert found.range == pytest.approx(0.10)
    assert found.values == (10.60, 10.05, 10.00, 10.10)


@pytest.mark.parametrize(("low", "high"), [(9.95, 10.05), (24.10, 24.20), (0.30, 0.40), (48.85, 48.95)])
def test_concordant_set_takes_a_range_equal_to_the_limit(low: float, high: float) -> None:
    assert concordant_set([low, high], limit=0.10).indices == (0, 1)


def test_concordant_set_decides_a_tie_by_the_smaller_range_and_says_so() -> None:
    found = concordant_set([10.00, 10.09, 10.50, 10.55], limit=0.10)
    assert found.indices == (2, 3)
    assert found.tie_sentence == (
        "2 sets of 2 titres agree; the one with the smallest range counts, then the earliest."
    )


def test_concordant_set_decides_equal_ranges_by_the_earliest() -> None:
    assert concordant_set([10.50, 10.00, 10.05, 10.55], limit=0.06).indices == (0, 3)


@given(TITRES)
def test_concordant_set_is_the_largest_of_all_sets(titres: list[float]) -> None:
    found = concordant_set(titres, limit=0.10)
    inside = [titres[place] for place in found.indices]
    assert max(inside) - min(inside) <= 0.10 + 1e-9
    starts = [sum(low - 1e-9 <= value <= low + 0.10 + 1e-9 for value in titres) for low in titres]
    assert len(inside) == max(starts)


@given(TITRES, st.sampled_from([1e-3, 1.0, 1000.0]))
def test_concordant_set_is_the_same_in_another_unit(titres: list[float], factor: float) -> None:
    one, other = (concordant_set([v * f for v in titres], limit=0.1 * f) for f in (1.0, factor))
    assert one.indices == other.indices


@given(TITRES, st.randoms(use_true_random=False))
def test_spread_does_not_depend_on_the_order(titres: list[float], random) -> None:
    shuffled = titres.copy()
    random.shuffle(shuffled)
    assert spread(titres) == spread(shuffled)


def test_spread_of_one_value_has_no_standard_deviation() -> None:
    found = spread([10.0])
    assert (found.sd, found.rsd_percent, found.range) == (None, None, 0.0)


def test_lag_1_autocorrelation_sees_drift_and_alternation() -> None:
    assert lag_1_autocorrelation([1, 2, 3, 4, 5, 6]) > 0.4
    assert lag_1_autocorrelation([1, 2, 1, 2, 1, 2]) < -0.7


@pytest.mark.parametrize(("values", "what"), [([], "empty"), ([1.0, math.nan], "Value 2 is nan")])
def test_concordant_set_refuses_what_is_no_titre(values: list[float], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        concordant_set(values, limit=0.1)


@pytest.mark.parametrize("limit", [0.0, -0.1, math.inf, math.nan])
def test_concordant_set_refuses_a_limit_that_is_none(limit: float) -> None:
    with pytest.raises(ValueError, match="Limit of the range"):
        concordant_set([10.0, 10.1], limit=limit)
