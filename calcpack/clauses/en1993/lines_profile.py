"""The section, its steel and its class, brought in and written as lines."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.en1993.rules import (
    CODE,
    LIMITS,
    OUTSTAND,
    REFERENCE_STRENGTH,
    THICK,
    WEB,
    ClassLimits,
)
from calcpack.clauses.en1993.section import Profile
from calcpack.sheet import Line, Sheet, greatest, number, quantity, sqrt
from calcpack.sheet.evaluation import holds

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
    sheet: Sheet,
    profile: Profile,
    section: str = "section",
    material: str = "material",
    area: Line | None = None,
) -> ProfileLines:
    """The section's dimensions and constants, and the steel's values for its thickness.

    Parameters
    ----------
    sheet : Sheet
    profile : Profile
    section, material : str
        Their places in the job file.
    area : Line, optional
        The area, where the sheet holds it already.

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
        return sheet.take(symbol, value * 1e3, "mm", says, section, word=word or says.lower())

    def constant(symbol: str, value: float, power: int, says: str) -> Line:
        return sheet.take(symbol, value * 1e3**power, f"mm^{power}", says, section, given=False)

    def steel(symbol: str, value: float, says: str, cite: str) -> Line:
        return sheet.take(symbol, value / 1e3, "MPa", says, material, cite)

    band = "up to" if holds("le", profile.thickness, THICK) else "over"
    h = size("h", s.depth, f"Depth of {profile.name}", "depth")
    b = size("b", s.width, "Width of the flanges")
    t_w = size("t_w", s.web, "Thickness of the web")
    t_f = size("t_f", s.flange, "Thickness of the flanges")
    r = size("r", s.root_radius, "Radius of the fillets")
    A = constant("A", s.area, 2, "Area") if area is None else area
    W_el = constant("W_el,y", s.elastic_modulus, 3, "Elastic section modulus")
    W_pl = constant("W_pl,y", s.plastic_modulus, 3, "Plastic section modulus")
    I_z = constant("I_z", s.weak_inertia, 4, "Second moment of area, weak axis")
    I_t = constant("I_t", s.torsion, 4, "Torsion constant")
    I_w = constant("I_w", s.warping, 6, "Warping constant")
    f_y = steel(
        "f_y", profile.strength, f"Yield strength, parts {band} {THICK * 1000:g} mm", f"{CODE} Table 3.1"
    )
    E = steel("E", profile.modulus, "Modulus of elasticity", "")
    G = steel("G", profile.shear_modulus, "Shear modulus", "")
    h_w = sheet.hence("h_w", h - 2 * t_f, "mm", "Web clear between the flanges", word="web depth")
    return ProfileLines(h, b, t_w, t_f, r, A, W_el, W_pl, I_z, I_t, I_w, f_y, E, G, h_w)


def limits_of(sheet: Sheet, given: ProfileLines) -> list[tuple[str, Line]]:
    """What the clauses hold for: thickness and strength; from ``rules.LIMITS``.

    Parameters
    ----------
    sheet : Sheet
    given : ProfileLines [mm, MPa]

    Source: EN 1993-1-1:2005, Table 3.1.

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
    check: Line


def classify(sheet: Sheet, given: ProfileLines, profile: Profile) -> ClassLines:
    """Class of flange and web, bending about the strong axis; class 4 fails its requirement.

    Parameters
    ----------
    sheet : Sheet
    given : ProfileLines [mm, MPa]
    profile : Profile

    Source: EN 1993-1-1:2005, 5.5.2 and Table 5.2.

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> sheet = Sheet("B1")
    >>> sheet.section("Section")
    >>> found = classify(sheet, take_profile(sheet, IPE_330), IPE_330)
    >>> round(found.flange.value, 2), round(found.web.value, 1), found.check.passes
    (5.07, 36.1, True)
    """
    epsilon = sheet.hence(
        "epsilon_y",
        sqrt(quantity(f"{REFERENCE_STRENGTH / 1e3:g}", "MPa") / given.f_y),
        "1",
        "Factor for the yield strength",
        f"{CODE} Table 5.2",
        word="yield strength factor, root of 235 MPa over the yield strength",
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
    check = sheet.require(
        greatest(flange / f"{OUTSTAND.third:g}", web / f"{WEB.third:g}") <= number(1),
        "Flange and web: class 3 or better",
        LIMITS["class"].cite,
    )
    return ClassLines(epsilon, flange, web, check)


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

    Parameters
    ----------
    sheet : Sheet
    profile : Profile
        Its factors are plain numbers.
    origin : str
        The beam's design keys in the job file.

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

    cite = f"{CODE} 6.1(1)"
    gamma_M0 = take("gamma_M0", factors.gamma_M0, "Partial factor, cross-section (1.0 recommended)", cite)
    gamma_M1 = take("gamma_M1", factors.gamma_M1, "Partial factor, instability (1.0 recommended)", cite)
    eta = take(
        "eta",
        factors.eta,
        "Hardening in the shear area (1.0 on the safe side)",
        f"{CODE} 6.2.6(3)",
        "factor of the shear area",
    )
    return Partial(gamma_M0, gamma_M1, eta)
