"""The design sections of a concrete beam after EN 1992-1-1."""

from __future__ import annotations

from dataclasses import dataclass, field, replace

from calcpack.clauses.en1992.design import Design, design_beam
from calcpack.clauses.en1992.faces import Face
from calcpack.clauses.en1992.model import LIMITS
from calcpack.clauses.en1992.national import STANDARD, National
from calcpack.clauses.en1992.write_anchorage import write_bond, write_cover, write_end
from calcpack.clauses.en1992.write_bending import (
    FaceLines,
    SizeLines,
    write_amount,
    write_bars,
    write_bending,
    write_most,
    write_spacing,
)
from calcpack.clauses.en1992.write_materials import StrengthLines, millimetres, write_flange, write_strengths
from calcpack.clauses.en1992.write_shear import (
    ShearLines,
    write_along,
    write_shear,
    write_stirrup_limits,
)
from calcpack.notebook.sections.concrete_en1992.case import Particulars, particulars
from calcpack.notebook.sections.concrete_en1992.figures import (
    bars_figure,
    moment_figure,
    section_figures,
    shear_figure,
)
from calcpack.notebook.sections.concrete_en1992.service import write_service
from calcpack.notebook.sections.concrete_en1992.words import (
    bottom_words,
    stirrup_words,
    top_words,
    zone_words,
)
from calcpack.notebook.sections.rehearsal import ratio_rows, rehearsal_of
from calcpack.notebook.work import Work
from calcpack.sheet import Line, formula

SUBTITLES = {"sag": "Span, bottom bars in tension", "hog": "Support, top bars in tension"}
SHOWN = ("no deep beam", "bending", "moments along", "shear", "anchorage", "crack width", "deflection")


@dataclass
class ConcreteBeam:
    """A beam on its way through the design sections.

    Parameters
    ----------
    work : Work
    about : Particulars
    design : Design
    strength, size, shear
        Lines that later sections draw on, once they are written.
    faces : dict
        Lines of the bars: "sag" (bottom), "hog" (all top bars), "end" (top bars that run through).
    rehearsed : list of (name, requirement)
        What the sections will find, for the pages before them.
    """

    work: Work
    about: Particulars
    design: Design
    strength: StrengthLines | None = None
    size: SizeLines | None = None
    shear: ShearLines | None = None
    faces: dict[str, FaceLines] = field(default_factory=dict)
    rehearsed: list[tuple[str, Line]] = field(default_factory=list)

    @property
    def place(self) -> str:
        """How an origin begins."""
        return f"beam {self.work.given.mark}"

    def origin(self, key: str) -> str:
        """Where bars come from."""
        given = self.design.case.given
        return f"{self.place} design.{key}" if getattr(given, key) else "chosen"

    def keep(self, checks: list[tuple[str, Line]]) -> None:
        """Requirements on the beam."""
        self.work.checks.extend(checks)

    @property
    def tags(self) -> list[tuple[str, Face]]:
        """Faces with moments of their own."""
        design = self.design
        found = [("sag", design.bottom)] if design.case.sag else []
        return [*found, ("hog", design.top)] if design.top else found


def begin(work: Work) -> ConcreteBeam:
    """Work the beam out, bars chosen where the job gives none, before the first page tells of it.

    Raises
    ------
    CalcpackError
        The beam is no concrete rectangle or tee of EN 1992-1-1, or a design key does not fit.
    """
    about = particulars(work)
    beam = ConcreteBeam(work, about, design_beam(about.case))
    draft = rehearsal_of(work)
    rehearsed = replace(beam, work=draft)
    for state in (state_bending, state_shear, state_service):
        state(rehearsed)
    work.deflections = draft.deflections
    return replace(beam, rehearsed=draft.checks)


