"""Critical values and examples of outlier tests.

Sources: Rorabacher 1991, Dixon 1953, ASTM E178, ISO 5725-2, NIST/SEMATECH, Harvey.
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("outliers")
def test_outlier_test_is_as_published(case: Case) -> None:
    assert_agrees(case)
