"""Constants, limits, averages and run rules: ASTM E2587, Montgomery, NIST/SEMATECH, Nelson 1984."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("control_charts")
def test_control_chart_is_as_published(case: Case) -> None:
    assert_agrees(case)
