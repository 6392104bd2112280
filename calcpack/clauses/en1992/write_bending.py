"""Lines: bars of a face, bending, least and most reinforcement, spacing of bars."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from calcpack.clauses.en1992.faces import Face
from calcpack.clauses.en1992.national import STANDARD
from calcpack.clauses.en1992.write_materials import StrengthLines, millimetres
from calcpack.sheet import PI, Expression, Line, Sheet, absolute, greatest, least, measured, number, sqrt
from calcpack.sheet.evaluation import holds

WORDS = {"sag": "bottom", "hog": "top", "end": "top, running through"}


@dataclass(frozen=True)
class SizeLines:
    """Lines of the section that every face shares."""

    width: Line  # of the web
    depth: Line
    flange_depth: Line | None
    cover: Line
    stirrup: Line  # its diameter
    inset: Line  # cover of the longitudinal bars
    aggregate: Line


@dataclass
class FaceLines:
    """Lines of one face."""

    face: Face
    tag: str  # index of its symbols
    bar: Line  # diameter
    area: Line
    inset: Line  # from the face to the bars' surface
    effective: Line  # d
    block: Line  # width of the block
    clear: Expression | None = None  # distance between bars side by side

    def symbol(self, base: str) -> str:
        """A symbol with this face's index."""
        return f"{base},{self.tag}" if "_" in base else f"{base}_{self.tag}"


def write_bars(sheet: Sheet, face: Face, tag: str, size: SizeLines, block: Line, origin: str) -> FaceLines:
    """Number, size, area and effective depth of the bars of a face.

    Parameters
    ----------
    face : Face
    tag : str
        "sag" for bottom bars, "hog" for top ones, "end" for those top bars that run through.
    size : SizeLines
    block : Line
        Width at the face in compression.
    origin : str
        "chosen", or the place in the job.

    Returns
    -------
    FaceLines

    Source: geometry.
    """
    bars, words = face.bars, WORDS[tag]

    def symbol(base: str) -> str:
        return f"{base},{tag}" if "_" in base else f"{base}_{tag}"

    count = number(bars.count)
    bar = sheet.take(
        symbol("phi"),
        millimetres(bars.bar.diameter),
        "mm",
        f"Bars, {words}: {bars.words}",
        origin,
        bars.bar.cite,
        word="bar diameter",
    )
    circle = holds("eq", bars.bar.area, math.pi * bars.bar.diameter**2 / 4)
    if circle:
        area = sheet.hence(
            symbol("A_s"), count * PI * bar**2 / 4, "mm^2", f"Area of the bars, {words}", "geometry"
        )
    else:
        one = sheet.take(
            symbol("A"), bars.bar.area * 1e6, "mm^2", "Area of one bar", bars.bar.source, given=False
        )
        area = sheet.hence(symbol("A_s"), count * one, "mm^2", f"Area of the bars, {words}", "geometry")
    to_centre: Expression = size.depth - size.inset - bar / 2
    if bars.layers[1:]:
        inner = sum(number_ * layer for layer, number_ in enumerate(bars.layers))
        to_centre = to_centre - measured(millimetres(bars.pitch), "mm") * inner / bars.count
    says = "Effective depth, " + words
    if bars.layers[1:]:
        says += f"; layers of {' and '.join(map(str, bars.layers))} bars"
    effective = sheet.hence(symbol("d"), to_centre, "mm", says, "geometry")
    return FaceLines(face, tag, bar, area, size.inset, effective, block)


def write_bending(
    sheet: Sheet,
    lines: FaceLines,
    strength: StrengthLines,
    size: SizeLines,
    origin: str,
    other: FaceLines | None = None,
) -> list[tuple[str, Line]]:
    """Bending of a face: neutral axis and its limit, lever arm, resistance.

    Parameters
    ----------
    lines : FaceLines
    strength : StrengthLines
    size : SizeLines
    origin : str
        Where the moment comes from.
    other : FaceLines
        Of the face in compression, where its bars are counted.

    Returns
    -------
    list of (name, requirement)

    Source: EN 1992-1-1:2004, 6.1, 3.1.7, 5.5(4).
    """
    face, where = lines.face, {"sag": "span", "hog": "support", "end": "end support"}[lines.tag]
    symbol = lines.symbol
    moment = sheet.take(
        symbol("M_Ed"),
        face.moment,
        "kN*m",
        f"Largest moment, {where}, {WORDS[lines.tag]} bars in tension",
        origin,
        given=False,
    )
    if face.doubly or holds("lt", face.bending.stress, face.case.strength.fyd):
        x, resistance = _by_strains(sheet, lines, strength, size, other)
    else:
        x, resistance = _yielding(sheet, lines, strength, size)
    checks = []
    if lines.tag != "end":
        within = sheet.require(
            x / lines.effective <= strength.limit,
            f"Ductile enough for linear analysis, {where}",
            f"{STANDARD}, 5.5(4)",
        )
        checks.append((f"neutral axis, {where}", within))
    enough = sheet.require(moment <= resistance, f"Bending, {where}", f"{STANDARD}, 6.1")
    return [(f"bending, {where}", enough), *checks]


