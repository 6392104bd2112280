"""Lines: cover, bond and anchorage of bars."""

from __future__ import annotations

from calcpack.clauses.en1992.anchorage import Anchorage
from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.national import STANDARD
from calcpack.clauses.en1992.write_bending import FaceLines, SizeLines
from calcpack.clauses.en1992.write_materials import StrengthLines, millimetres, origin_of
from calcpack.clauses.en1992.write_shear import ShearLines
from calcpack.sheet import Expression, Line, Sheet, greatest, least, measured, number, quantity


def write_cover(
    sheet: Sheet, design: Design, size: SizeLines, bars: list[FaceLines]
) -> list[tuple[str, Line]]:
    """Nominal cover of stirrups and bars.

    Parameters
    ----------
    sheet : Sheet
    design : Design
    size : SizeLines [mm]
    bars : list of FaceLines [mm]

    Source: EN 1992-1-1:2004, 4.4.1.
    """
    case, national = design.case, design.case.national
    durable = sheet.take(
        "c_min,dur",
        millimetres(national.cover[case.exposure]),
        "mm",
        f"Least cover for durability, {case.exposure}, structural class S4",
        f"{national.file} cover.{case.exposure}"
        if national.file and case.exposure in national.own
        else origin_of(national, case.exposure),
        "4.4.1.2(5), Table 4.4N",
        word="least cover for durability",
    )
    allowance = sheet.take(
        "Delta c_dev",
        millimetres(national["delta_c_dev"]),
        "mm",
        "Allowance for deviation",
        origin_of(national, "delta_c_dev"),
        national.values["delta_c_dev"].clause,
        word="allowance for cover",
    )
    cite = f"{STANDARD}, 4.4.1.1(2)P (4.1)"
    needed = greatest(size.stirrup, durable, quantity(10, "mm")) + allowance
    found = [("cover", sheet.require(needed <= size.cover, "Cover of the stirrups", cite))]
    thick = max(bars, key=lambda each: each.bar.value)
    bond = sheet.require(thick.bar + allowance <= thick.inset, "Cover of the bars, for bond", cite)
    return [*found, ("cover for bond", bond)]


def write_bond(
    sheet: Sheet,
    lines: FaceLines,
    strength: StrengthLines,
    stress: Line | Expression,
    found: Anchorage,
    *,
    good: bool,
    tag: str,
    bent: bool = False,
) -> Line:
    """Anchorage length of a bar.

    Parameters
    ----------
    stress : Line
        σ_sd.
    found : Anchorage
        As worked out.
    good : bool
        Bond conditions.
    tag : str
        Index of the symbols.
    bent : bool

    Returns
    -------
    Line
        l_bd in mm.

    Source: EN 1992-1-1:2004, 8.4.2 to 8.4.4.
    """
    case = lines.face.case
    tensile: Line | Expression = strength.fctd
    if case.strength.fctk > 3100:
        tensile = strength.fctd * (quantity("3.1", "MPa") / strength.fctk)
    factors: Expression = number("2.25") if good else number("2.25") * number("0.7")
    if lines.face.bars.bar.diameter > 0.032:
        factors = factors * ((quantity(132, "mm") - lines.bar) / quantity(100, "mm"))
    bond = sheet.hence(
        f"f_bd,{tag}",
        factors * tensile,
        "MPa",
        f"Bond strength, {'good' if good else 'other than good'} bond conditions"
        + (", f_ctd not above that of C60/75" if case.strength.fctk > 3100 else ""),
        "8.4.2(2) (8.2)",
        word="bond strength",
    )
    basic = sheet.hence(
        f"l_b,{tag}",
        lines.bar / 4 * stress / bond,
        "mm",
        "Basic anchorage length",
        "8.4.3(2) (8.3)",
        word="basic anchorage length",
    )
    cover: Line | Expression = lines.inset
    apart = lines.face.clear[0] / 2
    if lines.clear is not None and apart < lines.face.bars.inset:
        cover = lines.clear / 2
    counts = min(apart, lines.face.bars.inset)
    off = 3 * lines.bar if bent else lines.bar
    shape = least(greatest(1 - number("0.15") * (cover - off) / lines.bar, number("0.7")), 1)
    hook = bent and counts > 3 * lines.face.bars.bar.diameter
    says = "Form and cover of the bar, a bend at its end" if bent else "Cover of the straight bar"
    alpha = sheet.hence(
        f"alpha_{tag},a",
        number("0.7") * shape if hook else shape,
        "1",
        says,
        "8.4.4(1), Table 8.2, Figure 8.3",
        word="factor of the anchorage length",
    )
    return sheet.hence(
        f"l_bd,{tag}",
        greatest(alpha * basic, number("0.3") * basic, 10 * lines.bar, quantity(100, "mm")),
        "mm",
        "Design anchorage length, not below the least",
        "8.4.4(1) (8.4, 8.6)",
        word="anchorage length",
    )


def write_end(
    sheet: Sheet, design: Design, lines: FaceLines, strength: StrengthLines, shear: ShearLines
) -> list[tuple[str, Line]]:
    """Anchorage of the bottom bars at the end support that asks most of it.

    Parameters
    ----------
    sheet : Sheet
    design : Design
    lines : FaceLines [mm]
        Of the bottom bars.
    strength : StrengthLines [MPa]
    shear : ShearLines

    Source: EN 1992-1-1:2004, 9.2.1.4.
    """
    end = design.end
    if end is None:
        return []
    case = design.case
    force = sheet.take(
        "V_Ed,e",
        end.shear,
        "kN",
        f"Shear at the face of the end support, {end.support.words}",
        "analysis, envelope",
        given=False,
        word="design shear at the end support",
    )
    pull = sheet.hence(
        "F_Ed",
        force * shear.shift / shear.arm,
        "kN",
        "Force to anchor",
        "9.2.1.4(2) (9.3)",
        word="force to anchor",
    )
    line = sheet.require(
        pull <= lines.area * strength.fyd,
        "Bars at the end support: all run through, more than β2 of them",
        f"{STANDARD}, 9.2.1.4(1) and (2)",
    )
    checks = [("bars at the end support", line)]
    stress = least(pull / lines.area, strength.fyd)
    length = write_bond(sheet, lines, strength, stress, end.length, good=True, tag="e", bent=end.bent)
    if end.room is None:
        sheet.text(
            [
                "Behind the line of contact of bar and support the bottom bars need ",
                length.math,
                "; the support's width is not given, so that this is not checked. Where the "
                "support is narrower, they are bent up (Figure 8.1).",
            ],
            role="caution",
        )
        return checks
    width = sheet.take(
        "t_s",
        millimetres(2 * end.support.half),
        "mm",
        "Width of the support along the beam",
        f"beam {sheet.mark} design.support_width",
        word="width of the support",
    )
    line = sheet.require(
        length <= width - measured(millimetres(case.cover), "mm"),
        f"Room behind the face, {'bars bent up' if end.bent else 'bars straight'}, cover at their end",
        f"{STANDARD}, 9.2.1.4(3), 8.4.4",
    )
    return [*checks, ("anchorage at the end support", line)]
