"""Results as laboratories express them.

Sources: equivalents, acidity, alkalinity, acid value (handbooks, EN 14104, Standard Methods).
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("titration_results")
def test_result_is_as_published(case: Case) -> None:
    assert_agrees(case)
