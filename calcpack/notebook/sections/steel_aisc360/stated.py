"""A steel beam to AISC 360-22: the sections of the sheet that design it.

Worked out first (`design_beam`), so that what is shown can stand before how.
"""

from __future__ import annotations

from calcpack.clauses.aisc360 import lines, shape_lines
from calcpack.clauses.aisc360.design import BendingCheck
from calcpack.clauses.aisc360.shape_lines import AISC, available
from calcpack.clauses.aisc360.strength import Zone
from calcpack.clauses.steel import Arrangement
from calcpack.figures.section import section_figure
from calcpack.notebook.sections.steel_aisc360.beam import (
    SteelBeam,
    bending_name,
    span_words,
    steel_design,
)
from calcpack.notebook.sections.steel_chosen import chosen_words
from calcpack.notebook.sections.strength_figures import strength_figure
from calcpack.notebook.work import Work
from calcpack.sheet import Line
from calcpack.sheet.runs import Runs

SAMPLES = 120


def design_beam(work: Work) -> SteelBeam:
    """Work the beam out, before anything is written.

    Raises
    ------
    CalcpackError
        The section is no rolled I-shape, the material no steel, a key of the design does not fit.
    """
    return SteelBeam(steel_design(work.study))


def state_section(work: Work, beam: SteelBeam) -> None:
    """The steel, the shape with its constants, and how slender flange and web are."""
    sheet, given, design = work.sheet, work.given, beam.design
    section, material = given.section, given.material
    assert section is not None
    assert material is not None
    sheet.section(f"Section to {AISC}")
    with sheet.columns([6, 18]) as column:
        sheet.figure(
            section_figure(section, work.study.system, mark=given.mark, width_mm=34),
            f"{section.designation}: {section.source}.",
        )
        column()
        sheet.facts(_choices(work, beam))
        sheet.text(
            [
                "Constants by integration over flanges, web and fillets; ",
                {"math": r"C_{\text{w}} = t_{\text{f}}\,b_{\text{f}}^3\,h_{\text{o}}^2/24"},
                "; J after El Darwish and Johnston; they can be compared with the Manual's Table 1-1.",
            ],
            role="note",
        )
        if section.family:
            sheet.text(chosen_words(section))
    steel = shape_lines.state_steel(
        sheet, design.steel, material.grade or material.key, f"material {material.key}"
    )
    shape = shape_lines.state_shape(sheet, design.shape, section.designation, f"section {section.key}")
    slender = shape_lines.state_slenderness(sheet, design.slenderness, steel, shape)
    if not design.covered:
        work.checks.append(("web compact", slender.web_compact))
    beam.basis |= {"steel": steel, "shape": shape, "slender": slender}


def _choices(work: Work, beam: SteelBeam) -> list[tuple[Runs, Runs]]:
    """What the job or the template chose, each with where it comes from."""
    options, design = beam.design.options, work.given.design
    named = "as the job sets it" if design["method"] else f"from the combinations {work.given.actions.name}"
    if options.braced == "continuous":
        top = "held all along, as the job sets it"
    elif options.braced == "at beams":
        top = "braced where beams come in, as the job sets it"
    elif options.unbraced_length is None:
        top = "braced at supports alone (the job sets no unbraced_length)"
    else:
        top = (
            f"braced every {work.show(options.unbraced_length, 'm', exact=True)} from the start of each span"
        )
    factor = "from the moment diagram" if options.diagram_factor is None else f"{options.diagram_factor:g}"
    bearing = work.show(options.bearing_length * 1000, "mm")
    return [
        ("Method", f"{options.method}, {named}"),
        ("Top flange", top),
        ("Bottom flange", "braced with the top" if options.bottom_with_top else "braced at supports alone"),
        ({"math": r"C_{\text{b}}"}, f"{factor}; 1 for cantilevers"),
        (
            "Supports, point loads",
            f"on the flanges over {bearing}"
            + ("" if design["bearing_length"] else " (the template's choice)")
            if options.seated
            else "connected in the web: no check of J10",
        ),
        (
            "Deflection",
            f"span / {options.live_limit:g} variable load alone, span / {options.total_limit:g} service "
            "combinations; cantilevers count twice",
        ),
    ]


