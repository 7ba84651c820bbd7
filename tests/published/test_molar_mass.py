"""Molar masses of 20 substances.

Sources: abridged standard atomic weights (CIAAW), with the weights given and with the engine's own.
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("molar_mass")
def test_molar_mass_is_as_published(case: Case) -> None:
    assert_agrees(case)
