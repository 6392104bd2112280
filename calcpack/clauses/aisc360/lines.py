"""Bending and shear to AISC 360-22 on a sheet: each strength a few lines that draw on each other."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.shape_lines import (
    AISC,
    ShapeLines,
    SlendernessLines,
    SteelLines,
    class_of,
    state_factor,
)
from calcpack.clauses.aisc360.strength import Method, Slenderness, Zone
from calcpack.sheet import PI, Expression, Line, Sheet, greatest, least, sqrt


class BendingBasis(NamedTuple):
    """What the bending strength of every segment draws on.

    ``first`` where a segment buckles inelastically, ``short``, ``long`` and ``ratio`` where one is not held
    all along, ``flange`` where local buckling counts.
    """

    factor: Line
    plastic: Line
    first: Line | None
    short: Line | None
    long: Line | None
    ratio: Line | None
    flange: Line | None


def state_bending_basis(
    sheet: Sheet,
    ratios: Slenderness,
    method: Method,
    steel: SteelLines,
    shape: ShapeLines,
    slender: SlendernessLines,
    *,
    inelastic: bool = True,
    lengths: bool = True,
) -> BendingBasis:
    """Plastic moment, moment at first yield, limiting lengths, and local buckling of the flange.

    Parameters
    ----------
    inelastic : bool
        Whether any segment buckles inelastically; if none does and the flange is compact, nothing draws on
        the moment at first yield, and it is left out.
    lengths : bool
        Whether any segment may buckle sideways; if none may, nothing draws on the limiting lengths.

    Source: AISC 360-22 (F2-1), (F2-5), (F2-6), (F3-1), (F3-2).
    """
    factor = state_factor(sheet, strength.BENDING, method, "b", "bending")
    plastic = sheet.hence("M_p", steel.fy * shape.plastic, "kN*m", "Plastic moment", f"{AISC} (F2-1)")
    first = None
    if inelastic or (slender.flange is not None and not ratios.slender_flange):
        first = sheet.hence(
            "M_y",
            0.7 * steel.fy * shape.elastic,
            "kN*m",
            "Where residual stresses make the first fibre yield",
            f"{AISC} F2.2",
            word="moment at first yield, residual stresses counted",
        )
    short, ratio, long = _lengths(sheet, steel, shape) if lengths else (None, None, None)
    flange = _flange(sheet, ratios, steel, shape, slender, plastic, first)
    return BendingBasis(factor, plastic, first, short, long, ratio, flange)


def _lengths(sheet: Sheet, steel: SteelLines, shape: ShapeLines) -> tuple[Line, Line, Line]:
    """L_p, torsion against warping, L_r."""
    short = sheet.hence(
        "L_p",
        1.76 * shape.weak_radius * sqrt(steel.modulus / steel.fy),
        "m",
        "Limiting length for yielding",
        f"{AISC} (F2-5)",
    )
    ratio = sheet.hence(
        "X",
        shape.torsion / (shape.elastic * shape.apart),
        "1",
        "Torsion against warping, c = 1",
        f"{AISC} (F2-8a)",
        word="torsion against warping",
    )
    stress = 0.7 * steel.fy / steel.modulus
    long = sheet.hence(
        "L_r",
        1.95
        * shape.shear_radius
        * (steel.modulus / (0.7 * steel.fy))
        * sqrt(ratio + sqrt(ratio**2 + 6.76 * stress**2)),
        "m",
        "Limiting length for inelastic buckling",
        f"{AISC} (F2-6)",
    )
    return short, ratio, long


def _flange(
    sheet: Sheet,
    ratios: Slenderness,
    steel: SteelLines,
    shape: ShapeLines,
    slender: SlendernessLines,
    plastic: Line,
    first: Line | None,
) -> Line | None:
    """M_n of local buckling; None where the flange is compact."""
    if slender.flange is None:
        return None
    outstand, compact, noncompact = slender.flange
    if ratios.slender_flange:
        factor = sheet.hence(
            "k_c",
            least(greatest(4 / sqrt(slender.web), 0.35), 0.76),
            "1",
            "Restraint by the web",
            f"{AISC} F3.2(b)",
            word="restraint of the flange by the web",
        )
        term: Expression = 0.9 * steel.modulus * factor * shape.elastic / outstand**2
        cite = f"{AISC} (F3-2)"
    else:
        assert first is not None
        term = plastic - (plastic - first) * ((outstand - compact) / (noncompact - compact))
        cite = f"{AISC} (F3-1)"
    return sheet.hence(
        "M_n,f",
        term,
        "kN*m",
        f"Local buckling of the {class_of(ratios)} flange",
        cite,
        word="nominal moment strength, local buckling of the flange",
    )


class Moments(NamedTuple):
    """The moments that C_b is made from: by size; ``capped`` where the demand is not the largest."""

    demand: Line
    quarter: Line
    middle: Line
    three_quarters: Line
    capped: bool


def state_diagram_factor(sheet: Sheet, moments: Moments) -> Line:
    """C_b of a segment from its moments.

    Source: AISC 360-22 (F1-1).

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Diagram")
    >>> values = {"M_r": 8, "M_A": 6, "M_B": 8, "M_C": 6}
    >>> four = [sheet.take(name, value, "kN*m", name, "analysis") for name, value in values.items()]
    >>> state_diagram_factor(sheet, Moments(*four, capped=False)).shown
    '1.136'
    """
    below = 2.5 * moments.demand + 3 * moments.quarter + 4 * moments.middle + 3 * moments.three_quarters
    term: Expression = 12.5 * moments.demand / below
    says = "Factor for the moment diagram"
    if moments.capped:
        term = greatest(term, 1)
        says += ", the moment checked in place of the larger one of the other sense, and at least 1"
    return sheet.hence("C_b", term, "1", says, f"{AISC} (F1-1)")


_ZONES: dict[Zone, str] = {
    "yielding": "Yielding, as the unbraced length is at most the limit for it",
    "inelastic": "Inelastic buckling, as the unbraced length lies between the limits",
    "elastic": "Elastic buckling, as the unbraced length is beyond both limits",
}


def state_bending(
    sheet: Sheet,
    zone: Zone,
    basis: BendingBasis,
    steel: SteelLines,
    shape: ShapeLines,
    unbraced: Line | None,
    factor: Line | None,
) -> Line:
    """Nominal bending strength of a segment.

    Parameters
    ----------
    zone : "yielding", "inelastic" or "elastic"
    unbraced, factor : Line or None
        L_b and C_b; not needed for yielding.

    Returns
    -------
    Line
        M_n; where a compact shape yields, the line of M_p itself.

    Source: AISC 360-22 F2.1, (F2-2), (F2-3), (F2-4); F3 where the flange is not compact.
    """
    if zone == "yielding" and basis.flange is None:
        return basis.plastic
    terms: list[Expression | Line] = [basis.plastic]
    cite = f"{AISC} F2.1"
    if zone != "yielding":
        if unbraced is None or factor is None:
            raise ValueError("buckling needs an unbraced length and a factor for the diagram")
        if zone == "inelastic":
            assert basis.first is not None
            assert basis.short is not None
            assert basis.long is not None
            along = (unbraced - basis.short) / (basis.long - basis.short)
            terms.insert(0, factor * (basis.plastic - (basis.plastic - basis.first) * along))
            cite = f"{AISC} (F2-2)"
        else:
            assert basis.ratio is not None
            slender = (unbraced / shape.shear_radius) ** 2
            stress = sheet.hence(
                "F_cr",
                factor * PI**2 * steel.modulus / slender * sqrt(1 + 0.078 * basis.ratio * slender),
                "MPa",
                "Critical stress of elastic buckling",
                f"{AISC} (F2-4)",
            )
            terms.insert(0, stress * shape.elastic)
            cite = f"{AISC} (F2-3)"
    says = _ZONES[zone]
    if basis.flange is not None:
        terms.append(basis.flange)
        says, cite = f"{says}; local buckling of the flange counted", f"{cite}, F3"
    return sheet.hence("M_n", least(*terms), "kN*m", says, cite)


class ShearLines(NamedTuple):
    """Nominal shear strength, and φ or Ω."""

    nominal: Line
    factor: Line


def state_shear(
    sheet: Sheet,
    shear: strength.Shear,
    method: Method,
    steel: SteelLines,
    shape: ShapeLines,
    web: Line,
) -> ShearLines:
    """Shear strength of the web without stiffeners.

    Parameters
    ----------
    web : Line
        Its slenderness.

    Source: AISC 360-22 G2.1, (G2-1) to (G2-4).
    """
    stocky, root = 2.24 * sqrt(steel.modulus / steel.fy), steel.modulus / steel.fy
    if shear.stocky:
        sheet.require(web <= stocky, "A rolled shape's web that yields in shear", f"{AISC} G2.1(a)")
        coefficient = sheet.take("C_v1", 1.0, "1", "Web shear factor", f"{AISC} (G2-2)")
    else:
        sheet.hence(
            "lambda_v",
            stocky,
            "1",
            "Up to this a rolled shape's web yields in shear: this one does not",
            f"{AISC} G2.1(a)",
            word="slenderness up to which a web yields in shear",
        )
        plate = sheet.take(
            "k_v",
            strength.PLATE_BUCKLING,
            "1",
            "Plate buckling coefficient, no stiffeners",
            f"{AISC} G2.1(b)(2)",
            word="plate buckling coefficient",
        )
        coefficient = sheet.hence(
            "C_v1",
            least(1.10 * sqrt(plate * root) / web, 1),
            "1",
            "Web shear factor",
            f"{AISC} (G2-3), (G2-4)",
        )
    factor = state_factor(sheet, shear.factor, method, "v", "shear")
    nominal = sheet.hence(
        "V_n",
        0.6 * steel.fy * shape.depth * shape.web * coefficient,
        "kN",
        "Nominal shear strength",
        f"{AISC} (G2-1)",
    )
    return ShearLines(nominal, factor)