def state_shown(beam: ConcreteBeam) -> None:
    """What the sheet shows, with ratios; how bars came about; their layout."""
    checks, sheet, design = beam.rehearsed, beam.work.sheet, beam.design
    sheet.section("What is shown, and the reinforcement")
    listed = [each for each in checks if each[0].startswith(SHOWN)]
    others = [line.check(name) for name, line in checks if not name.startswith(SHOWN)]
    failed = [check["name"] for check in others if not check["passes"]]
    sheet.items(
        [
            bottom_words(beam.work, design),
            " ".join(top_words(beam.work, design)),
            stirrup_words(beam.work, design),
            _national_words(beam.about.national),
        ]
    )
    with sheet.columns([10, 13]) as column:
        for figure, caption in section_figures(beam.work, design):
            sheet.figure(figure, caption)
        column()
        sheet.ratios(ratio_rows(beam.work, listed))
        if failed:
            sheet.text(f"Not satisfied besides: {', '.join(failed)}.", role="unsafe")
        else:
            sheet.text(
                f"{len(others)} further requirements are satisfied: "
                f"{', '.join(check['name'] for check in others)}.",
                role="note",
            )
    sheet.figure(*bars_figure(beam.work, design))


def _national_words(national: National) -> str:
    """The set of national parameters, what it was taken from, and every value that is not the recommended."""
    place = f" ({national.file}, beside the job file)" if national.file else ""
    words = f"Nationally determined parameters: {national.name}{place}; {national.source}."
    if differing := [each.words for each in national.differing]:
        words += f" Not as recommended: {'; '.join(differing)}."
    elif national.file:
        words += " Every value is the recommended one."
    return f"{words} The clauses hold for {_limits()}."


def _limits() -> str:
    return " and ".join(f"{limit.symbol.replace('_', '')} from {limit.words}" for limit in LIMITS.values())


def state_bending(beam: ConcreteBeam) -> None:
    """Strengths, effective flange, bars, bending, least and most reinforcement, spacing, cover."""
    work, sheet, design, case = beam.work, beam.work.sheet, beam.design, beam.design.case
    material = work.given.material
    assert material is not None
    sheet.section("Bending")
    sheet.text(f"Clauses without the name of a standard are those of {STANDARD}:2004 + AC:2010.", role="note")
    changed = {
        key: f"{beam.place} design.national_values.{key}"
        for key, value in work.given.design["national_values"].items()
        if value is not None
    }
    if work.given.design["alpha_cc"] is not None:
        changed["alpha_cc"] = f"{beam.place} design.alpha_cc"
    strength = write_strengths(sheet, case.strength, case.national, f"material {material.key}", changed)
    size = _size(beam)
    blocks = _blocks(beam, size)
    beam.strength, beam.size = strength, size
    checks: list[tuple[str, Line]] = []
    sheet.subsection("Bars and effective depths")
    with sheet.repeating():
        beam.faces["sag"] = write_bars(
            sheet, design.bottom, "sag", size, blocks["sag"], beam.origin("bottom")
        )
        if design.top:
            beam.faces["hog"] = write_bars(sheet, design.top, "hog", size, blocks["hog"], beam.origin("top"))
        if not design.top or design.top.bars.count != design.through.bars.count:
            through = beam.origin("top")
            beam.faces["end"] = write_bars(sheet, design.through, "end", size, blocks["hog"], through)
        # the section that is used most stands in full, the other in short
        for tag, _ in sorted(beam.tags, key=lambda each: -round(each[1].moment / each[1].bending.moment, 9)):
            sheet.subsection(SUBTITLES[tag])
            checks += _bending(beam, tag)
        if case.end_moment:
            sheet.subsection("End supports, top bars in tension")
            checks += _end_support(beam, strength, size)
    sheet.subsection("Both faces")
    checks += _not_deep(beam, size)
    checks += write_most(sheet, [beam.faces[tag] for tag, _ in beam.tags], size)
    checks += write_cover(sheet, design, size, list(beam.faces.values()))
    beam.keep(checks)


def _bending(beam: ConcreteBeam, tag: str) -> list[tuple[str, Line]]:
    """Bending, least reinforcement and spacing of a face."""
    assert beam.strength is not None
    assert beam.size is not None
    sheet, lines = beam.work.sheet, beam.faces[tag]
    return [
        *write_bending(sheet, lines, beam.strength, beam.size, "analysis, envelope", _other(beam, tag)),
        *write_amount(sheet, lines, beam.strength, beam.size),
        *write_spacing(sheet, lines, beam.size),
    ]


def _other(beam: ConcreteBeam, tag: str) -> FaceLines | None:
    if tag == "hog":
        return beam.faces["sag"]
    return beam.faces.get("end") or beam.faces.get("hog")


