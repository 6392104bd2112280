"""Clauses on the cross-section, written as lines: strength, class, bending, shear, both together."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.en1993.rules import (
    CODE,
    HALF,
    LIMITS,
    OUTSTAND,
    REFERENCE_STRENGTH,
    THICK,
    WEB,
    WEB_BUCKLING,
    ClassLimits,
)
from calcpack.clauses.en1993.section import Profile
from calcpack.sheet import Expression, Line, Sheet, greatest, least, number, quantity, sqrt

RANK = {1: "class 1", 2: "class 2", 3: "class 3", 4: "class 4"}


class ProfileLines(NamedTuple):
    """The section and the steel, brought in."""

    h: Line
    b: Line
    t_w: Line
    t_f: Line
    r: Line
    A: Line
    W_el: Line
    W_pl: Line
    I_z: Line
    I_t: Line
    I_w: Line
    f_y: Line
    E: Line
    G: Line
    h_w: Line


def take_profile(
    sheet: Sheet, profile: Profile, section: str = "section", material: str = "material", source: str = ""
) -> ProfileLines:
    """The section's dimensions and constants, and the steel's values for its thickness.

    Parameters
    ----------
    sheet : Sheet
    profile : Profile
    section, material : str
        Their places in the job file.
    source : str
        Where the dimensions come from.

    Returns
    -------
    ProfileLines [mm, MPa]

    Source: EN 1993-1-1:2005, Table 3.1 and 3.2.6; constants by integration, as ``clauses.steel`` has them.

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> lines = take_profile(sheet, IPE_330)
    >>> lines.h.shown.replace(chr(160), " "), lines.f_y.value
    ('330 mm', 235.0)
    """
    s = profile.shape

    def size(symbol: str, value: float, says: str, word: str = "") -> Line:
        return sheet.take(symbol, value * 1e3, "mm", says, section, source, word=word or says.lower())

    def constant(symbol: str, value: float, power: int, says: str) -> Line:
        return sheet.take(
            symbol, value * 1e3**power, f"mm^{power}", says, section, "from the dimensions", given=False
        )

    def steel(symbol: str, value: float, says: str, cite: str) -> Line:
        return sheet.take(symbol, value / 1e3, "MPa", says, material, cite)

    band = "up to" if profile.thickness <= THICK else "over"
    with sheet.columns([1, 1]) as column:
        h = size("h", s.depth, f"Depth of {profile.name}", "depth")
        b = size("b", s.width, "Width of the flanges")
        t_w = size("t_w", s.web, "Thickness of the web")
        t_f = size("t_f", s.flange, "Thickness of the flanges")
        r = size("r", s.root_radius, "Radius of the fillets")
        f_y = steel(
            "f_y", profile.strength, f"Yield strength, parts {band} {THICK * 1000:g} mm", f"{CODE} Table 3.1"
        )
        E = steel("E", profile.modulus, "Modulus of elasticity", f"{CODE} 3.2.6")
        column()
        A = constant("A", s.area, 2, "Area")
        W_el = constant("W_el,y", s.elastic_modulus, 3, "Elastic section modulus")
        W_pl = constant("W_pl,y", s.plastic_modulus, 3, "Plastic section modulus")
        I_z = constant("I_z", s.weak_inertia, 4, "Second moment of area, weak axis")
        I_t = constant("I_t", s.torsion, 4, "Torsion constant")
        I_w = constant("I_w", s.warping, 6, "Warping constant")
        G = steel("G", profile.shear_modulus, "Shear modulus", f"{CODE} 3.2.6")
    h_w = sheet.hence("h_w", h - 2 * t_f, "mm", "Web clear between the flanges", word="web depth")
    return ProfileLines(h, b, t_w, t_f, r, A, W_el, W_pl, I_z, I_t, I_w, f_y, E, G, h_w)


def limits_of(sheet: Sheet, given: ProfileLines) -> list[tuple[str, Line]]:
    """What the clauses hold for: thickness and strength; from ``rules.LIMITS``.

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> [line.passes for _, line in limits_of(sheet, take_profile(sheet, IPE_330))]
    [True, True]
    """
    thick, strength = LIMITS["thickness"], LIMITS["yield"]
    return [
        (
            thick.says,
            sheet.require(
                greatest(given.t_f, given.t_w) <= quantity(f"{thick.largest:g}", "mm"),
                "Thickest part, within Table 3.1",
                thick.cite,
            ),
        ),
        (
            strength.says,
            sheet.require(
                given.f_y <= quantity(f"{strength.largest:g}", "MPa"),
                "Steel up to S460, which EN 1993-1-1 covers",
                strength.cite,
            ),
        ),
    ]


class ClassLines(NamedTuple):
    """ε, the parts' c/(t ε), and what they must not exceed."""

    epsilon: Line
    flange: Line
    web: Line
    flange_check: Line
    web_check: Line


