"""The design sections of a steel beam after EN 1993-1-1: what is shown, then clause by clause."""

from __future__ import annotations

from typing import Any

from calcpack.clauses.en1993.design import Buckling, LocalForce, SteelBeam
from calcpack.clauses.en1993.lines_bearing import bearing, force_beside_moment
from calcpack.clauses.en1993.lines_buckling import buckling, critical
from calcpack.clauses.en1993.lines_profile import (
    Partial,
    ProfileLines,
    classify,
    limits_of,
    take_factors,
    take_profile,
)
from calcpack.clauses.en1993.lines_section import bending, bending_beside_shear, shear, shear_share
from calcpack.notebook.sections.steel_chosen import chosen_words
from calcpack.notebook.sections.steel_en1993.results import (
    SENSE,
    force_name,
    place,
)
from calcpack.notebook.work import Work
from calcpack.sheet import Line, formula
from calcpack.sheet.latex import symbol_latex

ORIGIN = "design"  # the beam's own keys in the job file


def _keep(work: Work, name: str, line: Line, *, always: bool = True) -> None:
    """A requirement on the beam; a limit of validity counts as one only where it is passed."""
    if always or not line.passes:
        work.checks.append((name, line))


def state_steel_section(work: Work, beam: SteelBeam) -> tuple[ProfileLines, Partial, Line]:
    """Section, steel, factors and class; what later sections draw on."""
    sheet, profile = work.sheet, beam.profile
    section, material = work.given.section, work.given.material
    assert section is not None
    assert material is not None
    sheet.section("Section, steel and class")
    if section.family:
        sheet.text(chosen_words(section))
    given = take_profile(
        sheet, profile, f"section {section.key}", f"material {material.key}", work.lines.get("area")
    )
    sheet.text(f"Dimensions: {section.source}; steel: {material.source}.", role="note")
    for name, line in limits_of(sheet, given):
        _keep(work, name, line, always=False)
    partial = take_factors(sheet, profile, ORIGIN)
    classes = classify(sheet, given, profile)
    _keep(work, "class of the section", classes.check, always=False)
    return given, partial, classes.epsilon


def state_steel_resistance(
    work: Work, beam: SteelBeam, given: ProfileLines, partial: Partial, epsilon: Line
) -> None:
    """Bending, shear, and both together."""
    sheet = work.sheet
    sheet.section("Bending and shear")
    moment, force = beam.bending, beam.shear
    bent = bending(
        sheet,
        given,
        partial,
        beam.profile,
        moment.value,
        f"Largest moment, {'sagging' if moment.value >= 0 else 'hogging'}, at {place(work, moment.at)}",
        f"analysis, {moment.combination}",
        work.stated("moment", moment.value),
    )
    _keep(work, "bending", bent.check)
    sheared = shear(
        sheet,
        given,
        partial,
        epsilon,
        force.value,
        f"Largest shear, at {place(work, force.at)}",
        f"analysis, {force.combination}",
        work.stated("reaction", force.value),
    )
    _keep(work, "shear", sheared.check)
    _keep(work, "slenderness of the web", sheared.web, always=False)
    shear_share(sheet, sheared)
    if beam.beside is not None:
        both = bending_beside_shear(
            sheet,
            given,
            partial,
            beam.profile,
            sheared.resistance,
            place(work, beam.beside.at),
            beam.beside.moment,
            beam.beside.shear,
        )
        _keep(work, "bending beside shear", both.check)


def state_steel_buckling(work: Work, beam: SteelBeam, given: ProfileLines, partial: Partial) -> None:
    """Every segment in a table, the one that is used most line by line."""
    sheet, worst = work.sheet, beam.buckling
    sheet.section("Lateral-torsional buckling")
    if worst is None:
        sheet.text(
            "The top flange is held all along and the beam hogs nowhere: no flange can buckle sideways "
            "(EN 1993-1-1, 6.3.2.1(2))."
        )
        return
    _trials(work, beam)
    sheet.text(
        f"Line by line, {_between(work, worst)}, {worst.arrangement.combination.name}, "
        f"{SENSE[worst.arrangement.sense]}:"
    )
    start = critical(sheet, given, worst, beam.conditions, ORIGIN)
    found = buckling(sheet, given, partial, beam.profile, beam.conditions, start, ORIGIN)
    _keep(work, f"lateral-torsional buckling, {_between(work, worst)}", found.check)


