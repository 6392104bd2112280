"""Deflection: by span over depth, and from curvatures with cracking, creep and shrinkage."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from calcpack.clauses.en1992.cracking import Elastic
from calcpack.clauses.en1992.model import Strengths
from calcpack.clauses.en1992.national import National

Floats = NDArray[np.float64]
LASTING = 0.5  # β of 7.4.3(3): sustained or repeated loads
SINGLE = 1.0  # a single short-term load


def basic_span_depth(ratio: float, ratio_2: float, factor: float, strength: Strengths) -> float:
    """Span over depth up to which a deflection need not be worked out.

    Parameters
    ----------
    ratio, ratio_2 : float
        Bars required in tension and in compression, over b d.
    factor : float
        K, for the way the span is held.

    Source: EN 1992-1-1:2004, 7.4.2(2), (7.16.a) and (7.16.b).

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> round(basic_span_depth(0.015, 0.0, 1.0, C30), 1), round(basic_span_depth(0.005, 0.0, 1.0, C30), 1)
    (14.0, 20.5)
    """
    fck = strength.fck / 1e3
    reference = 1e-3 * math.sqrt(fck)
    root = math.sqrt(fck)
    if ratio <= reference:
        over = reference / ratio
        return float(factor * (11 + 1.5 * root * over + 3.2 * root * (over - 1) ** 1.5))
    lean = 11 + 1.5 * root * reference / (ratio - ratio_2)
    return factor * (lean + root / 12 * math.sqrt(ratio_2 / reference))


def span_factor(left: str, right: str, national: National) -> float:
    """K by the way a span is held: "simple", "continuous" (fixed ends too) or "free".

    Parameters
    ----------
    left, right : str
    national : National
        K [1] of each way.

    Source: EN 1992-1-1:2004, 7.4.2, Table 7.4N.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> span_factor("simple", "continuous", national()), span_factor("continuous", "free", national())
    (1.3, 0.4)
    """
    if "free" in (left, right):
        return national["K_cantilever"]
    held = (left == "continuous") + (right == "continuous")
    return national[("K_simple", "K_end", "K_inner")[held]]


def interpolation(moment: Floats, cracking: float, beta: float) -> Floats:
    """ζ: how far a section is on the way from uncracked to fully cracked.

    Parameters
    ----------
    moment : array [kNm]
        By size.
    cracking : float [kNm]
    beta : float

    Source: EN 1992-1-1:2004, 7.4.3(3), (7.19).

    Examples
    --------
    >>> interpolation(np.array([10.0, 20.0, 40.0]), 20.0, 0.5)
    array([0.   , 0.5  , 0.875])
    """
    size = np.abs(moment)
    over = cracking / np.maximum(size, cracking)
    return np.where(size >= cracking, 1 - beta * over**2, 0.0)


def curvature(moment: Floats, zeta: Floats, section: Elastic, modulus: float, shrinkage: float) -> Floats:
    """Curvature by size [1/m] under moments by size [kNm].

    Parameters
    ----------
    moment, zeta : array
    section : Elastic
    modulus : float [kPa]
        Of the concrete, E_c,eff.
    shrinkage : float
        Free shrinkage strain, ε_cs.

    Source: EN 1992-1-1:2004, 7.4.3(3) and (6), (7.18) and (7.21).

    Examples
    --------
    >>> from calcpack.clauses.en1992.cracking import elastic
    >>> from calcpack.clauses.en1992.model import Outline
    >>> from calcpack.clauses.en1992.samples import C30
    >>> section = elastic(Outline(0.3, 0.5, 0.3, 0.0), C30, 1.0e-3, 0.45, 0.0)
    >>> gross = 10.0 / (C30.ecm * 0.3 * 0.5**3 / 12)
    >>> found = curvature(np.array([10.0]), np.array([0.0]), section, C30.ecm, 0.0)
    >>> bool(0.9 * gross < found[0] < gross)  # the bars help a little
    True
    """
    uncracked = moment / (modulus * section.inertia_1)
    cracked = moment / (modulus * section.inertia_2)
    uncracked = uncracked + shrinkage * section.ratio * section.first_1 / section.inertia_1
    cracked = cracked + shrinkage * section.ratio * section.first_2 / section.inertia_2
    return np.asarray(zeta * cracked + (1 - zeta) * uncracked)


def deflections(
    x: Floats, kappa: Floats, supports: Sequence[float], fixed: tuple[bool, bool] = (False, False)
) -> Floats:
    """Deflection line from the curvature [m], downward positive.

    Every span is held at both of its supports; an overhang goes on with the slope of the span beside it,
    or starts level from a fixed end.

    Parameters
    ----------
    x : array [m]
        From the beam's start to its end, ascending, supports among them.
    kappa : array [1/m]
        Sagging positive.
    supports : sequence of float [m]
    fixed : (bool, bool)
        Start and end held against rotation.

    Returns
    -------
    array [m]

    Source: v'' = -κ, integrated by the trapezium rule.

    Examples
    --------
    >>> x = np.linspace(0.0, 6.0, 601)
    >>> line = deflections(x, np.full_like(x, 1e-3), (0.0, 6.0))
    >>> round(float(line.max()) * 1e3, 4)  # κ L²/8 [mm]
    4.5
    """
    steps = np.diff(x)
    slope = np.concatenate([[0.0], np.cumsum(-(kappa[1:] + kappa[:-1]) / 2 * steps)])
    free = np.concatenate(
        [[0.0], np.cumsum(slope[:-1] * steps - (2 * kappa[:-1] + kappa[1:]) / 6 * steps**2)]
    )
    at = [int(np.argmin(np.abs(x - place))) for place in supports]
    line = np.zeros_like(x)
    spans = list(pairwise(at))
    tilts = {}
    for first, last in spans:
        tilt = -(free[last] - free[first]) / (x[last] - x[first])
        part = slice(first, last + 1)
        line[part] = free[part] - free[first] + tilt * (x[part] - x[first])
        tilts[first, last] = tilt
    ends = ((at[0], slice(0, at[0] + 1), 0), (at[-1], slice(at[-1], len(x)), -1))
    for number, (hold, part, which) in enumerate(ends):
        if part.stop - part.start < 2:
            continue
        tilt = -slope[hold] if fixed[number] or (fixed[1 - number] and not spans) else None
        if tilt is None:
            tilt = tilts[spans[which]]
        line[part] = free[part] - free[hold] + tilt * (x[part] - x[hold])
    return line
