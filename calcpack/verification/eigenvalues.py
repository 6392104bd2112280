"""Lateral-torsional buckling as an eigenvalue: a beam in sideways deflection u and twist φ, cubic elements.

Shares no code with the clauses. Energy (Trahair, Flexural-torsional buckling of structures):
½∫(E Iz u''² + E Iw φ''² + G It φ'²) + Λ [∫ M u'' φ - ½ zg ∫ q φ²] stationary.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import eigh

POINTS, WEIGHTS = np.polynomial.legendre.leggauss(4)


def hermite(s: float, length: float) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]:
    """Values, first and second derivatives of the four cubic functions at s in 0..1."""
    n = np.array(
        [1 - 3 * s**2 + 2 * s**3, length * (s - 2 * s**2 + s**3), 3 * s**2 - 2 * s**3, length * (s**3 - s**2)]
    )
    d = (
        np.array(
            [
                -6 * s + 6 * s**2,
                length * (1 - 4 * s + 3 * s**2),
                6 * s - 6 * s**2,
                length * (3 * s**2 - 2 * s),
            ]
        )
        / length
    )
    c = np.array([-6 + 12 * s, length * (-4 + 6 * s), 6 - 12 * s, length * (6 * s - 2)]) / length**2
    return n, d, c


def critical_factor(
    length: float,
    weak: float,
    warping: float,
    torsion: float,
    moment: Callable[[float], float],
    load: Callable[[float], float] | None = None,
    points: Sequence[tuple[float, float]] = (),
    height: float = 0.0,
    held: Sequence[float] | None = None,
    clamped: Sequence[float] = (),
    elements: int = 24,
    top_held: float | None = None,
) -> float:
    """Factor on the moments at which the beam buckles.

    ``weak, warping, torsion`` are E Iz, E Iw, G It. ``held`` are places with u = φ = 0 (both ends if left
    out), ``clamped`` those with u' = φ' = 0 as well. ``points`` are (place, force). ``top_held`` is how far
    above the shear centre the beam is held sideways all along: u + top_held φ = 0.
    """
    h = length / elements
    size = 4 * (elements + 1)  # u, u', φ, φ' at each node
    stiff, geometric = np.zeros((size, size)), np.zeros((size, size))
    for e in range(elements):
        u = [4 * e, 4 * e + 1, 4 * e + 4, 4 * e + 5]
        f = [4 * e + 2, 4 * e + 3, 4 * e + 6, 4 * e + 7]
        for point, weight in zip(POINTS, WEIGHTS, strict=True):
            s, w = (point + 1) / 2, weight * h / 2
            n, d, c = hermite(s, h)
            x = (e + s) * h
            stiff[np.ix_(u, u)] += w * weak * np.outer(c, c)
            stiff[np.ix_(f, f)] += w * (warping * np.outer(c, c) + torsion * np.outer(d, d))
            mixed = w * moment(x) * np.outer(c, n)
            geometric[np.ix_(u, f)] += mixed
            geometric[np.ix_(f, u)] += mixed.T
            if load is not None:
                geometric[np.ix_(f, f)] -= w * height * load(x) * np.outer(n, n)
    for place, force in points:
        e = min(int(place / h), elements - 1)
        n, _, _ = hermite(place / h - e, h)
        f = [4 * e + 2, 4 * e + 3, 4 * e + 6, 4 * e + 7]
        geometric[np.ix_(f, f)] -= height * force * np.outer(n, n)
    gone: set[int] = set()
    for place in (0.0, length) if held is None else held:
        node = round(place / h)
        gone |= {4 * node, 4 * node + 2}
    for place in clamped:
        node = round(place / h)
        gone |= {4 * node + 1, 4 * node + 3}
    tie = np.eye(size)
    if top_held is not None:  # u follows from φ: u = -a φ
        for node in range(elements + 1):
            for offset in (0, 1):
                tie[4 * node + offset, 4 * node + offset] = 0.0
                tie[4 * node + offset, 4 * node + 2 + offset] = -top_held
                gone.add(4 * node + offset)
    free = [k for k in range(size) if k not in gone]
    tie = tie[:, free]
    stiff, geometric = tie.T @ stiff @ tie, tie.T @ geometric @ tie
    # K v = -Λ B v  ->  the largest 1/Λ
    return float(1 / eigh(-geometric, stiff, eigvals_only=True)[-1])
