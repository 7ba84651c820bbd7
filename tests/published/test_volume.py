"""Volumes, weighings and their uncertainties: Tanaka (2001), ISO 8655-6, OIML R 111, ISO 4787, QUAM."""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("volume")
def test_volume_is_as_published(case: Case) -> None:
    assert_agrees(case)
