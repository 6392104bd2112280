"""The web under a local force, written as lines: EN 1993-1-5, clauses 6 and 7.2."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.en1993.design import Conditions, LocalForce
from calcpack.clauses.en1993.lines_profile import Partial, ProfileLines
from calcpack.clauses.en1993.rules import PLATED, STRESS_SHARE
from calcpack.sheet import Expression, Line, Sheet, least, number, sqrt


class BearingLines(NamedTuple):
    """The force, the web's resistance, and the requirement between them."""

    force: Line
    resistance: Line
    check: Line


def bearing(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    found: LocalForce,
    conditions: Conditions,
    says: str,
    origin: str = "design",
) -> BearingLines:
    """Resistance of an unstiffened web under a force on a flange, and that the force does not pass it.

    Parameters
    ----------
    sheet : Sheet
    given, partial : ProfileLines, Partial
    found : LocalForce
        From :func:`calcpack.clauses.en1993.design.design`.
    conditions : Conditions
        With the stiff bearing length.
    says : str
        Where the force stands.
    origin : str

    Source: EN 1993-1-5:2006, 6.1 to 6.6, types (a) and (c) of Figure 6.1.

    Examples
    --------
    >>> from calcpack.clauses.en1993.lines_profile import take_factors, take_profile
    >>> from calcpack.clauses.en1993.samples import IPE_330, uniform
    >>> sheet, beam = Sheet("B1"), uniform(5.7, 22.28, Conditions())
    >>> sheet.section("Bearing")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> lines = bearing(sheet, given, partial, beam.forces[0], beam.conditions, "at support 1")
    >>> abs(lines.resistance.value - beam.forces[0].bearing.resistance) < 1e-9
    True
    """
    web = found.bearing
    force = sheet.take(
        "F_Ed", found.force, "kN", f"Force {says}", f"analysis, {found.combination}", given=False
    )
    stiff = sheet.take(
        "s_s",
        conditions.bearing_length * 1000,
        "mm",
        "Stiff bearing length",
        f"{origin}.bearing_length",
        f"{PLATED} 6.3",
        word="stiff bearing length",
    )
    coefficient, beyond = _coefficient(sheet, given, found, stiff)
    critical = sheet.hence(
        "F_cr",
        0.9 * coefficient * given.E * given.t_w**3 / given.h_w,
        "kN",
        "Critical force of the web",
        f"{PLATED} 6.4(1) (6.5)",
        word="critical force of the web",
    )
    first = sheet.hence(
        "m_1", given.b / given.t_w, "1", "Flange against web, of one steel", f"{PLATED} 6.5(1) (6.8)",
        word="flange against web",
    )  # fmt: skip
    inside: Expression = first.as_expression()
    second = None
    if web.second:
        second = sheet.hence(
            "m_2",
            0.02 * (given.h_w / given.t_f) ** 2,
            "1",
            "What the web adds, as its slenderness without it passes 0.5",
            f"{PLATED} 6.5(1) (6.9)",
            word="web's share in the loaded length",
        )
        inside = first + second
    loaded = _loaded(sheet, given, stiff, coefficient, beyond, first, second, inside)
    slenderness = sheet.hence(
        "lambdabar_F",
        sqrt(loaded * given.t_w * given.f_y / critical),
        "1",
        "Slenderness of the web under the force",
        f"{PLATED} 6.4(1) (6.4)",
        word="slenderness of the web under a force",
    )
    share = sheet.hence(
        "chi_F",
        least(1, number(0.5) / slenderness),
        "1",
        "Reduction factor",
        f"{PLATED} 6.4(1) (6.3)",
        word="reduction of the loaded length",
    )
    resistance = sheet.hence(
        "F_Rd",
        given.f_y * (share * loaded) * given.t_w / partial.gamma_M1,
        "kN",
        "Resistance of the web to the force",
        f"{PLATED} 6.2(1) (6.1), (6.2)",
        word="resistance of the web to a force",
    )
    check = sheet.require(force <= resistance, f"Web under the force {says}", f"{PLATED} 6.6(1) (6.14)")
    return BearingLines(force, resistance, check)


