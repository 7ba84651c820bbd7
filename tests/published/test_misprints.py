"""Values that are printed wrong somewhere: written down, never fitted. Each note says what is wrong."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_differs, misprints


@misprints()
def test_misprint_is_not_reproduced(case: Case) -> None:
    assert_differs(case)
