"""Lines: span over depth, curvature and deflection."""

from __future__ import annotations

from calcpack.clauses.en1992.deflection import LASTING
from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.service import SpanDepth
from calcpack.clauses.en1992.write_bending import FaceLines, write_required
from calcpack.clauses.en1992.write_materials import StrengthLines
from calcpack.clauses.en1992.write_service import ElasticLines
from calcpack.sheet import Expression, Line, Sheet, least, measured, number, number_in, quantity, sqrt
from calcpack.sheet.evaluation import holds


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
    if moment is None or not holds("eq", moment.value, found.moment):
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


def limit_term(span: Line, overhang: bool, factor: float) -> Expression:
    """Span over a number, twice an overhang over it.

    Parameters
    ----------
    span : Line [m]
    overhang : bool
    factor : float
        Span over ...

    Source: EN 1992-1-1:2004, 7.4.1(4), for an overhang twice its length.
    """
    return (2 * span if overhang else span) / number(factor)
