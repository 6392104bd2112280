"""Lines: sections under service loads, crack width, span over depth, curvature and deflection."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.clauses.en1992.cracking import BOND, LEAST_STRAIN, LONG_TERM, PURE_BENDING
from calcpack.clauses.en1992.deflection import LASTING
from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.service import SpanDepth
from calcpack.clauses.en1992.write_bending import WORDS, FaceLines, SizeLines, write_required
from calcpack.clauses.en1992.write_materials import StrengthLines
from calcpack.sheet import (
    Expression,
    Line,
    Sheet,
    greatest,
    least,
    measured,
    number,
    number_in,
    quantity,
    sqrt,
)


@dataclass(frozen=True)
class ElasticLines:
    """A face's section under lasting loads."""

    modulus: Line
    ratio: Line
    x_2: Line
    inertia_2: Line


def write_creep(sheet: Sheet, design: Design, strength: StrengthLines, origin: str) -> tuple[Line, Line]:
    """Effective modulus of the concrete and ratio of the moduli.

    Parameters
    ----------
    sheet : Sheet
    design : Design
    strength : StrengthLines [MPa]
    origin : str
        Where the creep coefficient comes from.

    Source: EN 1992-1-1:2004, 7.4.3(5), (7.20).
    """
    creep = sheet.take(
        "phi_cr",
        design.case.creep,
        "1",
        "Final creep coefficient φ(∞, t0)",
        origin,
        "3.1.4",
        word="creep coefficient",
    )
    modulus = sheet.hence(
        "E_c,eff",
        strength.ecm / (1 + creep),
        "MPa",
        "Modulus of concrete that creeps",
        "7.4.3(5) (7.20)",
        word="modulus of concrete, effective",
    )
    ratio = sheet.hence(
        "alpha_e",
        strength.es / modulus,
        "1",
        "Ratio of the moduli",
        "7.4.3(6)",
        word="ratio of the moduli",
    )
    return modulus, ratio


def write_cracked(sheet: Sheet, lines: FaceLines, size: SizeLines, creep: tuple[Line, Line]) -> ElasticLines:
    """Neutral axis and second moment of area of the cracked section.

    Parameters
    ----------
    sheet : Sheet
    lines : FaceLines [mm]
    size : SizeLines [mm]
    creep : (Line, Line)
        Effective modulus [MPa] and ratio of the moduli, from :func:`write_creep`.

    Source: equilibrium of the cracked section; EN 1992-1-1:2004, 7.1(2).
    """
    face, symbol = lines.face, lines.symbol
    modulus, ratio = creep
    steel, cite = ratio * lines.area, "equilibrium, concrete cracked"
    flange = size.flange_depth
    depth_word, inertia_word = "neutral axis, cracked", "second moment of area, cracked"
    beyond = face.outline.block_flange and face.elastic.x_2 > face.outline.block_flange
    if beyond and flange is not None:
        wings = sheet.hence(
            symbol("S_f"),
            (lines.block - size.width) * flange,
            "mm^2",
            "Flange beside the web",
            "geometry",
            word="area of the flange beside the web",
        )
        x = sheet.hence(
            symbol("x_II"),
            (
                sqrt((wings + steel) ** 2 + 2 * size.width * (wings * flange / 2 + steel * lines.effective))
                - (wings + steel)
            )
            / size.width,
            "mm",
            f"Neutral axis, cracked, {WORDS[lines.tag]} bars in tension",
            cite,
            word=depth_word,
        )
        inertia = sheet.hence(
            symbol("I_II"),
            lines.block * x**3 / 3
            - (lines.block - size.width) * (x - flange) ** 3 / 3
            + steel * (lines.effective - x) ** 2,
            "mm^4",
            "Second moment of area, cracked",
            cite,
            word=inertia_word,
        )
        return ElasticLines(modulus, ratio, x, inertia)
    x = sheet.hence(
        symbol("x_II"),
        steel / lines.block * (sqrt(1 + 2 * lines.block * lines.effective / steel) - 1),
        "mm",
        f"Neutral axis, cracked, {WORDS[lines.tag]} bars in tension",
        cite,
        word=depth_word,
    )
    inertia = sheet.hence(
        symbol("I_II"),
        lines.block * x**3 / 3 + steel * (lines.effective - x) ** 2,
        "mm^4",
        "Second moment of area, cracked",
        cite,
        word=inertia_word,
    )
    return ElasticLines(modulus, ratio, x, inertia)


