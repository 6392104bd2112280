"""Steel, shape and slenderness to AISC 360-22 on a sheet: the lines that all the others draw on."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.aisc360.strength import Factor, Method, Slenderness, Steel
from calcpack.clauses.steel import ISection
from calcpack.sheet import Expression, Line, Sheet, sqrt

AISC = "AISC 360-22"


class SteelLines(NamedTuple):
    """Yield strength and modulus."""

    fy: Line
    modulus: Line


class ShapeLines(NamedTuple):
    """Dimensions of a shape and the constants that the clauses ask for."""

    depth: Line
    width: Line
    web: Line
    flange: Line
    fillet: Line
    inertia: Line
    plastic: Line
    elastic: Line
    weak_radius: Line
    torsion: Line
    shear_radius: Line
    apart: Line


def state_steel(sheet: Sheet, steel: Steel, name: str, origin: str) -> SteelLines:
    """F_y and E, taken from the material.

    Parameters
    ----------
    sheet : Sheet
    steel : Steel
        [kPa].
    name, origin : str
        What it is called; its place in the job.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Steel")
    >>> state_steel(sheet, Steel(344738.0, 199947960.0), "A992", "material w50").fy.shown
    '344.7\xa0MPa'
    """
    return SteelLines(
        sheet.take("F_y", steel.yield_strength / 1000, "MPa", f"Yield strength, {name}", origin, given=False),
        sheet.take("E", steel.modulus / 1000, "MPa", "Modulus of elasticity", origin, given=False),
    )


def state_shape(sheet: Sheet, shape: ISection, name: str, origin: str, source: str) -> ShapeLines:
    """The dimensions of a rolled shape, and the constants that follow from them.

    Parameters
    ----------
    sheet : Sheet
    shape : ISection
    name, origin, source : str
        Its designation; its place in the job; where the dimensions come from.

    Source: statics; C_w and r_ts as in the user note of F2.2.
    """

    def size(symbol: str, value: float, says: str, word: str) -> Line:
        return sheet.take(symbol, value * 1000, "mm", says, origin, word=word)

    def constant(symbol: str, value: float, unit: str, says: str) -> Line:
        return sheet.take(symbol, value, unit, says, "integration, fillets included", given=False)

    depth = sheet.take(
        "d", shape.depth * 1000, "mm", f"Depth of {name}", f"{origin}; {source}", word="depth", given=False
    )
    width = size("b_f", shape.width, "Flange width", "flange width")
    web = size("t_w", shape.web, "Web thickness", "web thickness")
    flange = size("t_f", shape.flange, "Flange thickness", "flange thickness")
    fillet = sheet.hence(
        "k",
        flange + size("r", shape.root_radius, "Radius of the fillets", "radius of the fillets"),
        "mm",
        "From the face to the toe of the fillet",
        word="from the flange's face to the toe of the fillet",
    )
    area = sheet.take(
        "A_g", shape.area * 1e6, "mm^2", "Area", "integration, fillets included", given=False, word="area"
    )
    inertia = constant("I_x", shape.inertia * 1e12, "mm^4", "About the strong axis")
    weak = constant("I_y", shape.weak_inertia * 1e12, "mm^4", "About the weak axis")
    plastic = constant("Z_x", shape.plastic_modulus * 1e9, "mm^3", "Plastic section modulus")
    torsion = sheet.take(
        "J",
        shape.torsion * 1e12,
        "mm^4",
        "Torsion constant",
        "flanges, web and their joints, El Darwish and Johnston",
        given=False,
    )
    elastic = sheet.hence("S_x", inertia / (depth / 2), "mm^3", "Elastic section modulus", "statics")
    weak_radius = sheet.hence("r_y", sqrt(weak / area), "mm", "Radius of gyration, weak axis", "statics")
    apart = sheet.hence(
        "h_o",
        depth - flange,
        "mm",
        "Between the flanges' centroids",
        f"{AISC} F2.2",
        word="between the flanges' centroids",
    )
    warping = sheet.hence("C_w", flange * width**3 * apart**2 / 24, "mm^6", "Warping constant", "statics")
    shear_radius = sheet.hence(
        "r_ts", sqrt(sqrt(weak * warping) / elastic), "mm", "Effective radius of gyration", f"{AISC} (F2-7)"
    )
    return ShapeLines(
        depth,
        width,
        web,
        flange,
        fillet,
        inertia,
        plastic,
        elastic,
        weak_radius,
        torsion,
        shear_radius,
        apart,
    )


class SlendernessLines(NamedTuple):
    """Ratios of flange and web, the flange's limits, and what is required of the web."""

    flange: Line
    flange_compact: Line
    flange_noncompact: Line | None
    web: Line
    web_compact: Line


def state_slenderness(
    sheet: Sheet, ratios: Slenderness, steel: SteelLines, shape: ShapeLines
) -> SlendernessLines:
    """Flange and web against their limits; the web has to be compact.

    Source: AISC 360-22 Table B4.1b, cases 10 and 15.
    """
    case = f"{AISC} Table B4.1b, case 10"
    flange = sheet.hence(
        "lambda_f",
        shape.width / (2 * shape.flange),
        "1",
        "Slenderness of the flange",
        case,
        word="slenderness of the flange",
    )
    compact = sheet.hence(
        "lambda_pf",
        0.38 * sqrt(steel.modulus / steel.fy),
        "1",
        f"Compact up to this: the flange is {class_of(ratios)}",
        case,
        word="limit for a compact flange",
    )
    noncompact = None
    if not ratios.compact_flange:
        noncompact = sheet.hence(
            "lambda_rf",
            1.0 * sqrt(steel.modulus / steel.fy),
            "1",
            "Noncompact up to this",
            case,
            word="limit for a noncompact flange",
        )
    web = sheet.hence(
        "lambda_w",
        (shape.depth - 2 * shape.fillet) / shape.web,
        "1",
        "Slenderness of the web, between fillets",
        f"{AISC} B4.1b",
        word="slenderness of the web",
    )
    return SlendernessLines(
        flange,
        compact,
        noncompact,
        web,
        sheet.require(
            web <= 3.76 * sqrt(steel.modulus / steel.fy),
            "Web compact, as F2 and F3 ask",
            f"{AISC} Table B4.1b, case 15",
        ),
    )


def class_of(ratios: Slenderness) -> str:
    """The flange in a word: compact, noncompact or slender."""
    if ratios.compact_flange:
        return "compact"
    return "slender" if ratios.slender_flange else "noncompact"


def state_factor(sheet: Sheet, factor: Factor, method: Method, index: str, says: str) -> Line:
    """φ or Ω of a limit state, as the method asks.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Factors")
    >>> [state_factor(sheet, strength.BENDING, each, "b", "bending").shown for each in ("LRFD", "ASD")]
    ['0.9', '1.67']
    """
    lrfd = method == "LRFD"
    return sheet.take(
        f"{'phi' if lrfd else 'Omega'}_{index}",
        factor.phi if lrfd else factor.omega,
        "1",
        f"{'Resistance' if lrfd else 'Safety'} factor, {says}",
        factor.cite,
        word=f"{'resistance' if lrfd else 'safety'} factor, {says}",
    )


def available(factor: Line, nominal: Line, method: Method) -> Expression:
    """φ R_n, or R_n / Ω."""
    return factor * nominal if method == "LRFD" else nominal / factor
