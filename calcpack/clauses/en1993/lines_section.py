"""Clauses on the cross-section, written as lines: bending, shear, both together."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.en1993.lines_profile import RANK, Partial, ProfileLines
from calcpack.clauses.en1993.rules import CODE, HALF, WEB_BUCKLING
from calcpack.clauses.en1993.section import Profile
from calcpack.sheet import Expression, Line, Sheet, greatest, least, sqrt


class Resistance(NamedTuple):
    """A demand, its resistance, and the requirement between them."""

    demand: Line
    resistance: Line
    check: Line


def modulus_line(given: ProfileLines, profile: Profile) -> tuple[Line, str]:
    """The section modulus that the class allows, and its words.

    Parameters
    ----------
    given : ProfileLines [mm3]
    profile : Profile

    Source: EN 1993-1-1:2005, 6.2.5(2) and 6.3.2.1(3).
    """
    if profile.section_class in (1, 2):
        return given.W_pl, f"plastic, {RANK[profile.section_class]}"
    return given.W_el, f"elastic, {RANK[profile.section_class]}"


def _demand(
    sheet: Sheet, symbol: str, value: float, unit: str, says: str, origin: str, stated: Line | None
) -> Line:
    """A force of the analysis, drawn from the line that says it where there is one."""
    if stated is not None:
        return sheet.hence(symbol, stated, unit, says)
    return sheet.take(symbol, abs(value), unit, says, origin, given=False)


def bending(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    profile: Profile,
    demand: float,
    says: str,
    origin: str = "analysis",
    stated: Line | None = None,
) -> Resistance:
    """Bending resistance of the section, and that the moment [kNm], by size, does not pass it.

    Parameters
    ----------
    sheet : Sheet
    given, partial : ProfileLines [mm, MPa], Partial
    profile : Profile
    demand : float [kNm]
    says, origin : str
        What the moment is, and where it comes from.
    stated : Line, optional
        A line of the sheet that says the moment already.

    Source: EN 1993-1-1:2005, 6.2.5, (6.12) to (6.14).

    Examples
    --------
    >>> from calcpack.clauses.en1993.lines_profile import classify, take_factors, take_profile
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> found = bending(sheet, given, partial, IPE_330, 90.48, "largest")
    >>> round(found.resistance.value, 1), found.check.passes
    (189.0, True)
    """
    moment = _demand(sheet, "M_Ed", demand, "kN*m", says, origin, stated)
    modulus, words = modulus_line(given, profile)
    equation = "(6.13)" if profile.section_class in (1, 2) else "(6.14)"
    resistance = sheet.hence(
        "M_c,Rd",
        modulus * given.f_y / partial.gamma_M0,
        "kN*m",
        f"Bending resistance of the section, {words}",
        f"{CODE} 6.2.5(2) {equation}",
    )
    check = sheet.require(moment <= resistance, "Bending resistance of the section", f"{CODE} 6.2.5(1)")
    return Resistance(moment, resistance, check)


class ShearLines(NamedTuple):
    """Shear: area, resistance, and the limit of the web's slenderness."""

    demand: Line
    area: Line
    resistance: Line
    check: Line
    web: Line


def shear(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    epsilon: Line,
    demand: float,
    says: str,
    origin: str = "analysis",
    stated: Line | None = None,
) -> ShearLines:
    """Plastic shear resistance, and that the web needs no look at shear buckling.

    Parameters
    ----------
    sheet : Sheet
    given, partial : ProfileLines [mm, MPa], Partial
    epsilon : Line
    demand : float [kN]
    says, origin : str
        What the shear is, and where it comes from.
    stated : Line, optional
        A line of the sheet that says the shear already.

    Source: EN 1993-1-1:2005, 6.2.6(2), (3) a) and (6).

    Examples
    --------
    >>> from calcpack.clauses.en1993.lines_profile import classify, take_factors, take_profile
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> found = shear(sheet, given, partial, classify(sheet, given, IPE_330).epsilon, 63.5, "largest")
    >>> round(found.area.value), round(found.resistance.value), found.web.passes
    (3081, 418, True)
    """
    force = _demand(sheet, "V_Ed", demand, "kN", says, origin, stated)
    area = sheet.hence(
        "A_v",
        greatest(
            given.A - 2 * given.b * given.t_f + (given.t_w + 2 * given.r) * given.t_f,
            partial.eta * given.h_w * given.t_w,
        ),
        "mm^2",
        "Shear area",
        f"{CODE} 6.2.6(3) a)",
        word="shear area",
    )
    resistance = sheet.hence(
        "V_pl,Rd",
        area * (given.f_y / sqrt(3)) / partial.gamma_M0,
        "kN",
        "Plastic shear resistance",
        f"{CODE} 6.2.6(2) (6.18)",
    )
    check = sheet.require(force <= resistance, "Shear resistance", f"{CODE} 6.2.6(1)")
    web = sheet.require(
        given.h_w / given.t_w <= WEB_BUCKLING * epsilon / partial.eta,
        "Slenderness of the web: no shear buckling to be looked at",
        f"{CODE} 6.2.6(6)",
    )
    return ShearLines(force, area, resistance, check, web)


