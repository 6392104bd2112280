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


def state_steel(sheet: Sheet, steel: Steel, name: str, origin: str) -> SteelLines:
    """F_y and E, taken from the material.

    Parameters
    ----------
    sheet : Sheet
    steel : Steel
        [kPa].
    name, origin : str
        What it is called; its place in the job.

    Source: AISC 360-22 A3.1, the material's grade.

    Examples
    --------
    >>> sheet = Sheet("B1", "US")
    >>> sheet.section("Steel")
    >>> state_steel(sheet, Steel(344738.0, 199947960.0), "A992", "material w50").fy.shown
    '50.0\xa0ksi'
    """
    return SteelLines(
        sheet.take("F_y", steel.yield_strength / 1000, "MPa", f"Yield strength, {name}", origin, given=False),
        sheet.take("E", steel.modulus / 1000, "MPa", "Modulus of elasticity", origin, given=False),
    )


class ShapeLines(NamedTuple):
    """Dimensions of a shape and the constants that the clauses ask for."""

    depth: Line
    width: Line
    web: Line
    flange: Line
    fillet: Line
    plastic: Line
    elastic: Line
    weak_radius: Line
    torsion: Line
    shear_radius: Line
    apart: Line


def state_shape(sheet: Sheet, shape: ISection, name: str, origin: str) -> ShapeLines:
    """The dimensions of a rolled shape, and the constants that follow from them.

    Parameters
    ----------
    sheet : Sheet
    shape : ISection
    name, origin : str
        Its designation; its place in the job.

    Source: `calcpack.clauses.steel.i_section`; r_ts and h_o by AISC 360-22 F2.2.

    Examples
    --------
    >>> from calcpack.clauses.steel import i_section
    >>> from calcpack.job.library import rolled_sections
    >>> sheet = Sheet("B1", "US")
    >>> sheet.section("Shape")
    >>> found = state_shape(sheet, i_section(rolled_sections()["w18x50"]), "W18X50", "section girder")
    >>> found.depth.shown, found.shear_radius.shown
    ('18.00\xa0in', '1.98\xa0in')
    """

    def size(symbol: str, value: float, says: str) -> Line:
        return sheet.take(symbol, value * 1000, "mm", f"{says} of {name}", origin, word=says.lower())

    def constant(symbol: str, value: float, unit: str, says: str) -> Line:
        return sheet.take(symbol, value, unit, says, "from the dimensions", given=False, word=says.lower())

    return ShapeLines(
        size("d", shape.depth, "Depth"),
        size("b_f", shape.width, "Flange width"),
        size("t_w", shape.web, "Web thickness"),
        size("t_f", shape.flange, "Flange thickness"),
        size("k", shape.flange + shape.root_radius, "Flange and fillet"),
        constant("Z_x", shape.plastic_modulus * 1e9, "mm^3", "Plastic section modulus"),
        constant("S_x", shape.elastic_modulus * 1e9, "mm^3", "Elastic section modulus"),
        constant("r_y", shape.weak_radius * 1e3, "mm", "Radius of gyration, weak axis"),
        constant("J", shape.torsion * 1e12, "mm^4", "Torsion constant"),
        constant("r_ts", shape.shear_radius * 1e3, "mm", "Effective radius of gyration (F2-7)"),
        constant("h_o", shape.between_flanges * 1e3, "mm", "Between the flanges' centroids"),
    )


class SlendernessLines(NamedTuple):
    """The web's ratio and what is required of it; the flange's ratio and limits where it is not compact."""

    web: Line
    web_compact: Line
    flange: tuple[Line, Line, Line] | None


def state_slenderness(
    sheet: Sheet, ratios: Slenderness, steel: SteelLines, shape: ShapeLines
) -> SlendernessLines:
    """Flange and web against their limits; the web has to be compact.

    Source: AISC 360-22 Table B4.1b, cases 10 and 15.
    """
    cite, root = f"{AISC} Table B4.1b (10)", sqrt(steel.modulus / steel.fy)
    outstand, flange = shape.width / (2 * shape.flange), None
    if ratios.compact_flange:
        sheet.require(outstand <= 0.38 * root, "The flange is compact", cite)
    else:
        words = ("slenderness of the flange", "limit for a compact flange", "limit for a noncompact flange")
        flange = (
            sheet.hence("lambda_f", outstand, "1", f"The flange is {class_of(ratios)}", cite, word=words[0]),
            sheet.hence("lambda_pf", 0.38 * root, "1", "Compact up to this", cite, word=words[1]),
            sheet.hence("lambda_rf", 1.0 * root, "1", "Noncompact up to this", cite, word=words[2]),
        )
    web = sheet.hence(
        "lambda_w",
        (shape.depth - 2 * shape.fillet) / shape.web,
        "1",
        "Slenderness of the web, between fillets",
        f"{AISC} B4.1b",
        word="slenderness of the web",
    )
    compact = sheet.require(web <= 3.76 * root, "The web is compact", f"{AISC} Table B4.1b (15)")
    return SlendernessLines(web, compact, flange)


def class_of(ratios: Slenderness) -> str:
    """The flange in a word: compact, noncompact or slender. Source: AISC 360-22 B4.1."""
    if ratios.compact_flange:
        return "compact"
    return "slender" if ratios.slender_flange else "noncompact"


def state_factor(sheet: Sheet, factor: Factor, method: Method, index: str, says: str) -> Line:
    """φ or Ω of a limit state, as the method asks; the factor names its clause.

    Source: AISC 360-22 B3.1, B3.2.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Factors")
    >>> from calcpack.clauses.aisc360.strength import BENDING
    >>> [state_factor(sheet, BENDING, each, "b", "bending").shown for each in ("LRFD", "ASD")]
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
    """φ R_n, or R_n / Ω. Source: AISC 360-22 (B3-1), (B3-2)."""
    return factor * nominal if method == "LRFD" else nominal / factor