def _between(work: Work, each: Buckling) -> str:
    return f"{place(work, each.segment.start)} to {place(work, each.segment.end)}"


def _head(symbol: str) -> tuple[list[Any], str]:
    return [formula(symbol_latex(symbol))], "right"


def _trials(work: Work, beam: SteelBeam) -> None:
    """The worst of each segment."""
    rolled = beam.conditions.curves == "rolled"
    rows = [
        [
            _between(work, each),
            f"{each.arrangement.combination.name}, {SENSE[each.arrangement.sense]}",
            work.show(each.demand, "kN*m"),
            work.show(each.length, "m"),
            f"{each.diagram:.3f}",
            f"{each.load:.3f}" if each.height else "–",
            work.show(each.critical, "kN*m"),
            f"{each.slenderness:.3f}",
            f"{each.reduction.reduced:.3f}",
            work.show(each.resistance, "kN*m"),
            f"{each.ratio:.2f}",
        ]
        for each in beam.segments
    ]
    chi = "chi_LT,mod" if rolled else "chi_LT"
    factor = "C_h" if any(each.segment.held_top for each in beam.segments) else "C_1"
    heads = ("M_Ed,b", "L_cr", factor, "C_2", "M_cr", "lambdabar_LT", chi, "M_b,Rd")
    work.sheet.table(
        [
            ("segment", "left"),
            ("worst of all tried", "left"),
            *(_head(head) for head in heads),
            ("ratio", "right"),
        ],
        rows,
        caption="Each segment under each strength combination, live load where it sags or hogs the segment "
        "most, where it does so at its quarter points, and everywhere: the arrangement that uses most.",
        strong_rows=[beam.segments.index(beam.buckling)] if beam.buckling else (),
    )


def state_steel_bearing(work: Work, beam: SteelBeam, given: ProfileLines, partial: Partial) -> None:
    """Forces on the flanges: a table of all, and the worst line by line."""
    sheet, worst, both = work.sheet, beam.force, beam.interaction
    sheet.section("Web under supports and point loads")
    held = work.given.design["web_held"]
    if held != "nowhere":
        sheet.text(
            f"{held[0].upper() + held[1:]}, end plates, cleats or stiffeners "
            "bring the force into the web (web_held, set by the job); these are to be verified apart."
        )
    if worst is None or both is None:
        if held == "nowhere":
            sheet.text("No force presses on a flange.")
        return
    sheet.table(
        [
            ("force", "left"),
            ("at", "right"),
            ("combination", "left"),
            _head("F_Ed"),
            _head("k_F"),
            _head("ell_y"),
            _head("lambdabar_F"),
            _head("chi_F"),
            _head("F_Rd"),
            ("ratio", "right"),
            ("η2 + 0.8 η1", "right"),
        ],
        [
            [
                force_name(work, each),
                place(work, each.at),
                each.combination,
                work.show(each.force, "kN"),
                f"{each.bearing.coefficient:.2f}",
                work.show(each.bearing.loaded * 1000, "mm"),
                f"{each.bearing.slenderness:.3f}",
                f"{each.bearing.reduction:.3f}",
                work.show(each.bearing.resistance, "kN"),
                f"{each.force / each.bearing.resistance:.2f}",
                f"{beam.together(each):.2f}",
            ]
            for each in beam.forces
        ],
        caption="Largest force of the strength combinations on each place; web without stiffeners, "
        "EN 1993-1-5:2006, 6 and 7.2. Moments at the place from the envelope.",
        strong_rows=[beam.forces.index(worst)],
    )
    words = _where(work, worst)
    found = bearing(sheet, given, partial, worst, beam.conditions, words, ORIGIN)
    _keep(work, f"web under the force {words}", found.check)
    if both.moment:
        words = _where(work, both)
        line = force_beside_moment(sheet, given, partial, both, words, found if both is worst else None)
        _keep(work, f"force with bending {words}", line)


def _where(work: Work, force: LocalForce) -> str:
    if force.support is None:
        return f"under the point load at {place(work, force.at)}"
    return f"at {force_name(work, force)}"