def state_bending(work: Work, beam: SteelBeam) -> None:
    """Limits once, a table of all segments, and line by line the one that is used most."""
    sheet, design = work.sheet, beam.design
    sheet.section("Bending and lateral-torsional buckling")
    if not design.covered:
        sheet.text(
            "The web is not compact: F2 and F3 do not hold and no bending strength is given.", role="unsafe"
        )
        return
    governing = beam.governing
    basis = lines.state_bending_basis(
        sheet,
        design.slenderness,
        design.options.method,
        beam.basis["steel"],
        beam.basis["shape"],
        beam.basis["slender"],
        inelastic=governing.strength.zone == "inelastic",
        lengths=any(not check.segment.held for check in design.bending),
    )
    if len(design.bending) > 1:
        _segments(work, beam)
    _state_segment(work, beam, basis, governing)
    _figure(work, beam)


ZONES: dict[Zone, str] = {
    "yielding": "yielding",
    "inelastic": "inelastic buckling",
    "elastic": "elastic buckling",
}


def _segments(work: Work, beam: SteelBeam) -> None:
    """Every stretch between braced points with its worst arrangement."""
    rows = []
    for check in beam.design.bending:
        segment = check.segment
        rows.append(
            [
                span_words(work, segment.span.number),
                f"{work.show(segment.start, 'm')} to {work.show(segment.end, 'm')}",
                "sagging" if check.sagging else "hogging",
                work.show(check.demand, "kN*m"),
                "held" if segment.held else work.show(segment.unbraced, "m"),
                "–" if segment.held else f"{check.diagram_factor:.3f}",
                ZONES[check.strength.zone],
                work.show(check.available, "kN*m"),
                f"{check.ratio:.2f}",
                check.arrangement.combination.name,
            ]
        )
    work.sheet.table(
        [
            ("", "left"),
            ("from, to", "left"),
            ("moment", "left"),
            ({"math": r"M_{\text{r}}"}, "right"),
            ({"math": r"L_{\text{b}}"}, "right"),
            ({"math": r"C_{\text{b}}"}, "right"),
            ("limit", "left"),
            ({"math": r"M_{\text{c}}"}, "right"),
            ("ratio", "right"),
            ("under", "left"),
        ],
        rows,
        caption="Stretches between braced points, each under its worst arrangement of load: required moment, "
        "unbraced length, factor for the diagram, available strength. The one in bold governs and is worked "
        "out below; the others go by the same formulas.",
        strong_rows=[beam.design.bending.index(beam.governing)],
    )


def arrangement_words(work: Work, arrangement: Arrangement) -> str:
    """A combination and where its movable load stands, in words."""
    always, placed = work.study.analysed.factors(arrangement.combination)
    everything = tuple(float(value) for value in always + placed)
    name = arrangement.combination.name
    if not placed.any():
        return name
    if arrangement.factors == everything:
        return f"{name}, every span loaded"
    sense = "sagging" if arrangement.sense > 0 else "hogging"
    return f"{name}, placed for most {sense} at {work.show(arrangement.at, 'm')}"


