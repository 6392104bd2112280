"""Cracks and deflections of a concrete beam after EN 1992-1-1."""

from __future__ import annotations

from collections.abc import Mapping

from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.faces import Face
from calcpack.clauses.en1992.national import STANDARD
from calcpack.clauses.en1992.service import SpanDeflection
from calcpack.clauses.en1992.write_bending import FaceLines, SizeLines
from calcpack.clauses.en1992.write_deflection import limit_term, write_curvature, write_span_depth
from calcpack.clauses.en1992.write_materials import StrengthLines, millimetres
from calcpack.clauses.en1992.write_service import (
    ElasticLines,
    write_crack,
    write_cracked,
    write_creep,
)
from calcpack.notebook.sections.concrete_en1992.figures import deflection_figure
from calcpack.notebook.work import StatedDeflection, Work
from calcpack.sheet import Expression, Line, formula

Checks = list[tuple[str, Line]]
WHERE = {"sag": "span", "hog": "support"}


def write_service(
    work: Work,
    design: Design,
    faces: Mapping[str, FaceLines],
    strength: StrengthLines,
    size: SizeLines,
    combination: str,
) -> Checks:
    """Crack width, span over depth, deflection from curvatures.

    Returns
    -------
    list of (name, requirement)
    """
    sheet = work.sheet
    creep = write_creep(sheet, design, strength, f"beam {work.given.mark} design.creep")
    elastic: dict[str, ElasticLines] = {}

    def section(tag: str) -> ElasticLines:
        if tag not in elastic:
            with sheet.repeating():
                elastic[tag] = write_cracked(sheet, faces[tag], size, creep)
        return elastic[tag]

    checks: Checks = []
    cracked = _cracked(design)
    if cracked:
        limit = sheet.take(
            "w_max",
            millimetres(design.case.crack_limit),
            "mm",
            "Largest crack width allowed",
            f"beam {work.given.mark} design.crack_width",
            f"{STANDARD}, 7.3.1(5)",
            word="largest crack width",
        )
        with sheet.repeating():
            # the wider crack in full, the other in short
            for tag in sorted(cracked, key=lambda each: -round(cracked[each].crack.width, 12)):
                width = write_crack(sheet, faces[tag], strength, size, section(tag), combination)
                line = sheet.require(
                    width <= limit, f"Crack width, {WHERE[tag]}", f"{STANDARD}, 7.3.1(5), 7.3.4"
                )
                checks.append((f"crack width, {WHERE[tag]}", line))
    _span_depth(work, design, faces, strength)
    found = max(
        design.deflections, key=lambda each: round(each.total / each.limit if each.limit else each.total, 12)
    )
    tag = "hog" if _hogs(design, found) else "sag"
    lasting = sheet.take(
        "M_qp,s",
        found.moment,
        "kN*m",
        f"Largest moment of {_span_words(design, found)}, {combination}",
        "analysis",
        given=False,
        word="moment of the span, quasi-permanent combination",
    )
    origin = f"beam {work.given.mark} design.shrinkage"
    with sheet.repeating():
        write_curvature(sheet, design, faces[tag], strength, section(tag), lasting, origin)
    return checks + _deflection(work, design, found, combination)


def _hogs(design: Design, found: SpanDeflection) -> bool:
    return design.top is not None and (design.case.spans[found.number].overhang or not design.case.sag)


def _cracked(design: Design) -> dict[str, Face]:
    found = {"sag": design.bottom} if design.case.sag and design.bottom.lasting > 0 else {}
    if design.top and design.top.lasting > 0:
        found["hog"] = design.top
    return found


def _span_depth(work: Work, design: Design, faces: Mapping[str, FaceLines], strength: StrengthLines) -> None:
    if not design.span_depths:
        return
    found = max(design.span_depths, key=lambda each: round(each.actual / each.limit, 9))
    tag = "hog" if design.case.spans[found.number].overhang else "sag"
    moments = (line for line in work.sheet.lines.values() if line.symbol == f"M_Ed,{tag}")
    actual, limit = write_span_depth(
        work.sheet, faces[tag], strength, found, work.lines["span", found.number], next(moments, None)
    )
    within = actual.value <= limit.value * (1 + 1e-9)
    more = " (the span that comes closest)" if len(design.span_depths) > 1 else ""
    work.sheet.text(
        [
            f"Span over depth{more}: ",
            actual.math,
            f" = {actual.shown} ",
            {"math": r"\le" if within else ">"},
            " ",
            limit.math,
            f" = {limit.shown}, so that 7.4.2 asks for no calculation; one follows all the same."
            if within
            else f" = {limit.shown}: the deflection is to be worked out, as 7.4.1(6) allows.",
        ],
        role="note",
    )


