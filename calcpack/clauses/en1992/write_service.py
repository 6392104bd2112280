"""Lines: sections under service loads, crack width."""

from __future__ import annotations

from dataclasses import dataclass

from calcpack.clauses.en1992.cracking import BOND, LEAST_STRAIN, LONG_TERM, PURE_BENDING
from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.write_bending import WORDS, FaceLines, SizeLines
from calcpack.clauses.en1992.write_materials import StrengthLines
from calcpack.sheet import (
    Expression,
    Line,
    Sheet,
    greatest,
    least,
    number,
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
