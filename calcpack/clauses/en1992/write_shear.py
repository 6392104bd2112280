"""Lines: shear, stirrups, the shift rule."""

from __future__ import annotations

import math
from dataclasses import dataclass

from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.national import STANDARD
from calcpack.clauses.en1992.shear import ARM
from calcpack.clauses.en1992.write_bending import FaceLines, SizeLines
from calcpack.clauses.en1992.write_materials import StrengthLines, millimetres
from calcpack.sheet import (
    PI,
    Expression,
    Line,
    Sheet,
    greatest,
    in_unit,
    least,
    measured,
    number,
    number_in,
    quantity,
    show,
    sqrt,
)
from calcpack.sheet.evaluation import holds


@dataclass(frozen=True)
class ShearLines:
    """Lines that later ones draw on."""

    arm: Line
    cot: Line
    shift: Line
    area: Line  # A_sw
    spacing: Line


def write_shear(
    sheet: Sheet,
    design: Design,
    strength: StrengthLines,
    size: SizeLines,
    longitudinal: FaceLines,
    effective: Line,
    origin: str,
) -> tuple[ShearLines, list[tuple[str, Line]]]:
    """Shear where the stirrups stand closest, and the struts where the shear is largest.

    Parameters
    ----------
    design : Design
    longitudinal : FaceLines
        Tension bars where the shear is checked.
    effective : Line
        The least effective depth.
    origin : str
        "chosen", or the place in the job.

    Returns
    -------
    lines, list of (name, requirement)

    Source: EN 1992-1-1:2004, 6.2.1 to 6.2.3.
    """
    shear, case = design.shear, design.case
    national = case.national
    place, largest = shear.places[shear.governing], shear.places[shear.largest]
    support, other = case.supports[place.support], case.supports[largest.support]
    face = sheet.take(
        "V_Ed,f",
        largest.v_face,
        "kN",
        f"Largest shear at a face of a support, {other.words}, {largest.side}",
        "analysis, envelope",
        given=False,
        word="design shear at the face",
    )
    where = f"at the face, {place.why}" if place.why else "at d from the face"
    at = sheet.take(
        "V_Ed",
        place.v_at,
        "kN",
        f"Shear where the stirrups stand closest: {support.words}, {place.side}, {where}",
        "analysis, envelope",
        "6.2.1(8)",
        given=False,
    )
    _concrete(sheet, design, strength, size, longitudinal, effective, at)
    area, spacing = _stirrups(sheet, design, origin)
    z = sheet.hence("z", number(ARM) * effective, "mm", "Lever arm in shear", "6.2.3(1)")
    nu = sheet.hence(
        "nu_1",
        number(national["nu"]) * (1 - strength.fck / quantity(250, "MPa")),
        "1",
        "Strength factor of the struts",
        "6.2.2(6) (6.6N)",
    )
    struts: Expression = size.width * z * nu * strength.fcd
    if national["alpha_cw"] != 1:
        struts = number(national["alpha_cw"]) * struts
    cot = _cot(sheet, design, strength, size, area, spacing, nu)
    ties = sheet.hence(
        "V_Rd,s",
        area / spacing * z * strength.fyd * cot,
        "kN",
        "Shear the stirrups carry",
        "6.2.3(3) (6.8)",
    )
    most = sheet.hence("V_Rd,max", struts / (cot + 1 / cot), "kN", "Shear the struts carry", "6.2.3(3) (6.9)")
    checks = [
        ("shear, stirrups", sheet.require(at <= ties, "Stirrups", f"{STANDARD}, 6.2.3(3)")),
        ("shear, struts", sheet.require(face <= most, "Struts", f"{STANDARD}, 6.2.1(8), 6.2.3(3)")),
    ]
    shift = sheet.hence(
        "a_l",
        z * cot / 2,
        "mm",
        "Shift of the moments, and of the force in the bars",
        "9.2.1.3(2) (9.2)",
        word="shift of the moments",
    )
    return ShearLines(z, cot, shift, area, spacing), checks


def _concrete(
    sheet: Sheet,
    design: Design,
    strength: StrengthLines,
    size: SizeLines,
    longitudinal: FaceLines,
    effective: Line,
    at: Line,
) -> None:
    national, cite = design.case.national, "6.2.2(1)"
    k = sheet.hence("k", least(1 + sqrt(quantity(200, "mm") / effective), 2), "1", "Size factor", cite)
    rho = sheet.hence(
        "rho_l",
        least(longitudinal.area / (size.width * effective), number("0.02")),
        "1",
        "Ratio of the bars in tension there",
        cite,
    )
    strength_ = number_in(strength.fck, "MPa")
    term = number(national["c_Rd"]) / strength.gamma_c * k * (100 * rho * strength_) ** (number(1) / 3)
    floor = number(national["v_min"]) * k ** number("1.5") * sqrt(strength_)
    carried = sheet.hence(
        "V_Rd,c",
        in_unit(greatest(term, floor), "MPa") * size.width * effective,
        "kN",
        "Shear the concrete carries without stirrups (strengths in MPa)",
        f"{cite} (6.2a, 6.2b, 6.3N)",
    )
    needs = at.value > carried.value
    sheet.text(
        [
            "Stirrups by calculation are " if needs else "The least stirrups are ",
            "needed, " if needs else "enough, ",
            at.math,
            " ",
            {"math": ">" if needs else r"\le"},
            " ",
            carried.math,
            " (6.2.1(3))." if needs else " (6.2.1(4)); what the truss carries is stated all the same.",
        ],
        role="note",
    )