def bending_beside_shear(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    profile: Profile,
    plastic_shear: Line,
    at: str,
    moment: float,
    force: float,
) -> Resistance:
    """Bending resistance beside a shear that passes half its own resistance.

    Parameters
    ----------
    at : str
        The place, in words.
    moment, force : float [kNm], [kN]
        By size.

    Source: EN 1993-1-1:2005, 6.2.8(3) and (5), (6.30).

    Examples
    --------
    >>> from calcpack.clauses.en1993.lines_profile import classify, take_factors, take_profile
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> found = shear(sheet, given, partial, classify(sheet, given, IPE_330).epsilon, 400.0, "largest")
    >>> both = bending_beside_shear(sheet, given, partial, IPE_330, found.resistance, "2 m", 150.0, 400.0)
    >>> round(both.resistance.value, 1)
    154.3
    """
    beside = sheet.take("V_Ed,1", force, "kN", f"Shear at {at}", "analysis, envelope", given=False)
    bent = sheet.take("M_Ed,1", moment, "kN*m", f"Moment at {at}, by size", "analysis, envelope", given=False)
    rho = sheet.hence(
        "rho",
        (2 * beside / plastic_shear - 1) ** 2,
        "1",
        "Reduction of the strength over the shear area",
        f"{CODE} 6.2.8(3)",
        word="reduction for shear",
    )
    modulus, words = modulus_line(given, profile)
    lost: Expression
    if profile.section_class in (1, 2):
        lost = rho * (given.h_w * given.t_w) ** 2 / (4 * given.t_w)
        cite = f"{CODE} 6.2.8(5) (6.30)"
    else:
        lost = rho * given.t_w * given.h_w**3 / (6 * given.h)
        cite = f"{CODE} 6.2.8(3), the web's part of the elastic modulus"
    resistance = sheet.hence(
        "M_V,Rd",
        least((modulus - lost) * given.f_y / partial.gamma_M0, modulus * given.f_y / partial.gamma_M0),
        "kN*m",
        f"Bending resistance beside this shear, {words}",
        cite,
        word="bending resistance beside shear",
    )
    check = sheet.require(bent <= resistance, "Bending beside shear", f"{CODE} 6.2.8(1)")
    return Resistance(bent, resistance, check)


def shear_share(sheet: Sheet, found: ShearLines) -> Line:
    """V_Ed/V_pl,Rd, which says whether bending is reduced.

    Parameters
    ----------
    sheet : Sheet
    found : ShearLines [kN]

    Source: EN 1993-1-1:2005, 6.2.8(2).

    Examples
    --------
    >>> from calcpack.clauses.en1993.lines_profile import classify, take_factors, take_profile
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> shown = shear(sheet, given, partial, classify(sheet, given, IPE_330).epsilon, 209.0, "largest")
    >>> round(shear_share(sheet, shown).value, 2)
    0.5
    """
    below = found.demand.value <= HALF * found.resistance.value
    return sheet.hence(
        "nu",
        found.demand / found.resistance,
        "1",
        f"Largest shear over its resistance: {'not above' if below else 'above'} {HALF:g}, "
        + ("so that bending is not reduced anywhere" if below else "so that bending is reduced"),
        f"{CODE} 6.2.8(2)",
        word="shear over its resistance",
    )
