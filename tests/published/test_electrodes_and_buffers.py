"""Nernst slopes, reference buffers and the ion product of water.

Sources: NBS 1977, IUPAC 1985 and 2002, IAPWS R11-07.
"""

from __future__ import annotations

from analysis.case import Case
from tests.published.checks import assert_agrees, published


@published("electrodes_and_buffers")
def test_electrode_is_as_published(case: Case) -> None:
    assert_agrees(case)
