"""Web under a local force in numbers: EN 1993-1-5, clause 6, webs without stiffeners."""

from __future__ import annotations

import math
from typing import NamedTuple

from calcpack.clauses.en1993.section import Profile


class Bearing(NamedTuple):
    """The way to F_Rd, lengths in m."""

    coefficient: float  # k_F
    first: float  # m1
    second: float  # m2
    effective: float  # ℓ_e; zero inside the beam
    loaded: float  # ℓ_y
    critical: float  # F_cr [kN]
    slenderness: float  # λ_F
    reduction: float  # χ_F
    resistance: float  # F_Rd [kN]


def bearing(profile: Profile, stiff: float, beyond: float | None) -> Bearing:
    """Resistance of an unstiffened web to a force on a flange.

    Parameters
    ----------
    profile : Profile
    stiff : float [m]
        s_s, stiff bearing length along the beam.
    beyond : float or None [m]
        c, from the stiff bearing to the beam's end; None for a force inside the beam, whose far side the
        web's shear holds (type a).

    Notes
    -----
    m2 counts from λ_F = 0.5 on. It is first left out, and brought in where λ_F then passes 0.5: so that the
    one never contradicts the other.

    Source: EN 1993-1-5:2006, 6.2, 6.4, 6.5, Figure 6.1 types (a), without transverse stiffeners, and (c).

    Examples
    --------
    >>> from calcpack.job.library import rolled_sections
    >>> from calcpack.clauses.steel import i_section
    >>> ipe = Profile("IPE 330", i_section(rolled_sections()["ipe330"]), 235e3, 210e6, 81e6)
    >>> inside, end = bearing(ipe, 0.1, None), bearing(ipe, 0.1, 0.0)
    >>> round(inside.loaded * 1000), round(end.loaded * 1000), end.coefficient < inside.coefficient
    (260, 169, True)
    """
    s, web, fy = profile.shape, profile.web_depth, profile.strength
    first = s.width / s.web
    coefficient = 6.0 if beyond is None else min(6.0, 2 + 6 * (stiff + beyond) / web)
    critical = 0.9 * coefficient * profile.modulus * s.web**3 / web
    reach = 0.0
    if beyond is not None:
        reach = min(coefficient * profile.modulus * s.web**2 / (2 * fy * web), stiff + beyond)

    def lengths(second: float) -> tuple[float, float]:
        root = math.sqrt(first + second)
        loaded = stiff + 2 * s.flange * (1 + root)
        if beyond is not None:
            bent = math.sqrt(first / 2 + (reach / s.flange) ** 2 + second)
            loaded = min(loaded, reach + s.flange * bent, reach + s.flange * root)
        return loaded, math.sqrt(loaded * s.web * fy / critical)

    second = 0.0
    loaded, slenderness = lengths(second)
    if slenderness > 0.5:
        second = 0.02 * (web / s.flange) ** 2
        loaded, slenderness = lengths(second)
    share = min(1.0, 0.5 / slenderness)
    resistance = share * loaded * s.web * fy / profile.factors.gamma_M1
    return Bearing(coefficient, first, second, reach, loaded, critical, slenderness, share, resistance)