def write_crack(
    sheet: Sheet,
    lines: FaceLines,
    strength: StrengthLines,
    size: SizeLines,
    elastic: ElasticLines,
    combination: str,
) -> Line:
    """Crack width of a face.

    Parameters
    ----------
    sheet : Sheet
    lines : FaceLines [mm]
    strength : StrengthLines [MPa]
    size : SizeLines [mm]
    elastic : ElasticLines
        From :func:`write_cracked`.
    combination : str
        In words.

    Returns
    -------
    Line
        w_k in mm.

    Source: EN 1992-1-1:2004, 7.3.4, 7.3.2(3).
    """
    face, national, symbol = lines.face, lines.face.case.national, lines.symbol
    crack = face.crack
    moment = sheet.take(
        symbol("M_qp"),
        face.lasting,
        "kN*m",
        f"Largest moment, {WORDS[lines.tag]} bars in tension, {combination}",
        "analysis, envelope",
        given=False,
        word="moment, quasi-permanent combination",
    )
    stress = sheet.hence(
        symbol("sigma_s"),
        elastic.ratio * moment * (lines.effective - elastic.x_2) / elastic.inertia_2,
        "MPa",
        "Stress of the bars, cracked section",
        "7.3.4(2)",
        word="stress of bars",
    )
    height = sheet.hence(
        symbol("h_c,ef"),
        least(number("2.5") * (size.depth - lines.effective), (size.depth - elastic.x_2) / 3, size.depth / 2),
        "mm",
        "Height of the effective tension area",
        "7.3.2(3)",
        word="height of the effective tension area",
    )
    rho = sheet.hence(
        symbol("rho_p"),
        lines.area / (size.width * height),
        "1",
        "Ratio of the bars in it, over the web's width",
        "7.3.4(2) (7.10)",
        word="ratio of bars in the effective tension area",
    )
    if crack.near:
        spacing_term: Expression = (
            number(national["crack_k3"]) * lines.inset
            + number(BOND) * number(PURE_BENDING) * number(national["crack_k4"]) * lines.bar / rho
        )
        says = "Largest crack spacing, bars close to each other"
    else:
        spacing_term = number("1.3") * (size.depth - elastic.x_2)
        says = "Largest crack spacing, bars far from each other"
    spacing = sheet.hence(
        symbol("s_r,max"),
        spacing_term,
        "mm",
        says,
        f"7.3.4(3) ({'7.11' if crack.near else '7.14'})",
        word="largest crack spacing",
    )
    stiff = number(LONG_TERM) * strength.fctm / rho * (1 + strength.es / strength.ecm * rho)
    strain = sheet.hence(
        symbol("Delta epsilon"),
        greatest(stress - stiff, number(LEAST_STRAIN) * stress) / strength.es,
        "1",
        "Mean strain of the bars over that of the concrete, lasting load",
        "7.3.4(2) (7.9)",
        word="strain difference between bars and concrete",
    )
    return sheet.hence(
        symbol("w_k"),
        spacing * strain,
        "mm",
        f"Crack width, {WORDS[lines.tag]}",
        "7.3.4(1) (7.8)",
        word="crack width",
    )


def write_span_depth(
    sheet: Sheet,
    lines: FaceLines,
    strength: StrengthLines,
    found: SpanDepth,
    span: Line,
    design_moment: Line | None = None,
) -> tuple[Line, Line]:
    """Span over depth of one span, and up to which a deflection need not be worked out.

    Parameters
    ----------
    sheet : Sheet
    lines : FaceLines [mm]
    strength : StrengthLines [MPa]
    found : SpanDepth
    span : Line [m]
    design_moment : Line [kNm], optional
        Where the sheet holds the span's moment already.

    Source: EN 1992-1-1:2004, 7.4.2(2), (7.16.a) and (7.16.b).
    """
    cite = "7.4.2(2)"
    moment = design_moment
    if moment is None or abs(moment.value - found.moment) > 1e-9 * found.moment:
        moment = sheet.take(
            "M_Ed,s",
            found.moment,
            "kN*m",
            f"Largest moment of span {found.number + 1}, by size",
            "analysis, envelope",
            given=False,
            word="design moment of the span",
        )
    required = write_required(sheet, lines, strength, moment, found.required)
    rho = sheet.hence(
        "rho",
        required / (lines.block * lines.effective),
        "1",
        "Ratio of the bars required",
        cite,
        word="ratio of the bars required",
    )
    strength_ = number_in(strength.fck, "MPa")
    reference = sheet.hence(
        "rho_0",
        number("0.001") * sqrt(strength_),
        "1",
        "Reference ratio (strengths in MPa)",
        cite,
        word="reference ratio of bars",
    )
    factor = number(found.factor)
    if found.ratio <= reference.value:
        over = reference / rho
        term = factor * (
            11
            + number("1.5") * sqrt(strength_) * over
            + number("3.2") * sqrt(strength_) * (over - 1) ** number("1.5")
        )
    else:
        second = measured(found.ratio_2, "1")
        term = factor * (
            11
            + number("1.5") * sqrt(strength_) * reference / (rho - second)
            + sqrt(strength_) / 12 * sqrt(second / reference)
        )
        if found.ratio_2 == 0:
            term = factor * (11 + number("1.5") * sqrt(strength_) * reference / rho)
    basic = sheet.hence(
        "lambda_0",
        term,
        "1",
        f"Basic span over depth, K = {found.factor:g} (strengths in MPa)",
        f"{cite} ({'7.16a' if found.ratio <= reference.value else '7.16b'}), Table 7.4N",
        word="basic span over depth",
    )
    scaled: Expression = basic * least(
        quantity(500, "MPa") / strength.fyk * lines.area / required, number("1.5")
    )
    notes = ["bars provided over required"]
    if found.flanged != 1:
        scaled = scaled * number(found.flanged)
        notes.append("wide flange")
    if found.long != 1:
        scaled = scaled * (quantity(7, "m") / span)
        notes.append("span over 7 m with partitions")
    limit = sheet.hence(
        "lambda_lim",
        scaled,
        "1",
        f"Span over depth up to which no more is asked: {', '.join(notes)}",
        f"{cite} (7.17)",
        word="limit of span over depth",
    )
    actual = sheet.hence(
        "lambda_s",
        span / lines.effective,
        "1",
        f"Span over depth of span {found.number + 1}",
        cite,
        word="span over depth",
    )
    return actual, limit


