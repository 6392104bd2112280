"""Lateral-torsional buckling of one segment, written as lines."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.en1993.buckling import imperfection
from calcpack.clauses.en1993.design import Buckling, Conditions
from calcpack.clauses.en1993.lines_profile import Partial, ProfileLines
from calcpack.clauses.en1993.lines_section import modulus_line
from calcpack.clauses.en1993.rules import CODE, CURVE_CITE, LARGEST_DIAGRAM, OVERHANG, OVERHANG_CITE, SLENDER
from calcpack.clauses.en1993.section import Profile
from calcpack.sheet import PI, Expression, Line, Sheet, least, number, sqrt
from calcpack.sheet.evaluation import holds

SERNA = "Serna et al., JCSR 62 (2006) 566 (from memory)"
ENERGY = "half sine wave; Timoshenko and Gere, ch. 6"
HELD = "sixteen half waves; Trahair, Flexural-torsional buckling, ch. 8"
CRITICAL = "NCCI SN003b (1), k = kw = 1 (from memory)"


class Critical(NamedTuple):
    """The critical moment and what it comes from."""

    demand: Line
    length: Line
    diagram: Line | None  # C1; none where the top flange is held
    load: Line | None  # C2, where the load's height counts
    critical: Line


def critical(
    sheet: Sheet, given: ProfileLines, found: Buckling, conditions: Conditions, origin: str = "design"
) -> Critical:
    """M_cr of a segment under its own diagram of moments, with the height of the load.

    Parameters
    ----------
    sheet : Sheet
    given : ProfileLines
    found : Buckling
        From :func:`calcpack.clauses.en1993.design.design`.
    conditions : Conditions
    origin : str
        The beam's design keys in the job file.

    Returns
    -------
    Critical

    Source: as ``clauses.en1993.buckling`` has it.
    """
    part, above = found.segment, conditions.load_height == "top"
    arrangement = f"analysis, {found.arrangement.combination.name}"
    demand = sheet.take(
        "M_Ed,b",
        found.demand,
        "kN*m",
        "Largest moment of the segment, by size",
        arrangement,
        given=False,
    )
    if part.free_tip:
        length = _overhang_length(sheet, part.length, above, origin)
        diagram = sheet.take(
            "C_1", 1.0, "1", "Diagram factor, on the safe side for an overhang", "template", OVERHANG_CITE
        )
    else:
        length = _length(sheet, found, origin)
        if part.held_top:
            return _held(sheet, given, found, demand, length, arrangement)
        diagram = (
            _diagram(sheet, demand, found, arrangement)
            if conditions.diagram is None
            else sheet.take("C_1", conditions.diagram, "1", "Diagram factor, given", f"{origin}.C1")
        )
    load, term = None, None
    if found.height:
        load = _load_factor(sheet, demand, length, diagram if above else None, found, arrangement)
        height = sheet.take(
            "z_g",
            found.height * 1000,
            "mm",
            "Load above the shear centre: half the depth"
            if above
            else "Load below the shear centre: half the depth, negative",
            f"{origin}.load_height",
            word="height of the load above the shear centre",
            given=False,
        )
        term = load * height
    euler = _euler(sheet, given, length)
    inside: Expression = given.I_w / given.I_z + given.G * given.I_t / euler
    root = sqrt(inside + term**2) - term if term is not None else sqrt(inside)
    value = sheet.hence(
        "M_cr",
        diagram * euler * root,
        "kN*m",
        "Critical moment" + ("" if term is None else " with the load at its height"),
        CRITICAL,
        word="elastic critical moment",
    )
    return Critical(demand, length, diagram, load, value)


def _euler(sheet: Sheet, given: ProfileLines, length: Line) -> Line:
    return sheet.hence(
        "N_cr,z",
        PI**2 * given.E * given.I_z / length**2,
        "kN",
        "Critical force about the weak axis over this length",
        "Euler",
        word="critical force, weak axis",
    )


def _length(sheet: Sheet, found: Buckling, origin: str) -> Line:
    part = found.segment
    own = holds("eq", part.length, part.end - part.start)
    return sheet.take(
        "L_cr",
        part.length,
        "m",
        "Length between points where the bottom flange is held"
        if part.held_top
        else "Length between points held sideways and against twist",
        "segment" if own else f"{origin}.unbraced_length",
        word="buckling length",
        given=False,
    )


def _held(
    sheet: Sheet, given: ProfileLines, found: Buckling, demand: Line, length: Line, arrangement: str
) -> Critical:
    """The top flange held: the bottom flange buckles as the beam twists about the held one."""
    factor = sheet.take(
        "C_h",
        found.diagram,
        "1",
        "Factor for the hogging's own diagram, 1 if it were even; sagging left out",
        arrangement,
        HELD,
        word="diagram factor, top flange held",
        given=False,
    )
    euler = _euler(sheet, given, length)
    value = sheet.hence(
        "M_cr",
        factor / given.h * (euler * (given.I_w / given.I_z + given.h**2 / 4) + given.G * given.I_t),
        "kN*m",
        "Critical hogging moment, the beam twisting about its held top flange",
        HELD,
        word="elastic critical moment",
    )
    return Critical(demand, length, None, None, value)


def _overhang_length(sheet: Sheet, overhang: float, above: bool, origin: str) -> Line:
    reach = sheet.take(
        "ell_o",
        overhang,
        "m",
        "Overhang whose tip nothing holds",
        f"{origin}.tip_held",
        word="length of the overhang, tip free",
        given=False,
    )
    factor = OVERHANG[above]
    return sheet.hence(
        "L_cr",
        number(f"{factor:g}") * reach,
        "m",
        f"Buckling length, load {'above' if above else 'not above'} the shear centre",
        OVERHANG_CITE,
        word="buckling length",
    )


def _diagram(sheet: Sheet, demand: Line, found: Buckling, arrangement: str) -> Line:
    moments = found.moments
    quarters = [
        sheet.take(
            f"M_{index}",
            value,
            "kN*m",
            f"Moment {says}",
            arrangement,
            word=f"moment {says} of the segment",
            given=False,
        )
        for index, value, says in (
            (2, moments.quarter, "at the first quarter"),
            (3, moments.middle, "at the middle"),
            (4, moments.three_quarters, "at the third quarter"),
        )
    ]
    second, third, fourth = quarters
    by_quarters = sheet.hence(
        "C_1,q",
        sqrt(35 * demand**2 / (demand**2 + 9 * second**2 + 16 * third**2 + 9 * fourth**2)),
        "1",
        "Diagram factor from the quarter points",
        SERNA,
        word="diagram factor from the quarter points",
    )
    share = sheet.take(
        "mu",
        found.share,
        "1",
        "Mean square of the moments over the largest, weighted with sin² of the half wave of twist",
        arrangement,
        word="mean square of the moments over the half wave",
        given=False,
    )
    return sheet.hence(
        "C_1",
        least(by_quarters, number(1) / sqrt(share), LARGEST_DIAGRAM),
        "1",
        "Diagram factor, the least of this, of the energy of the half wave, and 2.7",
        f"{ENERGY}; ENV 1993-1-1 Annex F",
    )


def _load_factor(
    sheet: Sheet, demand: Line, length: Line, diagram: Line | None, found: Buckling, arrangement: str
) -> Line:
    """C2; without C1 for a load below the shear centre."""
    twisting = sheet.take(
        "F_phi",
        found.twisting,
        "kN",
        "Load on the segment times sin² of its place in the half wave of twist"
        + ("; point loads times sin" if diagram is not None else ""),
        arrangement,
        word="load times the square of the half sine wave",
        given=False,
    )
    return sheet.hence(
        "C_2",
        (diagram * length if diagram is not None else length) * twisting / (PI**2 * demand),
        "1",
        "Load factor, for its height" + ("" if diagram is not None else "; below, as for C1 = 1"),
        ENERGY,
        word="load factor, for the load's height",
    )


class BucklingLines(NamedTuple):
    """From the slenderness to the requirement."""

    slenderness: Line
    chi: Line
    resistance: Line
    check: Line


def buckling(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    profile: Profile,
    conditions: Conditions,
    start: Critical,
    origin: str = "design",
) -> BucklingLines:
    """χ_LT and M_b,Rd of a segment, and that its moment does not pass it.

    Parameters
    ----------
    sheet : Sheet
    given, partial : ProfileLines, Partial
    profile : Profile
    conditions : Conditions
        ``curves`` says which clause: 6.3.2.2 or 6.3.2.3.
    start : Critical
    origin : str

    Source: EN 1993-1-1:2005, 6.3.2.1 to 6.3.2.3.

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330, uniform
    >>> from calcpack.clauses.en1993.lines_profile import take_factors, take_profile
    >>> sheet, found = Sheet("B1"), uniform(5.7, 22.28, Conditions("rolled", "top", 1.127))
    >>> sheet.section("Buckling")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> start = critical(sheet, given, found.segments[0], found.conditions)
    >>> lines = buckling(sheet, given, partial, IPE_330, found.conditions, start)
    >>> round(start.critical.value), round(lines.slenderness.value, 2), round(lines.resistance.value)
    (114, 1.29, 92)
    """
    modulus, words = modulus_line(given, profile)
    slenderness = sheet.hence(
        "lambdabar_LT",
        sqrt(modulus * given.f_y / start.critical),
        "1",
        f"Slenderness, section modulus {words}",
        f"{CODE} 6.3.2.2(1)",
    )
    curve, value = imperfection(profile, conditions.curves)
    stocky = holds("le", profile.shape.depth / profile.shape.width, SLENDER)
    alpha = sheet.take(
        "alpha_LT",
        value,
        "1",
        f"Imperfection factor, curve {curve}: h/b {'not over' if stocky else 'over'} {SLENDER:g}",
        "rolled I-section",
        CURVE_CITE[conditions.curves],
    )
    if conditions.curves == "general":
        chi = _general(sheet, slenderness, alpha)
    else:
        chi = _rolled(sheet, profile, slenderness, alpha, start.diagram, origin)
    resistance = sheet.hence(
        "M_b,Rd",
        chi * modulus * given.f_y / partial.gamma_M1,
        "kN*m",
        "Buckling resistance",
        f"{CODE} 6.3.2.1(3) (6.55)",
    )
    check = sheet.require(start.demand <= resistance, "Lateral-torsional buckling", f"{CODE} 6.3.2.1(1)")
    return BucklingLines(slenderness, chi, resistance, check)


def _general(sheet: Sheet, slenderness: Line, alpha: Line) -> Line:
    phi = sheet.hence(
        "Phi_LT",
        0.5 * (1 + alpha * (slenderness - 0.2) + slenderness**2),
        "1",
        "Auxiliary value, general case",
        f"{CODE} 6.3.2.2(1)",
    )
    return sheet.hence(
        "chi_LT",
        least(1, number(1) / (phi + sqrt(phi**2 - slenderness**2))),
        "1",
        "Reduction factor",
        f"{CODE} 6.3.2.2(1) (6.56)",
    )


def _rolled(
    sheet: Sheet, profile: Profile, slenderness: Line, alpha: Line, diagram: Line | None, origin: str
) -> Line:
    factors = profile.factors
    plateau = sheet.take(
        "lambdabar_LT,0",
        factors.plateau,
        "1",
        "Plateau of rolled sections (0.4 recommended)",
        f"{origin}.plateau",
        f"{CODE} 6.3.2.3(1)",
        word="length of the plateau",
    )
    beta = sheet.take(
        "beta",
        factors.beta,
        "1",
        "Its correction (0.75 recommended)",
        f"{origin}.beta",
        f"{CODE} 6.3.2.3(1)",
        word="correction factor of the buckling curve",
    )
    phi = sheet.hence(
        "Phi_LT",
        0.5 * (1 + alpha * (slenderness - plateau) + beta * slenderness**2),
        "1",
        "Auxiliary value, rolled sections",
        f"{CODE} 6.3.2.3(1)",
    )
    chi = sheet.hence(
        "chi_LT",
        least(1, number(1) / slenderness**2, number(1) / (phi + sqrt(phi**2 - beta * slenderness**2))),
        "1",
        "Reduction factor",
        f"{CODE} 6.3.2.3(1) (6.57)",
    )
    if diagram is None:  # no relief for the diagram: its factor is not that of free ends
        return chi
    share = sheet.hence(
        "k_c",
        number(1) / sqrt(diagram),
        "1",
        "Correction for the diagram",
        f"{CODE} Table 6.6, as 1/√C1",
        word="correction for the moment diagram",
    )
    correction = sheet.hence(
        "f",
        least(1, 1 - 0.5 * (1 - share) * (1 - 2 * (slenderness - 0.8) ** 2)),
        "1",
        "Factor for the diagram between the points held",
        f"{CODE} 6.3.2.3(2)",
        word="factor for the moment diagram",
    )
    return sheet.hence(
        "chi_LT,mod",
        least(1, number(1) / slenderness**2, chi / correction),
        "1",
        "Reduction factor, modified",
        f"{CODE} 6.3.2.3(2) (6.58)",
        word="buckling reduction factor, modified",
    )
