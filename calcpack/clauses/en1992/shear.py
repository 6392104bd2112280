"""Shear: what the concrete carries, the truss of variable angle, stirrups."""

from __future__ import annotations

import math

from calcpack.clauses.en1992.model import Strengths
from calcpack.clauses.en1992.national import National

ARM = 0.9  # z over d, 6.2.3(1)


def concrete_shear(web: float, depth: float, area: float, strength: Strengths, national: National) -> float:
    """Shear that a section carries without stirrups, V_Rd,c [kN].

    Parameters
    ----------
    web, depth : float [m]
    area : float [m2]
        Anchored tension bars, A_sl.

    Source: EN 1992-1-1:2004, 6.2.2(1), (6.2.a), (6.2.b), (6.3N), no axial force.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> round(concrete_shear(0.3, 0.45, 1.0e-3, C30, national()), 1)
    75.9
    """
    k = min(1 + math.sqrt(0.2 / depth), 2.0)
    ratio = min(area / (web * depth), 0.02)
    fck = strength.fck / 1e3  # the formula holds in MPa
    stress = national["c_Rd"] / national["gamma_C"] * k * (100 * ratio * fck) ** (1 / 3)
    least = national["v_min"] * k**1.5 * math.sqrt(fck)
    return float(max(stress, least) * 1e3 * web * depth)


def strut_factor(strength: Strengths, national: National) -> float:
    """ν_1 = ν, the strength factor of concrete cracked in shear.

    Parameters
    ----------
    strength : Strengths
        fck [kPa].
    national : National

    Source: EN 1992-1-1:2004, 6.2.2(6), (6.6N), and 6.2.3(3), note 1.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> strut_factor(C30, national())
    0.528
    """
    return national["nu"] * (1 - strength.fck / 250e3)


def truss(
    web: float, arm: float, stirrups: float, cot: float, strength: Strengths, national: National
) -> tuple[float, float]:
    """Shear that upright stirrups and the struts carry, V_Rd,s and V_Rd,max [kN].

    Parameters
    ----------
    web, arm : float [m]
    stirrups : float [m2/m]
        A_sw/s.
    cot : float
        Of the strut angle.

    Source: EN 1992-1-1:2004, 6.2.3(3), (6.8) and (6.9).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> [round(each, 1) for each in truss(0.3, 0.405, 0.67e-3, 2.5, C30, national())]
    [294.9, 442.4]
    """
    ties = stirrups * arm * strength.fyd * cot
    struts = national["alpha_cw"] * web * arm * strut_factor(strength, national) * strength.fcd
    return ties, struts / (cot + 1 / cot)


def best_cot(web: float, stirrups: float, strength: Strengths, national: National) -> float:
    """cot θ that lets given stirrups carry most: ties and struts give out together.

    Parameters
    ----------
    web : float [m]
    stirrups : float [m2/m]

    Returns
    -------
    float
        Within the limits of the standard.

    Source: EN 1992-1-1:2004, 6.2.3(2) and (3): V_Rd,s = V_Rd,max solved for cot θ.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> best_cot(0.3, 0.5e-3, C30, national()), round(best_cot(0.3, 2.0e-3, C30, national()), 3)
    (2.5, 1.626)
    """
    struts = national["alpha_cw"] * web * strut_factor(strength, national) * strength.fcd
    least, most = national["cot_theta_min"], national["cot_theta_max"]
    square = struts / (stirrups * strength.fyd) - 1
    return math.sqrt(min(max(square, least**2), most**2))


def least_stirrups(web: float, strength: Strengths, national: National) -> float:
    """Least A_sw/s [m2/m].

    Parameters
    ----------
    web : float [m]
    strength : Strengths
        fck, fyk [kPa].
    national : National

    Source: EN 1992-1-1:2004, 9.2.2(5), (9.4) and (9.5N).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> from calcpack.clauses.en1992.samples import C30
    >>> round(least_stirrups(0.3, C30, national()) * 1e6, 1)  # [mm2/m]
    262.9
    """
    return national["rho_w_min"] * math.sqrt(strength.fck / 1e3) / (strength.fyk / 1e3) * web


def largest_spacing(depth: float, national: National) -> float:
    """Largest spacing of stirrups along the beam [m].

    Parameters
    ----------
    depth : float [m]
        d.
    national : National

    Source: EN 1992-1-1:2004, 9.2.2(6), (9.6N), upright stirrups.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> largest_spacing(0.4, national())
    0.30000000000000004
    """
    return national["s_l_max"] * depth


def largest_leg_spacing(depth: float, national: National) -> float:
    """Largest spacing of the legs across the web [m].

    Parameters
    ----------
    depth : float [m]
        d.
    national : National

    Source: EN 1992-1-1:2004, 9.2.2(8), (9.8N).

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> largest_leg_spacing(1.0, national())
    0.6
    """
    return min(national["s_t_max"] * depth, national["s_t_most"])