def write_curvature(
    sheet: Sheet,
    design: Design,
    lines: FaceLines,
    strength: StrengthLines,
    elastic: ElasticLines,
    moment: Line,
    origin: str,
) -> Line:
    """Curvature where a span is bent most, between the uncracked and the cracked one.

    Parameters
    ----------
    sheet : Sheet
    design : Design
    lines : FaceLines [mm]
    strength : StrengthLines [MPa]
    elastic : ElasticLines
        From :func:`write_cracked`.
    moment : Line [kNm]
    origin : str
        Where the shrinkage strain comes from.

    Source: EN 1992-1-1:2004, 7.4.3(3) to (6), (7.18) to (7.21).
    """
    face, symbol = lines.face, lines.symbol
    case, section = design.case, lines.face.elastic
    cite = "7.4.3"
    x_1 = sheet.take(
        symbol("x_I"),
        section.x_1 * 1e3,
        "mm",
        "Neutral axis, uncracked, transformed section",
        "geometry",
        given=False,
        word="neutral axis, uncracked",
    )
    inertia = sheet.take(
        symbol("I_I"),
        section.inertia_1 * 1e12,
        "mm^4",
        "Second moment of area, uncracked",
        "geometry",
        given=False,
        word="second moment of area, uncracked",
    )
    modulus = face.outline.inertia / (face.outline.depth - face.outline.centroid)
    cracking = sheet.hence(
        symbol("M_cr"),
        strength.fctm * measured(modulus * 1e9, "mm^3"),
        "kN*m",
        "Moment at which the section cracks, gross concrete",
        f"{cite}(4)",
    )
    if moment.value < section.cracking:
        zeta = sheet.take(
            "zeta", 0.0, "1", "Uncracked", "M below M_cr", f"{cite}(3)", word="part that is cracked"
        )
    else:
        zeta = sheet.hence(
            "zeta",
            1 - number(LASTING) * (cracking / moment) ** 2,
            "1",
            "How far it is cracked, lasting load",
            f"{cite}(3) (7.19)",
            word="part that is cracked",
        )
    shrinkage = sheet.take(
        "epsilon_cs",
        case.shrinkage,
        "1",
        "Final free shrinkage",
        origin,
        "3.1.4(6)",
        word="shrinkage strain",
    )

    def part(index: str, x: Line, second: Line, words: str) -> Line:
        free = shrinkage * elastic.ratio * lines.area * (lines.effective - x) / second
        return sheet.hence(
            f"kappa_{index}",
            moment / (elastic.modulus * second) + free,
            "1/m",
            f"Curvature, {words}, with shrinkage",
            f"{cite}(6) (7.21)",
            word=f"curvature, {words}",
        )

    first = part("I", x_1, inertia, "uncracked")
    second = part("II", elastic.x_2, elastic.inertia_2, "cracked")
    return sheet.hence(
        "kappa", zeta * second + (1 - zeta) * first, "1/m", "Curvature", f"{cite}(3) (7.18)", word="curvature"
    )


def limit_term(span: Line, reach: float, factor: float) -> Expression:
    """Span over a number, twice an overhang over it.

    Parameters
    ----------
    span : Line [m]
    reach : float
        Over the span: 2 for an overhang.
    factor : float
        Span over ...

    Source: EN 1992-1-1:2004, 7.4.1(4), for an overhang twice its length.
    """
    return (2 * span if reach > 1 else span) / number(factor)