def _end_support(beam: ConcreteBeam, strength: StrengthLines, size: SizeLines) -> list[tuple[str, Line]]:
    """What an end support that is taken to turn freely may hold all the same."""
    sheet = beam.work.sheet
    share = beam.design.case.national["beta_1"]
    origin = f"{share:g} of the spans' largest moment, 9.2.1.2(1)"
    lines = beam.faces.get("end")
    if lines is not None:
        found = write_bending(sheet, lines, strength, size, origin)
        return found + write_amount(sheet, lines, strength, size)
    moment = sheet.take(
        "M_Ed,end",
        beam.design.case.end_moment,
        "kN*m",
        "Moment that an end support may still hold",
        origin,
        given=False,
    )
    resistance = next(line for line in sheet.lines.values() if line.symbol == "M_Rd,hog")
    line = sheet.require(
        moment <= resistance, "Bending, end support, all top bars running through", f"{STANDARD}, 9.2.1.2(1)"
    )
    return [("bending, end support", line)]


def _not_deep(beam: ConcreteBeam, size: SizeLines) -> list[tuple[str, Line]]:
    """A span shorter than three depths is no beam to these clauses: said only where it is so."""
    spans = beam.design.case.spans
    shortest = min(
        (number for number, span in enumerate(spans) if not span.overhang),
        key=lambda number: spans[number].length,
        default=None,
    )
    if shortest is None or 3 * size.depth.value <= spans[shortest].length * 1e3 * (1 + 1e-9):
        return []
    line = beam.work.sheet.require(
        beam.work.lines["span", shortest] >= 3 * size.depth,
        "The beam is not a deep one: these clauses do not hold",
        f"{STANDARD}, 5.3.1(3)",
    )
    return [("no deep beam", line)]


def _size(beam: ConcreteBeam) -> SizeLines:
    work, sheet, design = beam.work, beam.work.sheet, beam.work.given.design
    section = work.given.section
    assert section is not None

    def size(key: str, symbol: str, says: str) -> Line:
        if (known := work.lines.get(key)) is not None:
            return known
        value = millimetres(section.dimensions[key])
        return sheet.take(symbol, value, "mm", says, f"section {section.key} {key}")

    def detail(symbol: str, value: float, says: str, origin: str, word: str, cite: str = "") -> Line:
        return sheet.take(symbol, millimetres(value), "mm", says, origin, cite, word=word)

    width, depth = size("width", "b", "Width of the beam"), size("depth", "h", "Depth of the beam")
    flange = size("flange_depth", "h_f", "Depth of the flange") if section.shape == "tee" else None
    given = design["cover"] is not None
    cover = detail(
        "c_nom",
        beam.design.case.cover,
        "Nominal cover of the stirrups",
        f"{beam.place} design.cover" if given else f"chosen for {design['exposure']}, 30 mm at least",
        "nominal cover",
    )
    stirrup = detail(
        "phi_w",
        beam.design.shear.stirrups.bar.diameter,
        "Diameter of the stirrups",
        beam.origin("stirrups"),
        "diameter of stirrups",
        beam.design.shear.stirrups.bar.cite,
    )
    inset = sheet.hence(
        "c", cover + stirrup, "mm", "Cover of the bars", "geometry", word="cover of the longitudinal bars"
    )
    origin = f"{beam.place} design.aggregate"
    aggregate = detail("d_g", design["aggregate"], "Largest aggregate", origin, "largest aggregate")
    return SizeLines(width, depth, flange, cover, stirrup, inset, aggregate)


def _blocks(beam: ConcreteBeam, size: SizeLines) -> dict[str, Line]:
    """Width at the face in compression, span and support."""
    if not beam.about.flanges:
        return {"sag": size.width, "hog": size.width}
    section = beam.work.given.section
    assert section is not None
    origin = "framing plan; neighbours as wide as this beam"
    if not section.effective_flange:
        origin = f"section {section.key} flange_width"
    found: list[Line] = []
    known: dict[str, Line] = {}
    for tag, flange in zip(("sag", "hog"), beam.about.flanges, strict=True):
        if tag == "hog" and beam.design.top is None:
            continue
        lengths = [(share, beam.work.lines["span", number]) for share, number in flange.lengths]
        found.append(
            write_flange(beam.work.sheet, tag, flange.words, size.width, lengths, flange.sides, origin, known)
        )
    return {"sag": found[0], "hog": size.width}


