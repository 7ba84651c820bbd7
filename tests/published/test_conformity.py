"""Rounding, verdicts, probabilities and guard bands.

Sources: pharmacopoeias, ASTM E29, JCGM 106:2012, ILAC-G8, EURACHEM.
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("conformity")
def test_verdict_is_as_published(case: Case) -> None:
    assert_agrees(case)
