"""Many small polynomials at once: ascending coefficients along the last axis."""

from __future__ import annotations

from math import comb

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


def evaluate(coefficients: Floats, at: Floats) -> Floats:
    """Values of polynomials (..., degree + 1) at places that broadcast with (...).

    Examples
    --------
    >>> evaluate(np.array([1.0, 0.0, 2.0]), np.array([0.0, 3.0]))
    array([ 1., 19.])
    """
    value = np.zeros(np.broadcast_shapes(coefficients.shape[:-1], at.shape))
    for power in range(coefficients.shape[-1] - 1, -1, -1):
        value = value * at + coefficients[..., power]
    return value


def derivative(coefficients: Floats) -> Floats:
    """Derivatives, one degree lower (a constant gives the constant 0).

    Examples
    --------
    >>> derivative(np.array([5.0, 4.0, 3.0]))
    array([4., 6.])
    """
    if coefficients.shape[-1] == 1:
        return np.zeros_like(coefficients)
    return coefficients[..., 1:] * np.arange(1.0, coefficients.shape[-1])


def integral(coefficients: Floats, constant: Floats | float = 0.0) -> Floats:
    """Integrals, one degree higher, with the given value (...) at 0.

    Examples
    --------
    >>> integral(np.array([4.0, 6.0]), 5.0)
    array([5., 4., 3.])
    """
    terms = coefficients.shape[-1]
    result = np.empty((*coefficients.shape[:-1], terms + 1))
    result[..., 0] = constant
    result[..., 1:] = coefficients / np.arange(1.0, terms + 1)
    return result


def shifted(coefficients: Floats, by: Floats) -> Floats:
    """The same polynomials written about the place `by` (broadcasts with (...)).

    Examples
    --------
    >>> shifted(np.array([0.0, 0.0, 1.0]), np.array(3.0))
    array([9., 6., 1.])
    """
    terms = coefficients.shape[-1]
    result = np.zeros((*np.broadcast_shapes(coefficients.shape[:-1], by.shape), terms))
    for low in range(terms):
        for power in range(terms - 1, low - 1, -1):
            result[..., low] = result[..., low] * by + comb(power, low) * coefficients[..., power]
    return result


def crossings(coefficients: Floats, width: Floats) -> Floats:
    """Places inside (0, width) where polynomials change sign.

    A double root is no crossing, a polynomial that is zero throughout has none, and a root at
    either end is not inside. Between the crossings of its derivative (found first, by the same
    road) a polynomial is monotone, so that a change of sign brackets exactly one root.

    Parameters
    ----------
    coefficients : (..., degree + 1)
    width : (...)

    Returns
    -------
    (..., degree), ascending, filled up with nan.

    Examples
    --------
    >>> crossings(np.array([[2.0, -3.0, 1.0], [1.0, -2.0, 1.0]]), np.array([3.0, 3.0]))
    array([[ 1.,  2.],
           [nan, nan]])
    """
    powers = np.arange(coefficients.shape[-1])
    return _unit_crossings(coefficients * width[..., None] ** powers) * width[..., None]


def _unit_crossings(coefficients: Floats) -> Floats:
    degree = coefficients.shape[-1] - 1
    if degree == 0:
        return np.empty((*coefficients.shape[:-1], 0))
    slopes = derivative(coefficients)
    turns = _unit_crossings(slopes)
    shape = (*turns.shape[:-1], 1)
    nodes = np.concatenate([np.zeros(shape), np.where(np.isnan(turns), 1.0, turns), np.ones(shape)], axis=-1)
    signs = np.sign(evaluate(coefficients[..., None, :], nodes))
    crossed = signs[..., :-1] * signs[..., 1:] < 0
    found = np.full(crossed.shape, np.nan)
    if crossed.any():
        row = np.nonzero(crossed)[:-1]
        found[crossed] = _bracketed_roots(
            coefficients[row], slopes[row], nodes[..., :-1][crossed], nodes[..., 1:][crossed],
            signs[..., :-1][crossed],
        )  # fmt: skip
    return np.sort(found, axis=-1)


def _bracketed_roots(coefficients: Floats, slopes: Floats, low: Floats, high: Floats, sign: Floats) -> Floats:
    """Newton's method kept inside brackets: halves the bracket whenever Newton would not."""
    root = (low + high) / 2
    last_step = high - low
    for _ in range(200):
        value = evaluate(coefficients, root)
        slope = evaluate(slopes, root)
        same = value * sign > 0
        low, high = np.where(same, root, low), np.where(same, high, root)
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            newton = root - value / slope
        # nan compares false, so that a level place is halved too
        good = (newton >= low) & (newton <= high) & (np.abs(newton - root) <= 0.5 * last_step)
        better = np.where(value == 0, root, np.where(good, newton, (low + high) / 2))
        last_step = np.abs(better - root)
        root = better
        if np.all(last_step <= 4e-16):
            break
    return root