def state_shear(beam: ConcreteBeam) -> None:
    """Shear, stirrups, shift rule, moments along the beam, anchorage."""
    work, sheet, design = beam.work, beam.work.sheet, beam.design
    assert beam.strength is not None
    assert beam.size is not None
    strength, size = beam.strength, beam.size
    sheet.section("Shear and anchorage")
    place = design.shear.places[design.shear.governing]
    end = design.case.supports[place.support].end
    longitudinal = beam.faces["sag"] if end or "hog" not in beam.faces else beam.faces["hog"]
    effective = min((beam.faces[tag].effective for tag, _ in beam.tags), key=lambda line: line.value)
    beam.shear, checks = write_shear(
        sheet, design, strength, size, longitudinal, effective, beam.origin("stirrups")
    )
    _places_table(beam)
    checks += write_along(sheet, design)
    checks += write_stirrup_limits(sheet, design, strength, size, beam.shear, effective)
    checks += write_end(sheet, design, beam.faces["sag"], strength, beam.shear)
    if design.zones:
        _stopped(beam, strength)
    with sheet.columns([1, 1]) as column:
        sheet.figure(*moment_figure(work, design))
        column()
        sheet.figure(*shear_figure(work, design))
    beam.keep(checks)


def _places_table(beam: ConcreteBeam) -> None:
    work, design = beam.work, beam.design
    shear, strong = design.shear, design.shear.governing
    rows = []
    for place, spacing in zip(shear.places, shear.spacings, strict=True):
        ties, struts = shear.capacity(spacing)
        rows.append(
            [
                f"{design.case.supports[place.support].words}, {place.side}",
                work.show(place.v_face, "kN"),
                f"face, {place.why}" if place.why else work.show(place.at, "m"),
                work.show(place.v_at, "kN"),
                work.show(spacing * 1e3, "mm", exact=True),
                work.show(ties, "kN"),
                work.show(struts, "kN"),
                f"{max(place.v_at / ties, place.v_face / struts):.2f}",
            ]
        )
    work.sheet.table(
        [
            ("support", "left"),
            ("V at face", "right"),
            ("checked at", "right"),
            ("V there", "right"),
            ("spacing", "right"),
            (formula(r"V_{\text{Rd,s}}"), "right"),
            (formula(r"V_{\text{Rd,max}}"), "right"),
            ("ratio", "right"),
        ],
        rows,
        caption=f"Shear at every support; {zone_words(work, design)}.",
        strong_rows=[strong],
    )


def _stopped(beam: ConcreteBeam, strength: StrengthLines) -> None:
    """Anchorage of the top bars that do not run through."""
    lines, sheet = beam.faces["hog"], beam.work.sheet
    found = beam.design.stopped
    good = abs(found.bond - _good_bond(beam)) <= 1e-9 * found.bond
    length = write_bond(sheet, lines, strength, strength.fyd, found, good=good, tag="t")
    zones = "; ".join(
        f"{beam.work.show(zone.start, 'm')} to {beam.work.show(zone.end, 'm')}" for zone in beam.design.zones
    )
    sheet.text(
        [
            "Top bars that do not run through lie from ",
            zones,
            ": as far as the moment shifted by ",
            {"math": "a_{\\text{l}}"},
            " needs them, and ",
            length.math,
            " beyond (9.2.1.3).",
        ]
    )


def _good_bond(beam: ConcreteBeam) -> float:
    from calcpack.clauses.en1992.anchorage import bond_strength

    assert beam.design.top is not None
    return bond_strength(beam.design.top.bars.bar.diameter, True, beam.design.case.strength)


def state_service(beam: ConcreteBeam) -> None:
    """Crack widths, span over depth, deflections."""
    assert beam.strength is not None
    assert beam.size is not None
    beam.work.sheet.section("Cracks and deflection")
    combination = beam.about.lasting.combination.name
    beam.keep(write_service(beam.work, beam.design, beam.faces, beam.strength, beam.size, combination))
