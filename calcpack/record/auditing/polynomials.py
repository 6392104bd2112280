"""Many small polynomials at once: values, and zeros inside the unit interval."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
_STEPS = 60
_CLOSE = 4e-16
_ROUNDING = 2e-15  # of the sum of a polynomial's coefficients by size


def value(coefficients: Floats, t: Floats) -> Floats:
    """Ascending powers, last axis, at ``t`` (which broadcasts against the other axes)."""
    result: Floats = coefficients[..., -1] + 0.0 * t
    for power in range(coefficients.shape[-1] - 2, -1, -1):
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
    # Between its turning points a polynomial is monotone: one sign change at most.
    rates = slope(coefficients)
    turns = zeros(rates)
    edge = np.zeros((*coefficients.shape[:-1], 1))
    knots = np.concatenate([edge, turns, edge + 1.0], axis=-1)
    ends = value(coefficients[..., None, :], knots)
    crosses = ends[..., :-1] * ends[..., 1:] < 0
    found = np.ones(crosses.shape)
    # What is nothing but rounding at a turning point changes sign there.
    nothing = np.abs(ends) <= _ROUNDING * np.abs(coefficients).sum(axis=-1)[..., None]
    found = np.where(crosses & nothing[..., 1:], knots[..., 1:], found)
    found = np.where(crosses & nothing[..., :-1], knots[..., :-1], found)
    crosses &= ~(nothing[..., 1:] | nothing[..., :-1])
    if crosses.any():
        place = np.nonzero(crosses)
        found[place] = _crossings(
            coefficients[place[:-1]],
            rates[place[:-1]],
            knots[..., :-1][place],
            knots[..., 1:][place],
            ends[..., :-1][place],
        )
    return np.sort(found, axis=-1)


def _crossings(coefficients: Floats, rates: Floats, low: Floats, high: Floats, at_low: Floats) -> Floats:
    """The one sign change of each polynomial between two places: Newton's steps, halving where they leave."""
    t = (low + high) / 2
    for _ in range(_STEPS):
        here = value(coefficients, t)
        before = here * at_low > 0
        low, high = np.where(before, t, low), np.where(before, high, t)
        rate = value(rates, t)
        step = t - here / np.where(rate == 0, 1.0, rate)
        inside = (step > low) & (step < high) & (rate != 0)
        following = np.where(here == 0, t, np.where(inside, step, (low + high) / 2))
        settled = np.abs(following - t) <= _CLOSE
        t = following
        if settled.all():
            break
    return t
