"""Means, spreads, lines and analyses of variance on certified data: NIST StRD."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("reference_data")
def test_statistic_is_as_published(case: Case) -> None:
    assert_agrees(case)
