"""How many protons an acid has lost at a pH, and how that changes with pH and with each pKa.

The states of a polyprotic acid are weighed as 1, K1/h, K1 K2/h^2, ... For pKa from -3 to 16, at most six
steps and pH -2 to 16 no weight leaves the range of a double, so no logarithms are needed.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]


def fractions(inverse_h: FloatArray, constants: Sequence[FloatArray]) -> list[FloatArray]:
    """The share of each state, from the fully protonated one on.

    Parameters
    ----------
    inverse_h : array
        1 / (activity of the hydrogen ion) [L/mol].
    constants : sequence of arrays
        Acid constants, most acidic first; each broadcasts against ``inverse_h``.
    """
    terms = [np.ones_like(inverse_h)]
    for constant in constants:
        terms.append(terms[-1] * constant * inverse_h)
    whole = terms[0].copy()
    for term in terms[1:]:
        whole += term
    inverse = 1.0 / whole
    return [term * inverse for term in terms]


def protons_lost(inverse_h: FloatArray, constants: Sequence[FloatArray]) -> tuple[FloatArray, list[FloatArray]]:
    """Mean number of protons lost, and its covariance with having lost at least j, for each step j.

    The covariances sum to the variance. d(mean)/dpH = ln10 * variance; d(mean)/dpK_j = -ln10 * covariance_j.
    """
    if len(constants) == 1:
        ratio = constants[0] * inverse_h
        share = ratio / (1.0 + ratio)
        return share, [share * (1.0 - share)]
    states = fractions(inverse_h, constants)
    count = len(constants)
    tails, weighted = [states[count]], [count * states[count]]
    for j in range(count - 1, 0, -1):
        tails.append(tails[-1] + states[j])
        weighted.append(weighted[-1] + j * states[j])
    tails.reverse()
    weighted.reverse()
    mean = tails[0].copy()
    for tail in tails[1:]:
        mean += tail
    return mean, [w - mean * tail for w, tail in zip(weighted, tails, strict=True)]
