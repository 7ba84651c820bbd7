"""pH along titrations and endpoints of a printed curve: OpenStax, Whitten, Harvey."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("titration_curves")
def test_titration_curve_is_as_published(case: Case) -> None:
    assert_agrees(case)