def _deflection(work: Work, design: Design, found: SpanDeflection, combination: str) -> Checks:
    sheet, case = work.sheet, design.case
    rows = []
    for each in design.deflections:
        rows.append(
            [
                _span_words(design, each),
                work.show(each.moment, "kN*m"),
                f"{each.zeta:.3f}",
                work.show(each.total * 1e3, "mm"),
                work.show(each.at, "m"),
                work.show(each.limit * 1e3, "mm") if each.limit else "–",
                work.show(each.live * 1e3, "mm") if each.live is not None else "–",
                work.show(each.live_limit * 1e3, "mm") if each.live_limit else "–",
            ]
        )
    heads = ["final", "at", "limit", "live load", "limit"]
    kept = 8
    if all(each.live is None for each in design.deflections):
        kept = 6
    elif not any(each.live_limit for each in design.deflections):
        kept = 7
    rows, heads = [row[:kept] for row in rows], heads[: kept - 3]
    sheet.table(
        [
            ("span", "left"),
            ("M", "right"),
            (formula(r"\zeta"), "right"),
            *((head, "right") for head in heads),
        ],
        rows,
        caption="Curvatures as above at 400 places of every span, from the moments there, integrated twice "
        f"(7.4.3(7)): quasi-permanent combination, φ = {case.creep:g}, shrinkage {case.shrinkage * 1e3:g} ‰."
        + (
            " Live load: what it adds, short term, sections cracked by dead and live load."
            if len(heads) > 3
            else ""
        ),
    )
    checks: Checks = []
    live_factor, total_factor = case.limits
    total = sheet.take(
        "delta",
        found.total * 1e3,
        "mm",
        f"Final deflection of {_span_words(design, found)}",
        "curvatures integrated",
        f"{STANDARD}, 7.4.3(7)",
        given=False,
        word="final deflection, creep and shrinkage included",
    )
    lasting = f"{combination}, creep and shrinkage"
    where = f", {_span_words(design, found)}" if len(design.deflections) > 1 else ""
    work.deflections = (StatedDeflection("total_mm", f"deflection, final{where}", found.at, lasting, total),)
    if total_factor:
        line = sheet.require(
            total <= _limit(work, design, found.number, total_factor),
            f"Final deflection, {_reach_words(design, found)} over {total_factor:g}",
            f"{STANDARD}, 7.4.1(4)",
        )
        checks.append(("deflection, total", line))
    lively = [each for each in design.deflections if each.live is not None]
    if lively:
        most = max(lively, key=lambda each: round((each.live or 0.0) / (each.live_limit or 1.0), 12))
        live = sheet.take(
            "delta_live",
            (most.live or 0.0) * 1e3,
            "mm",
            f"What live load adds to it, short term, {_span_words(design, most)}",
            "curvatures integrated",
            f"{STANDARD}, 7.4.3",
            given=False,
            word="deflection that live load adds",
        )
        where = f", {_span_words(design, most)}" if len(design.deflections) > 1 else ""
        work.deflections += (
            StatedDeflection("live_mm", f"deflection, live load{where}", most.live_at, "short term", live),
        )
        if live_factor:
            line = sheet.require(
                live <= _limit(work, design, most.number, live_factor),
                f"Live-load deflection, {_reach_words(design, most)} over {live_factor:g}",
                f"{STANDARD}, 7.4.1(5)",
            )
            checks.append(("deflection, live load", line))
    sheet.figure(*deflection_figure(work, design))
    return checks


def _span_words(design: Design, found: SpanDeflection) -> str:
    return f"{'overhang' if design.case.spans[found.number].overhang else 'span'} {found.number + 1}"


def _reach_words(design: Design, found: SpanDeflection) -> str:
    return "twice the overhang" if design.case.spans[found.number].overhang else "span"


def _limit(work: Work, design: Design, number: int, factor: float) -> Expression:
    span = work.lines["span", number]
    return limit_term(span, design.case.spans[number].overhang, factor)
