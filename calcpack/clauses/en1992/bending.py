"""Bending with the rectangular stress block."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from calcpack.clauses.en1992.model import Outline, Strengths
from calcpack.clauses.en1992.national import National


@dataclass(frozen=True)
class Bending:
    """Resistance of a section.

    Parameters
    ----------
    x : float [m]
        Depth of the neutral axis.
    z : float [m]
        Lever arm of the tension bars.
    moment : float [kNm]
        M_Rd.
    strain, stress : float, float [kPa]
        Of the tension bars.
    strain_2, stress_2 : float, float [kPa]
        Of the compression bars, compression positive; 0 where none are counted.
    """

    x: float
    z: float
    moment: float
    strain: float
    stress: float
    strain_2: float
    stress_2: float


def block_force(outline: Outline, strength: Strengths, x: float) -> tuple[float, float]:
    """Force of the block [kN] and its moment about the face in compression [kNm], neutral axis at x [m].

    Parameters
    ----------
    outline : Outline
    strength : Strengths
    x : float [m]

    Source: EN 1992-1-1:2004, 3.1.7(3).

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> force, moment = block_force(Outline(0.3, 0.5, 0.3, 0.0), C30, 0.1)  # 0.3 x 0.08 x 20 MPa
    >>> round(force, 9), round(moment, 9)
    (480.0, 19.2)
    """
    depth = min(strength.lam * x, outline.depth)
    stress = strength.eta * strength.fcd
    flange = outline.block_flange
    if not flange:
        return stress * outline.block_width * depth, stress * outline.block_width * depth**2 / 2
    out = (outline.width - outline.web) * min(depth, flange)
    force = stress * (outline.web * depth + out)
    moment = stress * (outline.web * depth**2 / 2 + out * min(depth, flange) / 2)
    return force, moment


def bending(
    outline: Outline,
    strength: Strengths,
    area: float,
    depth: float,
    area_2: float = 0.0,
    depth_2: float = 0.0,
) -> Bending:
    """Moment resistance of a section with bars in tension and, perhaps, in compression.

    Parameters
    ----------
    outline : Outline
    strength : Strengths
    area, depth : float [m2], [m]
        Of the tension bars, from the face in compression.
    area_2, depth_2 : float [m2], [m]
        Of the compression bars that are counted.

    Returns
    -------
    Bending

    Source: EN 1992-1-1:2004, 6.1 with 3.1.7(3) and 3.2.7(2)b (horizontal branch).

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> found = bending(Outline(0.3, 0.5, 0.3, 0.0), C30, 1.0e-3, 0.45)
    >>> round(found.x * 1e3, 2), round(found.moment, 2)  # [mm], [kNm]
    (90.58, 179.9)
    """

    def steel(x: float) -> tuple[float, float, float, float]:
        strain = strength.eps_cu * (depth - x) / x
        strain_2 = strength.eps_cu * (x - depth_2) / x if area_2 else 0.0
        stress = max(min(strain * strength.es, strength.fyd), -strength.fyd)
        stress_2 = max(min(strain_2 * strength.es, strength.fyd), -strength.fyd)
        return strain, stress, strain_2, stress_2

    def surplus(x: float) -> float:
        _, stress, _, stress_2 = steel(x)
        return block_force(outline, strength, x)[0] + area_2 * stress_2 - area * stress

    x = _root(surplus, 0.0, outline.depth / strength.lam)
    strain, stress, strain_2, stress_2 = steel(x)
    _, about_face = block_force(outline, strength, x)
    moment = area * stress * depth - about_face - area_2 * stress_2 * depth_2
    return Bending(x, moment / (area * stress), moment, strain, stress, strain_2, stress_2)


def _root(rising: Callable[[float], float], low: float, high: float) -> float:
    """Where a rising function is zero, halved until no number lies between the ends."""
    while low < (middle := (low + high) / 2) < high:
        low, high = (middle, high) if rising(middle) < 0 else (low, middle)
    return middle


def depth_limit(strength: Strengths, national: National) -> float:
    """Largest x/d of a section whose moments come from linear analysis without redistribution.

    Parameters
    ----------
    strength : Strengths
        fck [kPa], ε_cu2 plain.
    national : National

    Returns
    -------
    float
        (δ - k1)/k2 with δ = 1; above fck = 50 MPa (δ - k3)/k4.

    Source: EN 1992-1-1:2004, 5.5(4), (5.10a) and (5.10b).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> round(depth_limit(C30, national()), 3)
    0.448
    """
    first, second = ("delta_k1", "delta_k2") if strength.fck <= 50e3 else ("delta_k3", "delta_k4")
    return (1 - national[first]) / (national[second] * (0.6 + 0.0014 / strength.eps_cu2))


def steel_for(
    moment: float, outline: Outline, strength: Strengths, depth: float, limit: float, depth_2: float
) -> tuple[float, float]:
    """Bars that a moment asks for: in tension and, once x/d is at its limit, in compression.

    Parameters
    ----------
    moment : float [kNm]
    depth, depth_2 : float [m]
    limit : float
        Of x/d.

    Returns
    -------
    area, area_2 : float [m2]

    Source: EN 1992-1-1:2004, 6.1 with 3.1.7(3).

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> area, area_2 = steel_for(179.9, Outline(0.3, 0.5, 0.3, 0.0), C30, 0.45, 0.448, 0.05)
    >>> round(area * 1e6), area_2
    (1000, 0.0)
    """
    if moment <= 0:
        return 0.0, 0.0

    def resisted(x: float) -> float:
        force, about_face = block_force(outline, strength, x)
        return force * depth - about_face

    low, high = 0.0, limit * depth
    most = resisted(high)
    if moment > most:
        force, _ = block_force(outline, strength, high)
        strain_2 = strength.eps_cu * (high - depth_2) / high
        stress_2 = min(max(strain_2 * strength.es, 1e-6), strength.fyd)
        push = (moment - most) / (depth - depth_2)
        return (force + push) / strength.fyd, push / stress_2
    x = _root(lambda x: resisted(x) - moment, low, high)
    return block_force(outline, strength, x)[0] / strength.fyd, 0.0


def least_steel(outline: Outline, strength: Strengths, depth: float, national: National) -> float:
    """Least tension bars [m2].

    Parameters
    ----------
    depth : float [m]

    Source: EN 1992-1-1:2004, 9.2.1.1(1), (9.1N).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> round(least_steel(Outline(0.3, 0.5, 0.3, 0.0), C30, 0.45, national()) * 1e6, 1)  # [mm2]
    203.6
    """
    ratio = max(national["as_min"] * strength.fctm / strength.fyk, national["as_min_least"])
    return ratio * outline.tension_width * depth