def _yielding(sheet: Sheet, lines: FaceLines, strength: StrengthLines, size: SizeLines) -> tuple[Line, Line]:
    """Bars in tension yield, none counted in compression: closed forms."""
    face, symbol, cite = lines.face, lines.symbol, "6.1, 3.1.7(3)"
    tie = lines.area * strength.fyd
    stress = strength.eta * strength.fcd
    flange = size.flange_depth
    beyond = face.outline.block_flange and face.case.strength.lam * face.bending.x > face.outline.block_flange
    if beyond and flange is not None:
        wings = sheet.hence(
            symbol("F_f"),
            stress * (lines.block - size.width) * flange,
            "kN",
            "Compression in the flange beside the web",
            cite,
            word="force in the flange",
        )
        x = sheet.hence(
            symbol("x"),
            (tie - wings) / (stress * strength.lam * size.width),
            "mm",
            "Neutral axis: the block reaches into the web",
            cite,
            word="depth of the neutral axis",
        )
        deep = strength.lam * x
        resistance = sheet.hence(
            symbol("M_Rd"),
            wings * (lines.effective - flange / 2)
            + stress * size.width * deep * (lines.effective - deep / 2),
            "kN*m",
            "Moment resistance",
            cite,
        )
        return x, resistance
    x = sheet.hence(
        symbol("x"),
        tie / (stress * strength.lam * lines.block),
        "mm",
        "Neutral axis, the bars at their design strength",
        cite,
        word="depth of the neutral axis",
    )
    z = sheet.hence(symbol("z"), lines.effective - strength.lam * x / 2, "mm", "Lever arm", cite)
    resistance = sheet.hence(symbol("M_Rd"), tie * z, "kN*m", "Moment resistance", cite)
    return x, resistance


def _by_strains(
    sheet: Sheet,
    lines: FaceLines,
    strength: StrengthLines,
    size: SizeLines,
    other: FaceLines | None,
) -> tuple[Line, Line]:
    """Bars in compression counted, or bars in tension that do not yield: stresses from the strains."""
    face, symbol, cite = lines.face, lines.symbol, "6.1, 3.1.7(3)"
    x = sheet.take(
        symbol("x"),
        face.bending.x * 1e3,
        "mm",
        "Neutral axis, where the forces balance",
        "solved by bisection",
        cite,
        given=False,
        word="depth of the neutral axis",
    )
    tension = sheet.hence(
        symbol("sigma_s"),
        least(strength.fyd, strength.es * strength.strain * (lines.effective - x) / x),
        "MPa",
        "Stress of the bars in tension",
        "6.1(2)P, 3.2.7(2)",
        word="stress of bars",
    )
    block = strength.eta * strength.fcd * lines.block * strength.lam * x
    about = block * (lines.effective - strength.lam * x / 2)
    flange = size.flange_depth
    if (
        flange is not None
        and face.outline.block_flange
        and (face.case.strength.lam * face.bending.x > face.outline.block_flange)
    ):
        stress = strength.eta * strength.fcd
        wings = stress * (lines.block - size.width) * flange
        block = wings + stress * size.width * strength.lam * x
        about = wings * (lines.effective - flange / 2) + stress * size.width * strength.lam * x * (
            lines.effective - strength.lam * x / 2
        )
    push: Expression = block
    turning: Expression = about
    if face.doubly and other is not None:
        near = sheet.hence(
            symbol("d_2"),
            size.depth - other.effective,
            "mm",
            "Bars in compression, from their face",
            "geometry",
            word="depth of the bars in compression",
        )
        pressed = sheet.hence(
            symbol("sigma_s2"),
            least(strength.fyd, strength.es * strength.strain * (x - near) / x),
            "MPa",
            "Stress of the bars in compression",
            "6.1(2)P, 3.2.7(2)",
            word="stress of bars",
        )
        push = block + other.area * pressed
        turning = about + other.area * pressed * (lines.effective - near)
    sheet.require(
        absolute(push - lines.area * tension) / (lines.area * tension) <= number(0.000001),
        "The forces balance",
        "equilibrium",
    )
    resistance = sheet.hence(symbol("M_Rd"), turning, "kN*m", "Moment resistance", cite)
    return x, resistance


