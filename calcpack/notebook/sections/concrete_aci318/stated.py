"""The design sections of a concrete beam to ACI 318-19."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

from calcpack.clauses.aci318.flange import state_flange, state_given_flange
from calcpack.clauses.aci318.flexure import Demand, state_bending
from calcpack.clauses.aci318.limits import limit_words
from calcpack.clauses.aci318.materials import Size, state_cover, state_materials, state_not_deep
from calcpack.figures import section_figure
from calcpack.notebook.sections.checks import state_checks
from calcpack.notebook.sections.concrete_aci318.bars import state_bars
from calcpack.notebook.sections.concrete_aci318.deflection import state_deflections
from calcpack.notebook.sections.concrete_aci318.design import Design, settle, shortest
from calcpack.notebook.sections.concrete_aci318.faces import Face
from calcpack.notebook.sections.concrete_aci318.lines import ENVELOPE, Written
from calcpack.notebook.sections.concrete_aci318.shear import state_shear
from calcpack.notebook.sections.rehearsal import ratio_rows, rehearsal_of
from calcpack.notebook.study import Study
from calcpack.notebook.work import Work
from calcpack.sheet import Line


@dataclass(frozen=True)
class Begun:
    """A beam whose design is settled, with what its sections will find."""

    work: Work
    design: Design
    rehearsed: list[tuple[str, Line]]


def begin(work: Work) -> Begun:
    """Settle a beam's design, before the first page tells of it.

    Raises
    ------
    CalcpackError
        See :func:`calcpack.notebook.sections.concrete_aci318.design.settle`.
    """
    design = settle(work)
    draft = rehearsal_of(work)
    draft.sheet.section("Rehearsal")
    state_design(_state_section(draft, design))
    work.deflections = draft.deflections
    return Begun(work, design, draft.checks)


def state_shown(begun: Begun) -> Written:
    """The reinforcement and every check with its ratio; materials and section.

    Returns
    -------
    Written
        For the sections that follow.
    """
    _state_shown(begun.work, begun.design, begun.rehearsed)
    return _state_section(begun.work, begun.design)


def state_design(written: Written) -> None:
    """Every section after the first two."""
    state_bending_strength(written)
    state_shear(written)
    state_bars(written)
    state_deflections(written)


def state_load_checks(work: Work) -> None:
    """The checks of the load sheet without its deflection limits: those of the cracked beam stand above."""
    design = {key: value for key, value in work.given.design.items() if key != "deflection_limits"}
    state_checks(replace(work, study=Study(work.given.model_copy(update={"design": design}))))


# What is shown


def _state_shown(work: Work, design: Design, checks: list[tuple[str, Line]]) -> None:
    sheet = work.sheet
    sheet.section("Design to ACI 318-19: what is shown")
    with sheet.columns([11, 9]) as column:
        sheet.ratios(ratio_rows(work, checks))
        column()
        sheet.facts(_particulars(work, design))
        _section_figure(work, design)
    unmet = [name for name, line in checks if line.passes is False]
    if unmet:
        sheet.text(f"Not satisfied: {', '.join(unmet)}.", role="unsafe")
    if work.given.actions.family != "ASCE":
        sheet.text(
            f"The combinations are those of {work.given.actions.name}; the strength reduction factors of "
            "ACI 318-19 are set for those of its own 5.3.1.",
            role="unsafe",
        )
    if design.how:
        sheet.text("Chosen where the job gives nothing: " + "; ".join(design.how) + ".", role="note")


def _particulars(work: Work, design: Design) -> list[tuple[str, str]]:
    close, wide = (work.show(each * 1000, "mm", exact=True) for each in design.spacings)
    spacing = f"at {close}" if close == wide else f"at {close} near the supports, at {wide} elsewhere"
    return [
        ("Bottom", f"{design.bottom.group.words}, through all spans"),
        ("Top", _top_words(design)),
        ("Stirrups", f"{design.stirrup.name}, {design.legs} legs, {spacing}"),
        ("Cover", f"{work.show(design.cage.cover * 1000, 'mm', exact=True)} to the stirrups"),
    ]


def _top_words(design: Design) -> str:
    if design.top.task is None:
        return f"{design.top.group.words}, hangers"
    if design.through:
        return f"{design.top.group.words}, through all spans"
    return f"{design.top.group.words} over the supports, 2 of them through all spans"


def _section_figure(work: Work, design: Design) -> None:
    """The section: of the span where it sags, else of the support."""
    section = design.section
    if design.flange_width is not None:
        sizes = {**section.dimensions, "flange_width": max(design.flange_width, section.dimensions["width"])}
        section = section.model_copy(update={"dimensions": sizes, "effective_flange": False})
    depth = design.cage.depth
    groups = [(design.bottom.group, False), (design.top.group, True)]
    bars, callouts = [], []
    for group, top in groups:
        for across, height in group.places:
            bars.append((across, depth - height if top else height, group.bar.diameter))
        area = work.show(group.area * 1e6, "mm^2")
        callouts.append((f"{group.words} ({area})", depth - group.centroid if top else group.centroid))
    sagging = design.bottom.task is not None
    face = design.bottom if sagging else design.top
    assert face.state is not None
    side: Literal["top", "bottom"] = "top" if sagging else "bottom"
    figure = section_figure(
        section,
        work.study.system,
        bars=bars,
        stirrup=(design.cage.cover, design.stirrup.diameter, design.legs),
        callouts=callouts,
        stirrup_text=f"{design.stirrup.name} at {work.show(design.spacings[0] * 1000, 'mm', exact=True)}",
        effective_depth=(face.group.depth, side),
        neutral_axis=(face.state.c, side),
        stress_block=face.state.a,
        mark=work.given.mark,
        width_mm=68,
    )
    where = "largest sagging" if sagging else "largest hogging"
    over = "; top bars as over the supports" if design.top.task is not None and sagging else ""
    work.sheet.figure(figure, f"Section, neutral axis and stress block for the {where} moment{over}.")


# Materials and section


def _state_section(work: Work, design: Design) -> Written:
    """Limits, materials, cover, effective flange."""
    sheet = work.sheet
    sheet.section("Materials, section and cover")
    sheet.text(f"Bounds of these clauses: {limit_words(work.study.system)}", role="note")
    materials = state_materials(sheet, design.material)
    size = _size(work, design)
    written = Written(work, design, materials, size, _clear_span(work, design))
    largest = max(face.group.bar.diameter for face in (design.bottom, design.top))
    exposure = work.given.design["exposure"]
    cover = state_cover(sheet, size.cover, exposure, design.stirrup.diameter, largest)
    # Cover is usually the least one exactly; as a ratio of 1 it would hide what governs.
    written.note(tuple((name, line) for name, line in cover if not line.passes))
    if design.section.shape == "tee":
        _flange(written)
    if not shortest(design.actions.stretches).overhang:
        written.note(state_not_deep(sheet, size, written.clear))
    return written


def _take(work: Work, design: Design, key: str, symbol: str, words: str) -> Line:
    """A size of the section: the line that has it, or a new one."""
    if key in work.lines and work.lines[key].symbol == symbol:
        return work.lines[key]
    section = design.section
    return work.sheet.take(
        symbol, section.dimensions[key] * 1000, "mm", words, f"section {section.key} {key}"
    )


def _size(work: Work, design: Design) -> Size:
    web = _take(work, design, "width", "b_w", "Web width")
    height = _take(work, design, "depth", "h", "Depth of the beam")
    given = work.given.design["cover"] is not None
    cover = work.sheet.take(
        "c_c",
        design.cage.cover * 1000,
        "mm",
        "Cover, to the stirrups",
        f"beam {work.given.mark} design.cover" if given else "chosen by the template",
        word="cover to the stirrups",
    )
    stirrup = work.sheet.take(
        "d_st",
        design.stirrup.diameter * 1000,
        "mm",
        f"Diameter of the stirrups, {design.stirrup.name}",
        design.stirrup.source,
        word="diameter of the stirrups",
    )
    return Size(web, height, cover, stirrup)


def _clear_span(work: Work, design: Design) -> Line:
    """The shortest clear span; the span itself where supports have no width."""
    stretch = shortest(design.actions.stretches)
    span = work.lines["span", stretch.number - 1]
    if not stretch.half:
        return span
    width = work.sheet.take(
        "w_s",
        stretch.half * 2000,
        "mm",
        "Width of the supports",
        f"beam {work.given.mark} design.support_width",
        word="width of the supports",
    )
    faces = width if all(stretch.supported) else width / 2
    return work.sheet.hence("ell_n", span - faces, "m", "Shortest clear span", word="clear span")


def _flange(written: Written) -> None:
    """The flange's width, worked out or checked."""
    work, design, sheet = written.work, written.design, written.sheet
    slab = _take(work, design, "flange_depth", "h_f", "Flange depth")
    written.size = written.size._replace(flange=slab)
    if design.section.effective_flange:
        face = state_flange(sheet, written.size, design.wings, written.clear, slab)
        written.size = written.size._replace(face=face)
        return
    face = _take(work, design, "flange_width", "b_f", "Flange width")
    written.size = written.size._replace(face=face)
    most = None
    if design.wings:
        most = state_flange(sheet, written.size, design.wings, written.clear, slab, "b_f,max")
    written.note(state_given_flange(sheet, written.size, most))


