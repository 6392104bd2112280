"""Many small polynomials at once: values, and zeros inside the unit interval."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
_HALVINGS = 60


def value(coefficients: Floats, t: Floats) -> Floats:
    """Ascending powers, last axis, at ``t`` (which broadcasts against the other axes)."""
    result = np.zeros(np.broadcast_shapes(coefficients.shape[:-1], t.shape))
    for power in range(coefficients.shape[-1] - 1, -1, -1):
        result = result * t + coefficients[..., power]
    return result


def slope(coefficients: Floats) -> Floats:
    """The derivative.

    Examples
    --------
    >>> slope(np.array([1.0, 2.0, 3.0]))
    array([2., 6.])
    """
    if coefficients.shape[-1] == 1:
        return np.zeros_like(coefficients)
    return coefficients[..., 1:] * np.arange(1, coefficients.shape[-1])


def zeros(coefficients: Floats) -> Floats:
    """Where polynomials change sign between 0 and 1, ascending; 1 stands where there are no more.

    Parameters
    ----------
    coefficients : (..., degree + 1)
        Ascending powers.

    Returns
    -------
    (..., degree)

    Examples
    --------
    >>> zeros(np.array([0.02, -0.3, 1.0])).round(12)
    array([0.1, 0.2])
    """
    degree = coefficients.shape[-1] - 1
    if degree == 0:
        return np.ones((*coefficients.shape[:-1], 0))
    # Between the turning points a polynomial is monotone: one sign change at most, found by halving.
    turns = zeros(slope(coefficients))
    edge = np.zeros((*coefficients.shape[:-1], 1))
    knots = np.concatenate([edge, turns, edge + 1.0], axis=-1)
    low, high = knots[..., :-1].copy(), knots[..., 1:].copy()
    spread = coefficients[..., None, :]
    at_low, at_high = value(spread, low), value(spread, high)
    crosses = at_low * at_high < 0
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        before = value(spread, middle) * at_low > 0
        low, high = np.where(before, middle, low), np.where(before, high, middle)
    return np.sort(np.where(crosses, (low + high) / 2, 1.0), axis=-1)
