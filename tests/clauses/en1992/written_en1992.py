"""A designed beam written as lines, without a job, a template or figures."""

from __future__ import annotations

from dataclasses import dataclass, field

from calcpack.clauses.en1992.case import BeamCase
from calcpack.clauses.en1992.design import Design, design_beam
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
from calcpack.clauses.en1992.write_deflection import write_curvature, write_span_depth
from calcpack.clauses.en1992.write_materials import StrengthLines, millimetres, write_strengths
from calcpack.clauses.en1992.write_service import write_crack, write_cracked, write_creep
from calcpack.clauses.en1992.write_shear import ShearLines, write_along, write_shear, write_stirrup_limits
from calcpack.sheet import Line, Sheet


@dataclass
class Written:
    """A beam's sheet; requirements by name."""

    design: Design
    sheet: Sheet
    strength: StrengthLines
    size: SizeLines
    faces: dict[str, FaceLines]
    shear: ShearLines
    checks: dict[str, Line] = field(default_factory=dict)

    def line(self, symbol: str) -> Line:
        """The last line of a symbol."""
        return [each for each in self.sheet.lines.values() if each.symbol == symbol][-1]

    def has(self, symbol: str) -> bool:
        """Whether there is a line of a symbol."""
        return any(each.symbol == symbol for each in self.sheet.lines.values())

    def sides(self, name: str) -> tuple[float, float]:
        """Demand and capacity of a requirement."""
        check = self.checks[name].check(name)
        return check["demand"], check["capacity"]

    def requirement(self, says: str) -> Line:
        """The requirement that begins with some words."""
        return next(each for each in self.sheet.lines.values() if each.says.startswith(says))

    @property
    def words(self) -> str:
        """Every text on the sheet."""
        return str(self.sheet.blocks)


def start(case: BeamCase, design: Design) -> tuple[Sheet, StrengthLines, SizeLines, dict[str, FaceLines]]:
    """Strengths, sizes and bars."""
    sheet = Sheet("B1")
    sheet.section("Design")
    strength = write_strengths(sheet, case.strength, case.national, "material c")
    own = case.sagging

    def size(symbol: str, value: float, says: str) -> Line:
        return sheet.take(symbol, millimetres(value), "mm", says, "section s", word=says)

    width, depth = size("b", own.web, "width of the beam"), size("h", own.depth, "depth of the beam")
    flange = size("h_f", own.flange, "depth of the flange") if own.width > own.web else None
    cover, stirrup = (
        size("c_nom", case.cover, "cover"),
        size("phi_w", design.shear.stirrups.bar.diameter, "leg"),
    )
    inset = sheet.hence("c", cover + stirrup, "mm", "Cover of the bars", "geometry", word="cover of the bars")
    aggregate = size("d_g", case.aggregate, "largest aggregate")
    sizes = SizeLines(width, depth, flange, cover, stirrup, inset, aggregate)
    block = size("b_eff", own.width, "width of the flange") if flange is not None else width
    faces = {"sag": write_bars(sheet, design.bottom, "sag", sizes, block, "chosen")}
    if design.top:
        faces["hog"] = write_bars(sheet, design.top, "hog", sizes, width, "chosen")
    faces["end"] = write_bars(sheet, design.through, "end", sizes, width, "chosen")
    return sheet, strength, sizes, faces


def written(case: BeamCase) -> Written:
    """Everything the clauses write about a beam."""
    design = design_beam(case)
    sheet, strength, size, faces = start(case, design)
    found: list[tuple[str, Line]] = []
    used = [tag for tag, face in (("sag", case.sag), ("hog", design.top)) if face]
    for tag in used:
        other = faces["end"] if tag == "sag" else faces["sag"]
        found += write_bending(sheet, faces[tag], strength, size, "analysis", other)
        found += write_amount(sheet, faces[tag], strength, size)
        found += write_spacing(sheet, faces[tag], size)
    if case.end_moment:
        found += write_bending(sheet, faces["end"], strength, size, "beta_1")
    found += write_most(sheet, [faces[tag] for tag in used], size)
    found += write_cover(sheet, design, size, [faces[tag] for tag in used])
    place = design.shear.places[design.shear.governing]
    first = case.supports[place.support].end or "hog" not in faces
    effective = min((faces[tag].effective for tag in used), key=lambda line: line.value)
    shear, checks = write_shear(
        sheet, design, strength, size, faces["sag" if first else "hog"], effective, "chosen"
    )
    found += checks + write_along(sheet, design)
    found += write_stirrup_limits(sheet, design, strength, size, shear, effective)
    found += write_end(sheet, design, faces["sag"], strength, shear)
    if design.zones:
        good = abs(design.stopped.bond / 2.25 / case.strength.fctd - 0.7) > 0.1
        write_bond(sheet, faces["hog"], strength, strength.fyd, design.stopped, good=good, tag="t")
    result = Written(design, sheet, strength, size, faces, shear, dict(found))
    _serve(result, used)
    return result


def _serve(result: Written, used: list[str]) -> None:
    sheet, design, strength, size = result.sheet, result.design, result.strength, result.size
    creep = write_creep(sheet, design, strength, "design.creep")
    for tag in used:
        lines = result.faces[tag]
        section = write_cracked(sheet, lines, size, creep)
        if lines.face.lasting > 0:
            write_crack(sheet, lines, strength, size, section, "G")
        for each in design.deflections:
            if design.case.spans[each.number].overhang is (tag == "hog"):
                moment = sheet.take(
                    "M_qp,s", each.moment, "kN*m", "Moment", "analysis", word=f"M {each.number}"
                )
                write_curvature(sheet, design, lines, strength, section, moment, "design.shrinkage")
                break
        for found in design.span_depths:
            part = design.case.spans[found.number]
            if part.overhang is (tag == "hog"):
                span = sheet.take("L", part.length, "m", "Span", "grid", word=f"span {found.number}")
                write_span_depth(sheet, lines, strength, found, span, result.line(f"M_Ed,{tag}"))