def _coefficient(
    sheet: Sheet, given: ProfileLines, found: LocalForce, stiff: Line
) -> tuple[Line, Expression | None]:
    """k_F, and s_s + c for a force near the beam's end."""
    word = "buckling coefficient of the web"
    if found.beyond is None:
        return (
            sheet.take(
                "k_F", 6.0, "1", "Coefficient: force inside the beam, web without stiffeners", "type (a)",
                f"{PLATED} Figure 6.1", word=word,
            ),
            None,
        )  # fmt: skip
    reach: Expression = stiff.as_expression()
    if found.beyond:
        past = sheet.take(
            "c", found.beyond * 1000, "mm", "From the stiff bearing to the beam's end", "analysis",
            word="from the stiff bearing to the end", given=False,
        )  # fmt: skip
        reach = stiff + past
    coefficient = sheet.hence(
        "k_F",
        least(6, 2 + 6 * reach / given.h_w),
        "1",
        "Coefficient: force at the end of the beam" + ("" if found.beyond else ", bearing flush with it"),
        f"{PLATED} Figure 6.1 (c)",
        word=word,
    )
    return coefficient, reach


def _loaded(
    sheet: Sheet,
    given: ProfileLines,
    stiff: Line,
    coefficient: Line,
    reach: Expression | None,
    first: Line,
    second: Line | None,
    inside: Expression,
) -> Line:
    """ℓ_y, the length of web that takes part."""
    spread = stiff + 2 * given.t_f * (1 + sqrt(inside))
    word = "loaded length of the web"
    if reach is None:
        return sheet.hence("ell_y", spread, "mm", "Loaded length", f"{PLATED} 6.5(2) (6.10)", word=word)
    effective = sheet.hence(
        "ell_e",
        least(coefficient * given.E * given.t_w**2 / (2 * given.f_y * given.h_w), reach),
        "mm",
        "Effective length at the end",
        f"{PLATED} 6.5(3) (6.13)",
        word="effective length at the end",
    )
    bent = first / 2 + (effective / given.t_f) ** 2
    return sheet.hence(
        "ell_y",
        least(
            spread,
            effective + given.t_f * sqrt(bent if second is None else bent + second),
            effective + given.t_f * sqrt(inside),
        ),
        "mm",
        "Loaded length, the least of three",
        f"{PLATED} 6.5(3) (6.10) to (6.12)",
        word=word,
    )


def force_beside_moment(
    sheet: Sheet,
    given: ProfileLines,
    partial: Partial,
    found: LocalForce,
    says: str,
    lines: BearingLines | None = None,
) -> Line:
    """A local force together with the bending moment at its place.

    Parameters
    ----------
    lines : BearingLines, optional
        Force and resistance, where lines hold them already; else the values worked out are brought in.

    Source: EN 1993-1-5:2006, 7.2(1) (7.2) with 4.6(1), elastic section modulus.

    Examples
    --------
    >>> from calcpack.clauses.en1993.lines_profile import take_factors, take_profile
    >>> from calcpack.clauses.en1993.samples import IPE_330, uniform
    >>> sheet, beam = Sheet("B1"), uniform(5.7, 22.28, Conditions())
    >>> sheet.section("Bearing")
    >>> given, partial = take_profile(sheet, IPE_330), take_factors(sheet, IPE_330)
    >>> force_beside_moment(sheet, given, partial, beam.forces[0], "at support 1").passes
    True
    """
    if lines is None:
        force = sheet.take(
            "F_Ed,2", found.force, "kN", f"Force {says}", f"analysis, {found.combination}", given=False
        )
        resistance = sheet.take(
            "F_Rd,2", found.bearing.resistance, "kN", "Resistance of the web there", "as in the table",
            f"{PLATED} 6.2(1)", given=False,
        )  # fmt: skip
    else:
        force, resistance = lines.force, lines.resistance
    moment = sheet.take(
        "M_Ed,2", found.moment, "kN*m", f"Moment {says}, by size", "analysis, envelope", given=False
    )
    bent = sheet.hence(
        "eta_1",
        moment / (given.W_el * given.f_y / partial.gamma_M0),
        "1",
        "Bending stress over the strength",
        f"{PLATED} 4.6(1) (4.14)",
        word="bending stress over the strength",
    )
    pressed = sheet.hence(
        "eta_2",
        force / resistance,
        "1",
        "Force over its resistance",
        f"{PLATED} 6.6(1) (6.14)",
        word="force over its resistance",
    )
    return sheet.require(
        pressed + 0.8 * bent <= STRESS_SHARE, f"Force together with bending {says}", f"{PLATED} 7.2(1) (7.2)"
    )
