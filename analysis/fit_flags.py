"""What the analyst is told about a fit, in sentences."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
SLOPE_FROM, SLOPE_TO = 0.95, 1.02
MOST_PRIORS = 3.5
NOISE_OF_NOISE = 2.3  # relative deviation of the square of a scatter told by n flat points, times sqrt(n)


def flags_of_fit(
    *, names: Sequence[str], groups: Sequence[str], values: FloatArray, centres: FloatArray,
    priors: FloatArray, chi2_nu: float, lag_1: float, runs_z: float, degrees_of_freedom: float, points: float,
    is_noise_known: bool, last_volume: float,
    endpoint: float,
) -> tuple[str, ...]:  # fmt: skip
    """Sentences about a fit that should not be taken as it is; none for a good one."""
    found = []
    for name, group, value, centre, prior in zip(names, groups, values, centres, priors, strict=True):
        if group == "slope" and not SLOPE_FROM <= 1 + value <= SLOPE_TO:
            found.append(f"Electrode slope {100 * (1 + value):.1f} %, outside 95-102 %.")
        elif math.isfinite(prior) and abs(value - centre) > MOST_PRIORS * prior:
            times = abs(value - centre) / prior
            found.append(
                f"The fit moves the {name} by {value - centre:.3g}, {times:.1f} times what is usual: "
                "the chemistry or the electrode is not as stated."
            )
    if chi2_nu > _most_chi2(degrees_of_freedom, points, is_noise_known=is_noise_known):
        found.append(
            f"The model leaves {math.sqrt(chi2_nu):.1f} times the scatter of the readings: its chemistry "
            "does not describe this curve."
        )
    if runs_z < -3 or lag_1 > 3 / math.sqrt(points):
        found.append(
            "The residuals of the model follow one another: look for drift, a slow electrode or a second analyte."
        )
    if endpoint > last_volume:
        found.append(f"The curve stops at {last_volume:.2f} mL, before the equivalence point at {endpoint:.2f} mL.")
    return tuple(found)


def _most_chi2(degrees_of_freedom: float, points: float, *, is_noise_known: bool) -> float:
    """1 + 3 standard deviations; where the scatter itself comes from the curve, its logarithm is what is
    normal.
    """
    own = math.sqrt(2 / degrees_of_freedom)
    if is_noise_known:
        return 1 + 3 * own
    return math.exp(3 * math.hypot(own, NOISE_OF_NOISE / math.sqrt(0.6 * points)))