def classify(sheet: Sheet, given: ProfileLines, profile: Profile) -> ClassLines:
    """Class of flange and web, bending about the strong axis; class 4 fails its requirement.

    Source: EN 1993-1-1:2005, 5.5.2 and Table 5.2.

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> found = classify(sheet, take_profile(sheet, IPE_330), IPE_330)
    >>> round(found.flange.value, 2), round(found.web.value, 1), found.web_check.passes
    (5.07, 36.1, True)
    """
    epsilon = sheet.hence(
        "epsilon",
        sqrt(quantity(f"{REFERENCE_STRENGTH / 1e3:g}", "MPa") / given.f_y),
        "1",
        "Factor for the yield strength",
        f"{CODE} Table 5.2",
    )
    flange = sheet.hence(
        "lambda_f",
        ((given.b - given.t_w) / 2 - given.r) / (given.t_f * epsilon),
        "1",
        "Flange: outstand c over thickness and ε",
        OUTSTAND.cite,
        word="flange slenderness, c over t ε",
    )
    web = sheet.hence(
        "lambda_w",
        (given.h_w - 2 * given.r) / (given.t_w * epsilon),
        "1",
        "Web: depth c between the fillets over thickness and ε",
        WEB.cite,
        word="web slenderness, c over t ε",
    )
    rows = [
        _class_row("flange, outstand in compression", flange, OUTSTAND, profile.flange_class),
        _class_row("web, bending", web, WEB, profile.web_class),
    ]
    sheet.table(
        [
            ("part", "left"),
            ("c/(t ε)", "right"),
            ("class 1 up to", "right"),
            ("class 2", "right"),
            ("class 3", "right"),
            ("class", "left"),
        ],
        rows,
        caption=f"The section is {RANK[profile.section_class]}: "
        + {
            1: "plastic resistance.",
            2: "plastic resistance.",
            3: "elastic resistance.",
            4: "it buckles locally before it yields; EN 1993-1-5, 4, is not covered, and what follows with "
            "the full elastic section is no verification.",
        }[profile.section_class],
    )
    checks = [
        sheet.require(line <= number(f"{limits.third:g}"), f"{part}: class 3 or better", limits.cite)
        for part, line, limits in (("Flange", flange, OUTSTAND), ("Web", web, WEB))
    ]
    return ClassLines(epsilon, flange, web, *checks)


def _class_row(part: str, line: Line, limits: ClassLimits, rank: int) -> list[str]:
    bounds = (f"{bound:g}" for bound in (limits.first, limits.second, limits.third))
    return [part, line.shown, *bounds, RANK[rank]]


class Partial(NamedTuple):
    """Partial factors and the factor of the shear area."""

    gamma_M0: Line
    gamma_M1: Line
    eta: Line


def take_factors(sheet: Sheet, profile: Profile, origin: str = "design") -> Partial:
    """γM0, γM1 and η, as the job sets them, beside the recommended values.

    Source: EN 1993-1-1:2005, 6.1(1) and 6.2.6(3).

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> take_factors(sheet, IPE_330).gamma_M1.value
    1.0
    """
    factors = profile.factors

    def take(symbol: str, value: float, says: str, cite: str, word: str = "") -> Line:
        return sheet.take(symbol, value, "1", says, f"{origin}.{symbol}", cite, word=word)

    cite = f"{CODE} 6.1(1), recommended 1.0"
    with sheet.columns([1, 1]) as column:
        gamma_M0 = take("gamma_M0", factors.gamma_M0, "Partial factor, cross-section", cite)
        column()
        gamma_M1 = take("gamma_M1", factors.gamma_M1, "Partial factor, instability", cite)
    eta = take(
        "eta",
        factors.eta,
        "Hardening in the shear area",
        f"{CODE} 6.2.6(3), 1.0 on the safe side",
        "factor of the shear area",
    )
    return Partial(gamma_M0, gamma_M1, eta)


class Resistance(NamedTuple):
    """A demand, its resistance, and the requirement between them."""

    demand: Line
    resistance: Line
    check: Line


def modulus_line(given: ProfileLines, profile: Profile) -> tuple[Line, str]:
    """The section modulus that the class allows, and its words."""
    if profile.section_class <= 2:
        return given.W_pl, f"plastic, {RANK[profile.section_class]}"
    return given.W_el, f"elastic, {RANK[profile.section_class]}"


def bending(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    profile: Profile,
    demand: float,
    says: str,
    origin: str = "analysis",
) -> Resistance:
    """Bending resistance of the section, and that the moment [kNm], by size, does not pass it.

    Source: EN 1993-1-1:2005, 6.2.5, (6.12) to (6.14).

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> found = bending(sheet, given, partial, IPE_330, 90.48, "largest")
    >>> round(found.resistance.value, 1), found.check.passes
    (189.0, True)
    """
    moment = sheet.take("M_Ed", abs(demand), "kN*m", says, origin, given=False)
    modulus, words = modulus_line(given, profile)
    equation = "(6.13)" if profile.section_class <= 2 else "(6.14)"
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
) -> ShearLines:
    """Plastic shear resistance, and that the web needs no look at shear buckling.

    Source: EN 1993-1-1:2005, 6.2.6(2), (3) a) and (6).

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> found = shear(sheet, given, partial, classify(sheet, given, IPE_330).epsilon, 63.5, "largest")
    >>> round(found.area.value), round(found.resistance.value), found.web.passes
    (3081, 418, True)
    """
    force = sheet.take("V_Ed", abs(demand), "kN", says, origin, given=False)
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
    if profile.section_class <= 2:
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

    Examples
    --------
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