def _stirrups(sheet: Sheet, design: Design, origin: str) -> tuple[Line, Line]:
    stirrups = design.shear.stirrups
    legs = number(stirrups.legs)
    bar = next(line for line in sheet.lines.values() if line.symbol == "phi_w")
    circle = holds("eq", stirrups.bar.area, math.pi * stirrups.bar.diameter**2 / 4)
    area = sheet.hence(
        "A_sw",
        legs * PI * bar**2 / 4 if circle else legs * measured(stirrups.bar.area * 1e6, "mm^2"),
        "mm^2",
        f"Area of a stirrup's {stirrups.legs} legs",
        "geometry" if circle else stirrups.bar.source,
        word="shear reinforcement within one spacing",
    )
    spacing = sheet.take(
        "s_w",
        millimetres(min(design.shear.spacings)),
        "mm",
        "Closest spacing along the beam",
        origin,
        word="spacing of stirrups",
    )
    return area, spacing


def _cot(
    sheet: Sheet,
    design: Design,
    strength: StrengthLines,
    size: SizeLines,
    area: Line,
    spacing: Line,
    nu: Line,
) -> Line:
    case, national = design.case, design.case.national
    cite, word = "6.2.3(2) (6.7N)", "cotangent of the strut angle"
    if case.given.cot:
        origin = f"beam {sheet.mark} design.cot_theta"
        return sheet.take("cot theta", case.given.cot, "1", "Strut angle", origin, cite, word=word)
    force: Expression = size.width * spacing * nu * strength.fcd
    if national["alpha_cw"] != 1:
        force = number(national["alpha_cw"]) * force
    inside = force / (area * strength.fyd) - 1
    low, high = number(national["cot_theta_min"]), number(national["cot_theta_max"])
    # below the square root nothing is negative unless the stirrups outdo the struts
    outdone = (
        strength.fcd.value * nu.value * size.width.value * spacing.value < area.value * strength.fyd.value
    )
    best = sqrt(greatest(inside, 0)) if outdone else sqrt(inside)
    return sheet.hence(
        "cot theta",
        least(greatest(best, low), high),
        "1",
        "Best strut angle: stirrups and struts give out together, within the limits",
        cite,
        word=word,
    )


def write_along(sheet: Sheet, design: Design) -> list[tuple[str, Line]]:
    """Shear against the stirrups, and the shifted moments against the bars, wherever that is closest.

    Parameters
    ----------
    sheet : Sheet
    design : Design
        Places in m, shear in kN, moments in kNm.

    Source: EN 1992-1-1:2004, 6.2.3 and 9.2.1.3.
    """
    at, force, carried = design.shear.along
    worst = design.along
    system = sheet.system
    shear = sheet.require(
        measured(force, "kN") <= measured(carried, "kN"),
        f"Shear along the beam, closest at {show(at, 'm', system)}",
        f"{STANDARD}, 6.2.3(3)",
    )
    moment = sheet.require(
        measured(worst.moment, "kN*m") <= measured(worst.resistance, "kN*m"),
        f"{'Hogging' if worst.hogging else 'Sagging'} moments along the beam, shifted, closest at "
        f"{show(worst.at, 'm', system)}",
        f"{STANDARD}, 9.2.1.3",
    )
    return [("shear along the beam", shear), ("moments along the beam", moment)]


def write_stirrup_limits(
    sheet: Sheet, design: Design, strength: StrengthLines, size: SizeLines, lines: ShearLines, effective: Line
) -> list[tuple[str, Line]]:
    """Least stirrups, widest spacing along and across.

    Parameters
    ----------
    sheet : Sheet
    design : Design
    strength : StrengthLines [MPa]
    size : SizeLines [mm]
    lines : ShearLines [mm, mm2]
    effective : Line [mm]
        The least effective depth.

    Source: EN 1992-1-1:2004, 9.2.2(5), (6), (8).
    """
    shear, national = design.shear, design.case.national
    widest = max(zone.spacing for zone in shear.zones)
    wide = sheet.take(
        "s_w,max",
        millimetres(widest),
        "mm",
        "Widest spacing along the beam",
        "zones above",
        word="widest spacing of stirrups",
    )
    ratio = sheet.hence(
        "rho_w,min",
        in_unit(number(national["rho_w_min"]) * sqrt(number_in(strength.fck, "MPa")), "MPa") / strength.fyk,
        "1",
        "Least ratio of stirrups (strengths in MPa)",
        "9.2.2(5) (9.5N)",
        word="least ratio of stirrups",
    )
    found = [
        (
            "least stirrups",
            sheet.require(
                ratio <= lines.area / (wide * size.width), "Least stirrups", f"{STANDARD}, 9.2.2(5) (9.4)"
            ),
        ),
        (
            "stirrup spacing",
            sheet.require(
                wide <= number(national["s_l_max"]) * effective,
                "Spacing along the beam",
                f"{STANDARD}, 9.2.2(6) (9.6N)",
            ),
        ),
        (
            "stirrup legs",
            sheet.require(
                measured(shear.legs_apart * 1e3, "mm")
                <= least(
                    number(national["s_t_max"]) * effective, measured(millimetres(national["s_t_most"]), "mm")
                ),
                "Legs across the web",
                f"{STANDARD}, 9.2.2(8) (9.8N)",
            ),
        ),
    ]
    held = [
        face.compression.bar.diameter
        for face in (design.bottom, design.top)
        if face and face.doubly and face.compression
    ]
    if held:
        line = sheet.require(
            wide <= 15 * measured(millimetres(min(held)), "mm"),
            "Compression bars held by the stirrups",
            f"{STANDARD}, 9.2.1.2(3)",
        )
        found.append(("stirrups about compression bars", line))
    return found
