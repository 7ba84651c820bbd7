"""Budgets, degrees of freedom and coverage factors: JCGM 100:2008 (GUM) annexes G and H, JCGM 101:2008."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("uncertainty")
def test_uncertainty_is_as_published(case: Case) -> None:
    assert_agrees(case)