# Bending


def state_bending_strength(written: Written) -> None:
    """The sections with the largest sagging and hogging moments."""
    written.sheet.section("Bending")
    bent = [(name, face) for name, face in written.faces if face.task is not None]
    # the section that is used most stands in full, the other in short
    with written.sheet.repeating():
        for name, face in sorted(bent, key=lambda each: -round(_used(each[1]), 9)):
            _bending(written, name, face)


def _used(face: Face) -> float:
    """Moment over design strength."""
    assert face.extreme is not None
    assert face.state is not None
    return face.extreme.value / face.state.design


def _bending(written: Written, name: str, face: Face) -> None:
    sheet, work, design = written.sheet, written.work, written.design
    assert face.extreme is not None
    assert face.state is not None
    sagging, tag = name == "bottom", written.tag(name)
    kind = "sagging" if sagging else "hogging"
    if tag:
        sheet.subsection(f"Largest {kind} moment (index {tag})")
    words = f"Largest {kind} moment, {work.show(face.extreme.at, 'm')} from the start"
    if not sagging and design.actions.half > 0:
        words += "; at columns that of the face (9.4.2.1)"
    flange = written.size.face if written.determinate and not sagging else None
    demand = Demand(face.extreme.value, words, ENVELOPE, name, flange)
    # under hogging the compressed face is the web, the flange is in tension
    size = written.size if sagging else written.size._replace(face=None, flange=None)
    lines = state_bending(sheet, written.materials, size, face.group, face.pressed, face.state, demand, tag)
    written.bent[name] = lines
    written.note(lines.checks)
