"""Live load reduced for the area a member carries: ASCE/SEI 7-22 4.7 and EN 1991-1-1 6.3.1.2(10).

Both from memory. The area of a beam is that of the panel shares that drain to it, and of the beams that come
down on it in proportion to their reaction; live load that may not be reduced keeps its full value, and its
area does not count.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from calcpack.actions.combinations import combination_set
from calcpack.job.uses import DEFAULT_CATEGORY

Rule = Literal["ASCE 7-22 4.7", "EN 1991-1-1 6.3.1.2"]
ASCE: Rule = "ASCE 7-22 4.7"
EN: Rule = "EN 1991-1-1 6.3.1.2"

FOOT = 0.3048  # [m]
ASCE_CONSTANT = 0.25
ASCE_LENGTH = 15 * FOOT  # 15/√(K_LL A_T) in ft²; the standard's metric form rounds it to 4.57 m
LEAST_INFLUENCE = 400 * FOOT**2  # K_LL A_T [m2]
ASCE_LEAST = {"one floor": 0.5, "more floors": 0.4}
HEAVY = 100 * 4.4482216152605 / FOOT**2 / 1000  # 100 psf [kPa]
ELEMENT_FACTORS = {
    "beam": 2.0,
    "other": 1.0,
}  # Table 4.7-1: interior and edge beams; cantilevers and the rest
ONE_WAY_WIDTH = 1.5  # width of a one-way slab's tributary area, in spans (4.7.6)

EN_PSI = 5 / 7
EN_AREA = 10.0  # A0 [m2]
EN_LEAST = 0.6  # categories C and D
EN_CATEGORIES = ("A", "B", "C", "D")
EN_LEAST_CATEGORIES = ("C", "D")


@dataclass(frozen=True)
class Reduction:
    """How far a member's live load is reduced.

    Parameters
    ----------
    rule : str
    area : float [m2]
        Tributary area of what may be reduced.
    element_factor : float
        K_LL; 1 for EN 1991-1-1, which knows none.
    psi0 : float
        Of the category; 0 for ASCE 7.
    category : str
    factor : float
        On the live load that may be reduced, at most 1.
    """

    rule: Rule
    area: float
    element_factor: float
    psi0: float
    category: str
    factor: float

    @property
    def influence(self) -> float:
        """K_LL A_T [m2]."""
        return self.element_factor * self.area


def reduction(
    rule: Rule, area: float, *, category: str = "", cantilever: bool = False, own_psi0: float | None = None
) -> Reduction:
    """How far the live load of a beam is reduced for the area it carries.

    Parameters
    ----------
    rule : "ASCE 7-22 4.7" or "EN 1991-1-1 6.3.1.2"
    area : float [m2]
        Tributary area whose live load may be reduced.
    category : str
        EN 1990 category of use; "" takes B.
    cantilever : bool
        A cantilever, or an edge beam with a cantilever slab.
    own_psi0 : float or None
        ψ0 that the job states itself, in place of the category's.

    Returns
    -------
    Reduction

    Examples
    --------
    >>> found = reduction("ASCE 7-22 4.7", 60.0)
    >>> found.element_factor, round(found.factor, 4)
    (2.0, 0.6674)
    >>> round(reduction("EN 1991-1-1 6.3.1.2", 40.0, category="B").factor, 4)
    0.75
    """
    if rule == ASCE:
        element = ELEMENT_FACTORS["other" if cantilever else "beam"]
        return Reduction(rule, area, element, 0.0, category, asce_factor(area, element))
    category = category or DEFAULT_CATEGORY
    psi0 = 0.0
    if category in EN_CATEGORIES:
        psi0 = own_psi0 if own_psi0 is not None else _psi0(category)
    return Reduction(rule, area, 1.0, psi0, category, en_factor(area, psi0, category))


def _psi0(category: str) -> float:
    """ψ0 of a category, EN 1990, Table A1.1."""
    return float(combination_set("EN 1990", ("live",), occupancy=category).psi["live"]["psi0"])


def asce_factor(area: float, element_factor: float, floors: int = 1) -> float:
    """L over L0 of a member.

    Parameters
    ----------
    area : float [m2]
        Tributary area A_T.
    element_factor : float
        K_LL of Table 4.7-1.
    floors : int
        That the member supports.

    Returns
    -------
    float

    Source: ASCE/SEI 7-22, 4.7.2, equation 4.7-1 (from memory).

    Examples
    --------
    >>> asce_factor(200 * FOOT**2, 2.0), round(asce_factor(450 * FOOT**2, 2.0), 12), asce_factor(900.0, 2.0)
    (1.0, 0.75, 0.5)
    """
    influence = element_factor * area
    if influence < LEAST_INFLUENCE * (1 + 1e-12):
        return 1.0
    least = ASCE_LEAST["one floor" if floors == 1 else "more floors"]
    return max(ASCE_CONSTANT + ASCE_LENGTH / math.sqrt(influence), least)


def one_way_slab_area(span: float, area: float) -> float:
    """Tributary area of a one-way slab as a member of its own [m2]: at most 1.5 spans wide.

    Beams under a one-way slab have the area that drains to them.

    Source: ASCE/SEI 7-22, 4.7.6 (from memory).

    Examples
    --------
    >>> one_way_slab_area(4.0, 40.0), one_way_slab_area(4.0, 20.0)
    (24.0, 20.0)
    """
    return min(area, ONE_WAY_WIDTH * span * span)


def en_factor(area: float, psi0: float, category: str) -> float:
    """α_A of a floor or beam.

    Parameters
    ----------
    area : float [m2]
        Loaded area A.
    psi0 : float
        Combination factor of EN 1990, Table A1.1.
    category : str
        1 outside of categories A to D.

    Returns
    -------
    float

    Source: EN 1991-1-1:2002, 6.3.1.2(10), equation 6.1 (from memory).

    Examples
    --------
    >>> en_factor(20.0, 0.7, "A"), round(en_factor(200.0, 0.7, "A"), 4), en_factor(200.0, 0.7, "C")
    (1.0, 0.55, 0.6)
    """
    if category not in EN_CATEGORIES or area <= 0:
        return 1.0
    least = EN_LEAST if category in EN_LEAST_CATEGORIES else 0.0
    return min(max(EN_PSI * psi0 + EN_AREA / area, least), 1.0)


def exemption(rule: Rule, pressure: float, category: str = "") -> str:
    """Why a live load on an area is not reduced; "" where it may be.

    Parameters
    ----------
    rule : str
    pressure : float [kPa]
    category : str
        EN 1990 category of use. For ASCE 7 it tells assembly (C) and garages (F, G) where it is given.

    Examples
    --------
    >>> exemption(ASCE, 5.0), exemption(ASCE, 3.0, "C"), exemption(ASCE, 3.0), exemption(EN, 9.0, "E")
    ('heavier than 100 psf (4.7.3)', 'assembly (4.7.5)', '', 'category E is none of A to D')
    """
    if rule == EN:
        category = category or DEFAULT_CATEGORY
        return "" if category in EN_CATEGORIES else f"category {category} is none of A to D"
    if category == "C":
        return "assembly (4.7.5)"
    if category in ("F", "G"):
        return "garage (4.7.4)"
    return "heavier than 100 psf (4.7.3)" if pressure > HEAVY * (1 + 1e-9) else ""