def write_amount(
    sheet: Sheet, lines: FaceLines, strength: StrengthLines, size: SizeLines
) -> list[tuple[str, Line]]:
    """Least reinforcement of a face.

    Parameters
    ----------
    sheet : Sheet
    lines : FaceLines [mm]
    strength : StrengthLines [MPa]
    size : SizeLines [mm]

    Source: EN 1992-1-1:2004, 9.2.1.1(1).
    """
    face, national, symbol = lines.face, lines.face.case.national, lines.symbol
    width: Line | Expression = size.width
    if holds("gt", face.outline.tension_width, face.outline.web):
        width = sheet.take(
            symbol("b_t"),
            face.outline.tension_width * 1e3,
            "mm",
            "Mean width of the tension zone, flange in tension, section uncracked",
            "geometry",
            "9.2.1.1(1)",
            given=False,
            word="mean width of the tension zone",
        )
    share = greatest(number(national["as_min"]) * strength.fctm / strength.fyk, national["as_min_least"])
    least_area = sheet.hence(
        symbol("A_s,min"),
        share * width * lines.effective,
        "mm^2",
        "Least reinforcement",
        "9.2.1.1(1) (9.1N)",
        word="least reinforcement",
    )
    line = sheet.require(
        least_area <= lines.area,
        f"Least reinforcement, {WORDS[lines.tag]}",
        f"{STANDARD}, 9.2.1.1(1)",
    )
    return [(f"least reinforcement, {WORDS[lines.tag]}", line)]


def write_most(sheet: Sheet, faces: Sequence[FaceLines], size: SizeLines) -> list[tuple[str, Line]]:
    """Most reinforcement at a face.

    Parameters
    ----------
    sheet : Sheet
    faces : sequence of FaceLines [mm]
    size : SizeLines [mm]

    Source: EN 1992-1-1:2004, 9.2.1.1(3).
    """
    outline = faces[0].face.outline
    gross: Expression = size.width * size.depth
    flange = next((each.block for each in faces if each.block is not size.width), None)
    if size.flange_depth is not None and flange is not None and outline.width > outline.web:
        gross = gross + (flange - size.width) * size.flange_depth
    areas = [each.area for each in faces]
    largest = greatest(*areas) if areas[1:] else areas[0]
    share = number(faces[0].face.case.national["as_max"])
    line = sheet.require(largest <= share * gross, "Most reinforcement at a face", f"{STANDARD}, 9.2.1.1(3)")
    return [("most reinforcement", line)]


def write_spacing(sheet: Sheet, lines: FaceLines, size: SizeLines) -> list[tuple[str, Line]]:
    """Clear distance between the bars of the outermost layer.

    Parameters
    ----------
    sheet : Sheet
    lines : FaceLines [mm]
        Their clear distance is set.
    size : SizeLines [mm]

    Source: EN 1992-1-1:2004, 8.2(2).
    """
    face, national = lines.face, lines.face.case.national
    first, words = face.bars.layers[0], WORDS[lines.tag]
    if first < 2:
        return []
    room = size.width - 2 * lines.inset - first * lines.bar
    lines.clear = room / (first - 1) if first > 2 else room
    rule = greatest(
        number(national["bar_k1"]) * lines.bar if national["bar_k1"] != 1 else lines.bar,
        size.aggregate + measured(millimetres(national["bar_k2"]), "mm"),
        measured(20, "mm"),
    )
    line = sheet.require(
        rule <= lines.clear, f"Clear distance of {first} bars side by side, {words}", f"{STANDARD}, 8.2(2)"
    )
    return [(f"bar spacing, {words}", line)]


def write_required(
    sheet: Sheet, lines: FaceLines, strength: StrengthLines, moment: Line, required: float
) -> Line:
    """Bars that a moment asks for; in closed form where the block stays within one width.

    Parameters
    ----------
    moment : Line
    required : float [m2]
        By :func:`calcpack.clauses.en1992.bending.steel_for`.

    Source: EN 1992-1-1:2004, 6.1, 3.1.7(3).
    """
    face, width = lines.face, lines.block
    stress = strength.eta * strength.fcd
    case = face.case.strength
    plain = case.eta * case.fcd * face.outline.block_width * face.depth**2
    within = 1 - 2 * moment.value / plain
    if within > 0 and holds("eq", plain / face.depth / case.fyd * (1 - within**0.5), required):
        return sheet.hence(
            lines.symbol("A_s,req"),
            stress
            * width
            * lines.effective
            / strength.fyd
            * (1 - sqrt(1 - 2 * moment / (stress * width * lines.effective**2))),
            "mm^2",
            "Bars that the moment asks for",
            "6.1, 3.1.7(3)",
            word="bars required",
        )
    return sheet.take(
        lines.symbol("A_s,req"),
        required * 1e6,
        "mm^2",
        "Bars that the moment asks for",
        "equilibrium of the section, solved",
        given=False,
        word="bars required",
    )
