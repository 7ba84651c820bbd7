"""The weighted line against numpy, and where there is none."""

from __future__ import annotations

import numpy as np
import pytest

from analysis.line import weighted_line

X = np.array([1.0, 2.0, 4.0, 7.0, 11.0])
SD = np.array([0.1, 0.2, 0.1, 0.3, 0.2])


def test_weighted_line_is_that_of_numpy() -> None:
    y = 3.0 - 0.5 * X + SD * np.array([0.2, -1.0, 0.5, 0.1, -0.3])  # scatter less than stated
    (slope, intercept), covariance = np.polyfit(X, y, 1, w=1 / SD, cov="unscaled")
    found = weighted_line(X, y, sd=SD)
    assert found == pytest.approx((intercept, slope, np.sqrt(covariance[1, 1])), rel=1e-9)


def test_weighted_line_counts_scatter_beyond_what_is_stated() -> None:
    y = 3.0 - 0.5 * X + 10 * SD * np.array([1.0, -1.0, 1.0, -1.0, 1.0])
    _, covariance = np.polyfit(X, y, 1, w=1 / SD, cov=True)
    found = weighted_line(X, y, sd=SD)
    assert found is not None
    assert found[2] == pytest.approx(np.sqrt(covariance[1, 1]), rel=1e-9)


def test_weighted_line_is_none_without_spread_or_with_no_numbers() -> None:
    assert weighted_line(np.full(5, 2.0), X, sd=SD) is None
    assert weighted_line(X * np.inf, X, sd=SD) is None
