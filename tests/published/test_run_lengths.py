"""Average run lengths.

Sources: Montgomery, Lucas and Saccucci 1990, Lucas and Crosier 1982, Champ and Woodall 1987, Siegmund 1985.
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("run_lengths")
def test_run_length_is_as_published(case: Case) -> None:
    assert_agrees(case)
