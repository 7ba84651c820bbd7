"""Results that share an input: against the guide's resistors, hand arithmetic and a reference library."""

from __future__ import annotations

import math

import numpy as np
import pytest
import uncertainties
from hypothesis import given
from hypothesis import strategies as st

from analysis.together import Result, result_of, use_together


def test_ten_resistors_against_one_standard_do_not_average_out() -> None:
    # JCGM 100:2008, 5.2.2, example: ten resistors of 1000 ohm, each calibrated against one standard known to 100
    # milliohm; in series 1 ohm of uncertainty and not 0.32 ohm.
    resistors = [Result(f"R{n}", 1000.0, "ohm", {"standard:1": 0.1}) for n in range(10)]
    found = use_together(resistors)
    assert 10 * found.mean.u == pytest.approx(1.0, rel=1e-12)
    assert 10 * found.mean.u_if_independent == pytest.approx(0.32, abs=0.005)
    assert found.weighted is None  # they are one and the same input


def test_independent_results_are_weighed_by_their_variances() -> None:
    found = use_together([Result("a", 10.0, "g/L", {"a/x": 0.1}), Result("b", 10.4, "g/L", {"b/x": 0.2})])
    assert found.weighted is not None
    assert found.weighted.value == pytest.approx((10.0 / 0.01 + 10.4 / 0.04) / (1 / 0.01 + 1 / 0.04))
    assert found.weighted.u == pytest.approx(1 / math.sqrt(1 / 0.01 + 1 / 0.04))
    assert found.chi_square == pytest.approx(0.4**2 / (0.01 + 0.04))
    assert found.correlation[0, 1] == 0.0
    assert found.shared == ()


def test_covariance_is_that_of_a_reference_library() -> None:
    titrant, burette = uncertainties.ufloat(0.0, 0.03), uncertainties.ufloat(0.0, 0.02)
    one = 6.2 + titrant + 1.5 * burette + uncertainties.ufloat(0.0, 0.01)
    other = 6.3 + 1.1 * titrant - 0.5 * burette + uncertainties.ufloat(0.0, 0.02)
    expected = np.array(uncertainties.covariance_matrix([one, other]))
    found = use_together([
        Result("one", 6.2, "g/L", {"lot:N": 0.03, "burette:B": 0.03, "one/r": 0.01}),
        Result("other", 6.3, "g/L", {"lot:N": 0.033, "burette:B": -0.01, "other/r": 0.02}),
    ])  # fmt: skip
    assert found.covariance == pytest.approx(expected, rel=1e-9)
    assert found.mean.u == pytest.approx(((one + other) / 2).std_dev, rel=1e-9)
    assert found.differences[0].u == pytest.approx((one - other).std_dev, rel=1e-9)
    assert found.shared == ("lot:N", "burette:B")


def test_two_results_on_one_bottle_differ_by_less_than_on_two() -> None:
    one = Result("one", 6.2, "g/L", {"lot:N": 0.03, "one/r": 0.01})
    same = use_together([one, Result("two", 6.25, "g/L", {"lot:N": 0.03, "two/r": 0.01})])
    other = use_together([one, Result("two", 6.25, "g/L", {"lot:M": 0.03, "two/r": 0.01})])
    assert abs(same.differences[0].zeta) == pytest.approx(0.05 / (0.01 * math.sqrt(2)))
    assert abs(other.differences[0].zeta) < 1.2
    assert same.mean.u > other.mean.u


@pytest.mark.parametrize("key", ["repeatability", "reading"])
def test_scatter_of_a_result_is_its_own(key: str) -> None:
    budget = [{"key": key, "contribution": 0.1}, {"key": "burette:B", "contribution": 0.2}]
    found = use_together([result_of(name, value=1.0, unit="%", budget=budget) for name in ("R-1", "R-2")])
    assert found.shared == ("burette:B",)
    assert found.covariance[0, 1] == pytest.approx(0.04)


@given(
    st.lists(st.floats(0.01, 1.0), min_size=2, max_size=6),
    st.floats(0.0, 1.0),
    st.floats(0.1, 100.0),
)  # fmt: skip
def test_unit_scales_everything_alike(own: list[float], shared: float, scale: float) -> None:
    def of(factor: float) -> list[Result]:
        return [
            Result(str(n), factor * (5.0 + n), "u", {f"{n}/r": factor * u, "lot:1": factor * shared})
            for n, u in enumerate(own)
        ]

    plain, scaled = use_together(of(1.0)), use_together(of(scale))
    assert scaled.mean.u == pytest.approx(scale * plain.mean.u, rel=1e-9)
    assert scaled.correlation == pytest.approx(plain.correlation, abs=1e-9)
    assert plain.weighted is not None
    assert scaled.weighted is not None
    assert plain.weighted.u <= plain.mean.u * (1 + 1e-9)
    assert scaled.weighted.weights == pytest.approx(plain.weighted.weights, rel=1e-6, abs=1e-9)


@pytest.mark.parametrize(
    ("results", "sentence"),
    [
        ([Result("a", 1.0, "%", {})], "1 result is given"),
        ([Result("a", 1.0, "%", {}), Result("a", 1.0, "%", {})], "a is given twice"),
        ([Result("a", 1.0, "%", {}), Result("b", 1.0, "g/L", {})], "Results are in % and g/L"),
        ([Result("a", math.nan, "%", {}), Result("b", 1.0, "%", {})], "a is nan"),
    ],
)
def test_what_cannot_be_compared_is_refused(results, sentence) -> None:
    with pytest.raises(ValueError, match=sentence):
        use_together(results)
