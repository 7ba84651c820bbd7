"""The scatter of the readings of many curves, from the curves themselves."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]
FLAT_SHARE = 0.6
MAD = 0.6744897501960817
CUT, CUT_MEAN = 2.0, 0.9205375


def scatter(volume: FloatArray, reading: FloatArray, *, mask: FloatArray | None = None) -> FloatArray:
    """Standard deviation of a reading of each curve [unit of the reading].

    Each point is held against the cubic through its four neighbours; a robust scale of the flattest 60 % of
    the points counts, so that neither the jump nor a bad reading does.

    Parameters
    ----------
    volume, reading : array
        Curves by points.
    mask : array, optional
        1 for a point, 0 for padding at the end of a row.
    """
    v = [volume[:, k : volume.shape[1] - 4 + k] for k in range(5)]
    y = [reading[:, k : reading.shape[1] - 4 + k] for k in range(5)]
    away, variance = y[2].copy(), np.ones_like(v[2])
    with np.errstate(divide="ignore", invalid="ignore"):
        for i in (0, 1, 3, 4):
            weight = np.ones_like(v[2])
            for j in (0, 1, 3, 4):
                if i != j:
                    weight *= (v[2] - v[j]) / (v[i] - v[j])
            away -= weight * y[i]
            variance += weight * weight
        steep = np.abs((y[3] - y[1]) / (v[3] - v[1]))
        size = np.abs(away) / np.sqrt(variance)
    if mask is not None:
        steep = np.where(mask[:, 4:] > 0, steep, np.inf)
    return _scale_of_flattest(size, steep)


def _scale_of_flattest(size: FloatArray, steep: FloatArray) -> FloatArray:
    """Huber's scale of the sizes at the flattest points: from the median, then mean squares cut at 2
    deviations.
    """
    usable = np.isfinite(steep).sum(axis=1)
    take = np.maximum((FLAT_SHARE * usable).astype(int), np.minimum(3, usable))
    ranked = np.take_along_axis(size, np.argsort(steep, axis=1), 1)
    outside = np.arange(size.shape[1])[None, :] >= take[:, None]
    ranked[outside] = np.inf
    ranked.sort(axis=1)
    rows = np.arange(size.shape[0])
    scale = 0.5 * (ranked[rows, (take - 1) // 2] + ranked[rows, take // 2]) / MAD
    ranked[np.isinf(ranked)] = 0.0
    for _ in range(4):
        cut = np.minimum(ranked, CUT * scale[:, None])
        scale = np.sqrt((cut * cut).sum(axis=1) / (take * CUT_MEAN))
    return np.asarray(scale)
