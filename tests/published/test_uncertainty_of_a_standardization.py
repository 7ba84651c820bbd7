"""Standardization of sodium hydroxide and titration of hydrochloric acid.

Sources: budgets of QUAM:2012.P1, A2 and A3.
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("uncertainty_of_a_standardization")
def test_standardization_budget_is_as_published(case: Case) -> None:
    assert_agrees(case)