def _state_segment(work: Work, beam: SteelBeam, basis: lines.BendingBasis, check: BendingCheck) -> None:
    sheet, segment, options = work.sheet, check.segment, beam.design.options
    name = bending_name(work, check)
    if len(beam.design.bending) > 1:
        sheet.subsection(
            f"{name[0].upper()}{name[1:]}: {work.show(segment.start, 'm')} to {work.show(segment.end, 'm')}"
        )
    words = arrangement_words(work, check.arrangement)

    def moment(symbol: str, value: float, says: str, word: str, origin: str) -> Line:
        return sheet.take(symbol, abs(value), "kN*m", says, origin, given=False, word=word)

    says = (
        f"Largest {'sagging' if check.sagging else 'hogging'} moment, at {work.show(check.at, 'm')}; {words}"
    )
    stated = work.stated("moment", check.demand)
    if stated is not None:
        demand = sheet.hence("M_r", stated, "kN*m", says, word="required moment strength")
    else:
        demand = moment("M_r", check.demand, says, "required moment strength", "analysis")
    zone, unbraced, factor = check.strength.zone, None, None
    if segment.held:
        sheet.text("The compression flange is held all along: no lateral-torsional buckling.", role="note")
    else:
        unbraced = _unbraced(work, check)
    if zone != "yielding":
        if segment.free:
            factor = sheet.take("C_b", 1.0, "1", "Cantilever, its end not braced", f"{AISC} F1")
        elif options.diagram_factor is not None:
            origin = f"beam {work.given.mark} design.Cb"
            factor = sheet.take("C_b", options.diagram_factor, "1", "As the job sets it", origin)
        else:
            first, middle, last = (
                moment(f"M_{index}", value, f"At {place}", f"moment at {place}", "analysis, same loads")
                for index, value, place in (
                    ("A", check.moments.quarter, "the first quarter of the segment"),
                    ("B", check.moments.middle, "the middle of the segment"),
                    ("C", check.moments.three_quarters, "the third quarter of the segment"),
                )
            )
            larger = abs(check.moments.largest.value) > check.demand * (1 + 1e-9)
            factor = lines.state_diagram_factor(sheet, lines.Moments(demand, first, middle, last, larger))
    nominal = lines.state_bending(
        sheet, zone, basis, beam.basis["steel"], beam.basis["shape"], unbraced, factor
    )
    yields = (
        "; the length is at most that for yielding" if nominal is basis.plastic and not segment.held else ""
    )
    line = sheet.require(
        demand <= available(basis.factor, nominal, options.method),
        f"Required against available: {name}{yields}",
        f"{AISC} F1",
    )
    work.checks.append((name, line))


def _unbraced(work: Work, check: BendingCheck) -> Line:
    """L_b: the span itself, or a part of it."""
    segment = check.segment
    if segment.unbraced == segment.span.length:
        words = "from support to support" if segment.span.supported else "from the support to the tip"
        return work.sheet.hence(
            "L_b", work.lines["span", segment.span.number], "m", f"Unbraced length, {words}", f"{AISC} F1"
        )
    if work.given.design["braced"] == "at beams":
        words = "between beams that come in"
    else:
        words = "between braced points"
    return work.sheet.take(
        "L_b",
        segment.unbraced,
        "m",
        f"Unbraced length, {words}",
        f"beam {work.given.mark} design.{'braced' if 'beams' in words else 'unbraced_length'}",
        given=False,
    )


def _figure(work: Work, beam: SteelBeam) -> None:
    """The envelope of moments with what each stretch can carry."""
    figure = strength_figure(
        work,
        "moment",
        _capacities(beam),
        governing=[
            (check.at, sign * check.demand, sign * check.available)
            for check in beam.bending
            for sign in (1.0 if check.sagging else -1.0,)
        ],
    )
    work.sheet.figure(
        figure,
        "Envelope of the strength combinations, and what each stretch between braced points carries under "
        "its own worst arrangement.",
    )


def _capacities(beam: SteelBeam) -> list[tuple[float, float, float, float]]:
    """Stretches with what they carry sagging and hogging; where nothing was asked, with a uniform moment."""
    design = beam.design
    found = []
    for segment in design.segments:
        if segment.flange == "bottom":
            continue
        below = next(
            (
                each
                for each in design.segments
                if each.flange == "bottom" and each.span.number == segment.span.number
            ),
            segment,
        )
        found.append(
            (segment.start, segment.end, design.carries(segment, True), design.carries(below, False))
        )
    return found
