"""Sections under service loads: uncracked, cracked, and the width of the cracks."""

from __future__ import annotations

import math
from dataclasses import dataclass

from calcpack.clauses.en1992.model import Outline, Strengths, within
from calcpack.clauses.en1992.national import National

BOND = 0.8  # k_1 of 7.3.4(3), ribbed bars
PURE_BENDING = 0.5  # k_2
LONG_TERM = 0.4  # k_t of 7.3.4(2)
LEAST_STRAIN = 0.6  # part of the steel's own strain, 7.3.4(2)


@dataclass(frozen=True)
class Elastic:
    """A section under service loads with its tension bars; the compression bars are left out.

    Parameters
    ----------
    ratio : float
        Es over the modulus of the concrete.
    x_1, inertia_1, first_1 : float [m], [m4], [m3]
        Uncracked: neutral axis from the face in compression, second moment, first moment of the bars.
    x_2, inertia_2, first_2 : float
        Fully cracked.
    cracking : float [kNm]
        Moment at which it cracks.
    """

    ratio: float
    x_1: float
    inertia_1: float
    first_1: float
    x_2: float
    inertia_2: float
    first_2: float
    cracking: float


def elastic(outline: Outline, strength: Strengths, area: float, depth: float, creep: float) -> Elastic:
    """Uncracked and fully cracked section.

    Parameters
    ----------
    area, depth : float [m2], [m]
        Of the tension bars.
    creep : float
        φ(∞, t0); 0 for a load that does not last.

    Returns
    -------
    Elastic

    Source: EN 1992-1-1:2004, 7.4.3(3) to (6), (7.20); equilibrium of the cracked section.

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> found = elastic(Outline(0.3, 0.5, 0.3, 0.0), C30, 1.0e-3, 0.45, 2.0)
    >>> round(found.ratio, 2), round(found.x_2 * 1e3, 1), round(found.cracking, 1)
    (18.18, 180.7, 36.2)
    """
    ratio = strength.es * (1 + creep) / strength.ecm
    extra = (ratio - 1) * area
    gross = outline.area
    x_1 = (gross * outline.centroid + extra * depth) / (gross + extra)
    inertia_1 = outline.inertia + gross * (x_1 - outline.centroid) ** 2 + extra * (depth - x_1) ** 2
    width, web, flange = outline.block_width, outline.web, outline.block_flange
    steel = ratio * area
    x_2 = _root(width, 0.0, steel, depth)
    if flange and x_2 > flange:
        x_2 = _root(web, (width - web) * flange, steel, depth, (width - web) * flange**2 / 2)
        inertia_2 = width * x_2**3 / 3 - (width - web) * (x_2 - flange) ** 3 / 3
    else:
        inertia_2 = width * x_2**3 / 3
    inertia_2 += steel * (depth - x_2) ** 2
    return Elastic(
        ratio,
        x_1,
        inertia_1,
        area * (depth - x_1),
        x_2,
        inertia_2,
        area * (depth - x_2),
        strength.fctm * outline.inertia / (outline.depth - outline.centroid),
    )


def _root(width: float, wings: float, steel: float, depth: float, moment: float = 0.0) -> float:
    """Neutral axis where the first moments of compression zone and bars balance."""
    linear, constant = wings + steel, moment + steel * depth
    return (-linear + math.sqrt(linear**2 + 2 * width * constant)) / width


@dataclass(frozen=True)
class Crack:
    """A crack's width and what leads to it; stresses in kPa, lengths in m."""

    stress: float
    height: float  # h_c,eff
    ratio: float  # rho_p,eff
    near: bool  # bars as close as 7.3.4(3) wants them
    spacing: float  # s_r,max
    strain: float  # eps_sm - eps_cm
    width: float  # w_k


def crack_width(
    outline: Outline,
    strength: Strengths,
    section: Elastic,
    moment: float,
    area: float,
    depth: float,
    bar: tuple[float, float, float],
    national: National,
) -> Crack:
    """Width of the cracks that a lasting moment opens.

    Parameters
    ----------
    outline : Outline
    section : Elastic
        With the creep of the load.
    moment : float [kNm]
    area, depth : float [m2], [m]
        Of the tension bars.
    bar : (float, float, float) [m]
        Diameter, cover of the bars, distance between their centres.

    Returns
    -------
    Crack

    Source: EN 1992-1-1:2004, 7.3.4, (7.8) to (7.14), and 7.3.2(3).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> rectangle = Outline(0.3, 0.5, 0.3, 0.0)
    >>> section = elastic(rectangle, C30, 1.0e-3, 0.45, 2.0)
    >>> found = crack_width(rectangle, C30, section, 90.0, 1.0e-3, 0.45, (0.02, 0.04, 0.1), national())
    >>> round(found.stress / 1e3), round(found.spacing * 1e3), round(found.width * 1e3, 3)  # MPa, mm, mm
    (231, 245, 0.228)
    """
    diameter, cover, apart = bar
    x = section.x_2
    stress = section.ratio * moment * (depth - x) / section.inertia_2
    height = min(2.5 * (outline.depth - depth), (outline.depth - x) / 3, outline.depth / 2)
    ratio = area / (outline.web * height)
    alpha = strength.es / strength.ecm
    stiffened = stress - LONG_TERM * strength.fctm / ratio * (1 + alpha * ratio)
    strain = max(stiffened, LEAST_STRAIN * stress) / strength.es
    near = within(apart, 5 * (cover + diameter / 2))
    if near:
        spacing = national["crack_k3"] * cover + BOND * PURE_BENDING * national["crack_k4"] * diameter / ratio
    else:
        spacing = 1.3 * (outline.depth - x)
    return Crack(stress, height, ratio, near, spacing, strain, spacing * strain)
