from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.polynomial import polynomial
from random_beams import QUICK

from calcpack.statics.polynomials import crossings, evaluate, integral, shifted


def found(coefficients, width):
    roots = crossings(np.array(coefficients, dtype=float), np.array(float(width)))
    return roots[~np.isnan(roots)]


@pytest.mark.parametrize(
    ("roots", "inside"),
    [
        ([0.5], [0.5]),
        ([0.5, 0.5], []),  # touches only
        ([0.5, 0.5, 0.5], [0.5]),
        ([0.25, 0.5, 0.5, 0.75], [0.25, 0.75]),
        ([0.1, 0.2, 0.3, 0.4, 0.9], [0.1, 0.2, 0.3, 0.4, 0.9]),
        ([0.5, 0.5 + 1e-5], [0.5, 0.5 + 1e-5]),
        ([-1.0, 2.0, 0.7], [0.7]),
        ([1e-7, 1 - 1e-7], [1e-7, 1 - 1e-7]),
    ],
)
def test_crossings_of_polynomials_with_known_roots(roots, inside):
    coefficients = polynomial.polyfromroots(roots)
    several = len(set(roots)) < len(roots)
    assert found(coefficients, 1.0) == pytest.approx(inside, abs=1e-4 if several else 1e-9)
    stretched = coefficients / 3.0 ** np.arange(len(coefficients))
    assert found(stretched, 3.0) == pytest.approx(3 * np.array(inside), abs=1e-4 if several else 1e-9)


def test_roots_at_the_ends_are_not_inside():
    assert found([0.0, 1.0, -1.0], 1.0).size == 0


@pytest.mark.parametrize("coefficients", [[0.0], [0.0] * 6, [3.0, 0.0, 0.0, 0.0], [-1.0]])
def test_constants_and_zero_have_no_crossings(coefficients):
    assert found(coefficients, 2.0).size == 0


def test_degrees_lower_than_they_look():
    assert found([-1.0, 1.0, 0.0, 0.0, 0.0, 0.0], 2.0) == pytest.approx([1.0])
    assert found([-1.0, 1.0, 1e-18, 0.0, 0.0, 1e-20], 2.0) == pytest.approx([1.0])


@QUICK
@given(st.lists(st.integers(-6, 6), min_size=1, max_size=6))
def test_every_change_of_sign_on_a_dense_grid_is_found(coefficients):
    roots = found(coefficients, 1.5)
    x = np.linspace(0, 1.5, 3001)
    signs = np.sign(evaluate(np.array(coefficients, dtype=float), x))
    changes = x[:-1][signs[:-1] * signs[1:] < 0]
    for change in changes:
        assert np.any((roots > change - 1e-12) & (roots < change + x[1] + 1e-12))
    if len(roots):
        size = np.abs(coefficients).sum()
        assert np.abs(evaluate(np.array(coefficients, dtype=float), roots)).max() < 1e-11 * size


@QUICK
@given(st.lists(st.floats(-9, 9), min_size=1, max_size=6), st.floats(-3, 3), st.floats(-3, 3))
def test_shifted_polynomials_are_the_same_polynomials(coefficients, by, at):
    given_ = np.array(coefficients)
    moved = shifted(given_, np.array(by))
    size = np.abs(given_).sum() * (1 + abs(by) + abs(at)) ** 5 + 1e-300
    assert evaluate(moved, np.array(at)) == pytest.approx(
        evaluate(given_, np.array(at + by)), abs=1e-13 * size
    )


def test_integral_starts_from_its_constant():
    assert integral(np.array([[1.0], [2.0]]), np.array([5.0, 6.0])).tolist() == [[5.0, 1.0], [6.0, 2.0]]
