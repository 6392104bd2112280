"""A beam that buckles sideways: own finite elements for u and φ, an eigenvalue; no code of the clauses.

The energy of a doubly symmetric beam loaded at its shear centre, u sideways and φ the twist, is
½ ∫ (E I_y u''² + E C_w φ''² + G J φ'²) dx + λ ∫ M u'' φ dx; at the critical λ it has no minimum any more.
Both u and φ are cubic on each element, with their slopes as unknowns.
"""

from __future__ import annotations

import numpy as np
from scipy.linalg import eigh

RAIL = 1e6  # stiffness of a rail, in E I_y over the length's fourth power
PLACES, WEIGHTS = np.polynomial.legendre.leggauss(5)


def _cubic(s, h):
    """The four cubic shapes on an element of length h at s from 0 to 1, with two derivatives."""
    value = np.array(
        [1 - 3 * s**2 + 2 * s**3, h * (s - 2 * s**2 + s**3), 3 * s**2 - 2 * s**3, h * (s**3 - s**2)]
    )
    slope = (
        np.array([6 * s**2 - 6 * s, h * (1 - 4 * s + 3 * s**2), 6 * s - 6 * s**2, h * (3 * s**2 - 2 * s)]) / h
    )
    bend = np.array([12 * s - 6, h * (6 * s - 4), 6 - 12 * s, h * (6 * s - 2)]) / h**2
    return value, slope, bend


def critical_factor(length, bending, warping, torsion, moment, *, elements=24, held=(), tip=False, rail=None):
    """How many times the moments may grow before the beam buckles.

    Parameters
    ----------
    length : float
    bending, warping, torsion : float
        E I_y, E C_w, G J.
    moment : callable
        M(x) at the factor 1.
    held : sequence of int
        Inner nodes where u and φ are held.
    tip : bool
        A cantilever: everything is held at the start and nothing at the end.
    rail : float
        Height above the shear centre of a stiff rail that holds the beam sideways all along; it is a spring
        under u + height φ, where a sagging moment presses the upper side.
    """
    h, nodes = length / elements, elements + 1
    stiff, load = np.zeros((4 * nodes, 4 * nodes)), np.zeros((4 * nodes, 4 * nodes))
    for element in range(elements):
        first = 4 * element  # u, u', φ, φ' at each node
        u = [first, first + 1, first + 4, first + 5]
        twist = [first + 2, first + 3, first + 6, first + 7]
        for place, weight in zip((PLACES + 1) / 2, WEIGHTS / 2, strict=True):
            value, slope, bend = _cubic(place, h)
            dx = weight * h
            stiff[np.ix_(u, u)] += bending * np.outer(bend, bend) * dx
            stiff[np.ix_(twist, twist)] += (
                warping * np.outer(bend, bend) + torsion * np.outer(slope, slope)
            ) * dx
            if rail is not None:
                both = [*u, *twist]
                sideways = np.concatenate([value, rail * value])
                stiff[np.ix_(both, both)] += RAIL * bending / length**4 * np.outer(sideways, sideways) * dx
            coupled = moment((element + place) * h) * np.outer(bend, value) * dx
            load[np.ix_(u, twist)] += coupled
            load[np.ix_(twist, u)] += coupled.T
    fixed = {0, 1, 2, 3} if tip else {4 * node + each for node in (0, elements, *held) for each in (0, 2)}
    free = [each for each in range(4 * nodes) if each not in fixed]
    # load and stiffness change places: stiffness is definite, the largest eigenvalue is 1 / λ
    largest = eigh(load[np.ix_(free, free)], stiff[np.ix_(free, free)], eigvals_only=True)[-1]
    return 1 / largest
