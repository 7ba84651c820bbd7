"""Alkalinity split by two endpoints."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from analysis.alkalinity import split_alkalinity

AMOUNTS = st.floats(0, 1000)


@given(AMOUNTS, AMOUNTS, st.booleans())
def test_split_alkalinity_finds_what_was_mixed(one: float, other: float, has_hydroxide: bool) -> None:
    # Hydroxide and bicarbonate do not last together; P takes all hydroxide and half of the carbonate.
    hydroxide, bicarbonate = (one, 0.0) if has_hydroxide else (0.0, one)
    found = split_alkalinity(phenolphthalein=hydroxide + other / 2, total=hydroxide + other + bicarbonate)
    assert found.hydroxide == pytest.approx(hydroxide, abs=1e-9)
    assert found.carbonate == pytest.approx(other, abs=1e-9)
    assert found.bicarbonate == pytest.approx(bicarbonate, abs=1e-9)


@pytest.mark.parametrize(("p", "t"), [(-1.0, 5.0), (6.0, 5.0), (1.0, math.inf), (math.nan, 5.0)])
def test_split_alkalinity_refuses_what_cannot_be(p: float, t: float) -> None:
    with pytest.raises(ValueError, match="0 <= P <= T is expected"):
        split_alkalinity(phenolphthalein=p, total=t)
