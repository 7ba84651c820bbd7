"""Capability: intervals that cover, and what one-sided limits leave."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.capability import capability, capability_from, freedom_of_moving_ranges, freedom_of_ranges


def test_capability_intervals_cover_the_true_index() -> None:
    rng, covered = np.random.default_rng(23), np.zeros(4)
    for values in rng.normal(10.0, 1.0, (1500, 30)):
        found = capability(values.tolist(), lower=6.0, upper=15.0)
        truths = zip((found.cp, found.cpk, found.pp, found.ppk), (1.5, 4 / 3, 1.5, 4 / 3), strict=True)
        covered += [index.lower <= truth <= index.upper for index, truth in truths]
    assert np.all(covered / 1500 > 0.93)
    assert np.all(covered / 1500 < 0.975)


def test_freedom_of_moving_ranges_is_that_of_their_scatter() -> None:
    x = np.random.default_rng(29).normal(size=(40_000, 15))
    means = np.abs(np.diff(x, axis=1)).mean(axis=1)
    assert freedom_of_moving_ranges(15) == pytest.approx(means.mean() ** 2 / (2 * means.var()), rel=0.03)


def test_freedom_of_ranges_is_nearly_that_of_standard_deviations_for_two_values() -> None:
    assert freedom_of_ranges([2] * 10) == pytest.approx(8.76, abs=0.01)


def test_capability_with_one_limit_has_no_cp() -> None:
    found = capability([1.0, 1.2, 0.9, 1.1], lower=None, upper=2.0)
    assert (found.cp, found.pp, found.off_centre) == (None, None, None)
    assert found.ppk.value == pytest.approx((2.0 - found.mean) / (3 * found.sigma_overall))


def test_capability_of_a_centred_process_has_equal_indices() -> None:
    found = capability_from(mean=5, sigma_within=1, sigma_overall=1, n=50, freedom_within=49, lower=2, upper=8)
    assert found.cp is not None
    assert found.cp.value == found.cpk.value == 1
    assert found.expected_outside == pytest.approx(0.0026998, abs=1e-7)


@pytest.mark.parametrize(
    ("limits", "what"),
    [((None, None), "both empty"), ((3.0, 2.0), "the lower must be below")],
)
def test_capability_refuses_limits_that_are_none(limits: tuple[float | None, float | None], what: str) -> None:
    with pytest.raises(ValueError, match=what):
        capability([1.0, 2.0, 3.0], lower=limits[0], upper=limits[1])
