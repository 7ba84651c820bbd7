"""Capability indices and their intervals: Montgomery, NIST/SEMATECH."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("capability")
def test_capability_is_as_published(case: Case) -> None:
    assert_agrees(case)
