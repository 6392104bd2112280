"""Bond and anchorage of straight and bent bars."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.en1992.model import Strengths

LEAST_ANCHORAGE = 0.100  # [m], 8.4.4(1)


class Anchorage(NamedTuple):
    """Anchorage of a bar; lengths in m."""

    bond: float  # f_bd [kPa]
    basic: float  # l_b,rqd
    alpha: float  # α_1 α_2
    least: float  # l_b,min
    length: float  # l_bd


def good_bond(top: bool, depth: float, below: float) -> bool:
    """Whether a horizontal bar lies in good bond conditions.

    Parameters
    ----------
    top : bool
        At the upper face.
    depth : float [m]
        Of the beam.
    below : float [m]
        Concrete below the bar.

    Source: EN 1992-1-1:2004, 8.4.2(2), Figure 8.2.

    Examples
    --------
    >>> good_bond(False, 0.5, 0.05), good_bond(True, 0.5, 0.45), good_bond(True, 0.25, 0.2)
    (True, False, True)
    """
    if not top or depth <= 0.25:
        return True
    if depth <= 0.6:
        return below <= 0.25
    return depth - below > 0.3


def bond_strength(diameter: float, good: bool, strength: Strengths) -> float:
    """f_bd [kPa]; fctd not above that of C60/75.

    Parameters
    ----------
    diameter : float [m]
    good : bool
        Bond conditions.
    strength : Strengths

    Source: EN 1992-1-1:2004, 8.4.2(2), (8.2).

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> round(bond_strength(0.02, True, C30)), round(bond_strength(0.02, False, C30))
    (3000, 2100)
    """
    size = 1.0 if diameter <= 0.032 else (0.132 - diameter) / 0.1
    tensile = strength.fctd * min(3100.0 / strength.fctk, 1.0)
    return 2.25 * (1.0 if good else 0.7) * size * tensile


def anchorage(
    diameter: float, stress: float, cover: float, good: bool, strength: Strengths, *, bent: bool = False
) -> Anchorage:
    """Length that anchors a bar in tension.

    Parameters
    ----------
    diameter : float [m]
    stress : float [kPa]
        In the bar where the length begins, σ_sd.
    cover : float [m]
        c_d: the least of cover, side cover and half the clear distance.
    good : bool
        Bond conditions.
    bent : bool
        A bend, hook or loop at its end.

    Returns
    -------
    Anchorage

    Source: EN 1992-1-1:2004, 8.4.3 and 8.4.4, Table 8.2; α_3 = α_4 = α_5 = 1 taken.

    Examples
    --------
    >>> from calcpack.clauses.en1992.samples import C30
    >>> found = anchorage(0.02, C30.fyd, 0.02, True, C30)
    >>> round(found.basic, 3), found.alpha, round(found.length, 3)
    (0.725, 1.0, 0.725)
    """
    bond = bond_strength(diameter, good, strength)
    basic = diameter / 4 * stress / bond
    if bent:
        alpha_1 = 0.7 if cover > 3 * diameter else 1.0
        alpha_2 = 1 - 0.15 * (cover - 3 * diameter) / diameter
    else:
        alpha_1, alpha_2 = 1.0, 1 - 0.15 * (cover - diameter) / diameter
    alpha = alpha_1 * min(max(alpha_2, 0.7), 1.0)
    least = max(0.3 * basic, 10 * diameter, LEAST_ANCHORAGE)
    return Anchorage(bond, basic, alpha, least, max(alpha * basic, least))
