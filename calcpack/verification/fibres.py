"""Bending of a concrete section with the parabola and rectangle of EN 1992-1-1, 3.1.7(1), in strips."""

from __future__ import annotations

from itertools import product
from typing import NamedTuple

import numpy as np

from calcpack.clauses.en1992.bending import bending
from calcpack.clauses.en1992.model import Outline, Strengths
from calcpack.verification.ours.en1992 import concrete
from calcpack.verification.tables import Method

STRIPS = 20_000
AREAS = (0.6e-3, 1.5e-3, 2.4e-3)  # [m²]
OUTLINES = (Outline(0.3, 0.6, 0.3, 0.0), Outline(0.3, 0.6, 0.9, 0.06))
DEPTH = 0.55  # [m]


class Parabola(NamedTuple):
    """Strength [MPa], exponent and strain at the peak (Table 3.1)."""

    fck: float
    n: float
    eps_c2: float


CONCRETES = (
    Parabola(30, 2.0, 2.0e-3),
    Parabola(50, 2.0, 2.0e-3),
    Parabola(70, 1.45, 2.4e-3),
    Parabola(90, 1.4, 2.6e-3),
)


def fibres(
    outline: Outline, strength: Strengths, area: float, depth: float, n: float, eps_c2: float
) -> float:
    """Moment resistance [kNm] of a section with its steel [m²] at a depth [m]."""
    y = (np.arange(STRIPS) + 0.5) / STRIPS * outline.depth
    width = np.where(y < outline.block_flange, outline.block_width, outline.web)

    def forces(x: float) -> tuple[float, float]:
        strain = np.clip(strength.eps_cu2 * (x - y) / x, 0.0, None)
        stress = strength.fcd * (1 - (1 - np.minimum(strain / eps_c2, 1.0)) ** n)
        strip = stress * width * outline.depth / STRIPS
        return float(strip.sum()), float((strip * y).sum())

    low, high = 1e-4, depth
    tie = area * strength.fyd
    for _ in range(60):
        middle = (low + high) / 2
        low, high = (middle, high) if forces(middle)[0] < tie else (low, middle)
    return tie * depth - forces(high)[1]


def block_beside_fibres(parabola: Parabola, outline: Outline, area: float, more: float = 1.0) -> float:
    """How far the block is from the strips, of these; the strips with ``more`` steel."""
    strength = concrete(parabola.fck)
    block = bending(outline, strength, area, DEPTH).moment
    strips = fibres(outline, strength, more * area, DEPTH, parabola.n, parabola.eps_c2)
    return abs(block - strips) / strips


def block_and_fibres(method: Method) -> float:
    """The largest difference of the stress block to the strips."""
    cases = list(product(CONCRETES, OUTLINES, AREAS))
    assert len(cases) == method.cases
    return max(block_beside_fibres(*case) for case in cases)
