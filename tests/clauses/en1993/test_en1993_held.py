"""The top flange held all along: the bottom flange under hogging, against the eigenvalues of its energy."""

import math

import numpy as np
import pytest
from beams_en1993 import profile
from scipy.linalg import eigh

from calcpack.clauses.en1993.buckling import held_factor, held_stiffness
from calcpack.statics import Curve

IPE = profile("IPE 330")
L = 5.0


def by_energy(hogging, waves=16, points=2000):
    """Least load factor over that of an even moment: K v = mu G v in half waves of twist, by the midpoint rule."""
    x = (np.arange(points) + 0.5) / points
    order = np.arange(1, waves + 1)
    slopes = order[:, None] * np.cos(order[:, None] * math.pi * x)
    push = 2 * (slopes * hogging(x)) @ slopes.T / points
    warping, torsion = held_stiffness(IPE, L)
    stiff = np.diag(order**4 * warping + order**2 * torsion)
    largest = float(eigh(push, stiff, eigvals_only=True)[-1])
    return 1 / (largest * (warping + torsion))


def test_even_hogging():
    even = Curve(np.array([0.0, L]), np.array([[-10.0]]))
    assert held_factor(IPE, even, 0.0, L, L) == pytest.approx(1.0, rel=1e-12)


def test_hogging_that_falls_to_nothing():
    """-20 at the start, 0 at the end."""
    falling = Curve(np.array([0.0, L]), np.array([[-20.0, 20.0 / L]]))
    assert held_factor(IPE, falling, 0.0, L, L) == pytest.approx(by_energy(lambda x: 1 - x), rel=1e-6)
    # converged: twice as many half waves
    assert held_factor(IPE, falling, 0.0, L, L) == pytest.approx(by_energy(lambda x: 1 - x, 32), rel=1e-4)


def test_sagging_is_left_out():
    """-10 over the first half, then +10 or nothing: the same; on any piece of a longer beam as well."""
    half, none = (Curve(np.array([0.0, L / 2, L]), np.array([[-10.0], [after]])) for after in (10.0, 0.0))
    expected = by_energy(lambda x: (x < 0.5).astype(float))
    assert held_factor(IPE, half, 0.0, L, L) == pytest.approx(held_factor(IPE, none, 0.0, L, L), rel=1e-12)
    assert held_factor(IPE, half, 0.0, L, L) == pytest.approx(expected, rel=1e-6)
    later = Curve(np.array([0.0, 2.0, 2.0 + L / 2, 2.0 + L]), np.array([[3.0], [-10.0], [10.0]]))
    assert held_factor(IPE, later, 2.0, 2.0 + L, L) == pytest.approx(expected, rel=1e-6)
