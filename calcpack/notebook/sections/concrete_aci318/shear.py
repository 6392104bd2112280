"""The shear section of a concrete beam to ACI 318-19."""

from __future__ import annotations

from typing import Any

from calcpack.clauses.aci318.flexure import state_compression_ties
from calcpack.clauses.aci318.materials import cite
from calcpack.clauses.aci318.shear import (
    Concrete,
    Stirrups,
    state_concrete,
    state_least_stirrups,
    state_section_limit,
    state_torsion,
    state_zone,
    take_stirrups,
)
from calcpack.figures import Figure
from calcpack.notebook.sections.concrete_aci318.lines import ENVELOPE, Written
from calcpack.notebook.sections.strength_figures import strength_figure
from calcpack.sheet import Line

SAMPLES = 120
HALF = 84.0  # width of a diagram beside another [mm]


def state_shear(written: Written) -> None:
    """Concrete, stirrups by zones, limits, torsion."""
    sheet, design = written.sheet, written.design
    sheet.section("Shear and torsion")
    governing = max(design.criticals, key=lambda each: round(each.shear, 9))
    demand = sheet.take(
        "V_u", governing.shear, "kN", f"Factored shear {governing.words}", ENVELOPE, cite("9.4.3.2"),
        given=False,
    )  # fmt: skip
    several = len({zone.spacing for zone in design.zones}) > 1
    spacings = sorted({zone.spacing for zone in design.zones})
    ends = _take(written, spacings[0], "near the supports" if several else "", "1" if several else "")
    deep = min(written.bent.values(), key=lambda each: each.depth.value)
    concrete = state_concrete(
        sheet,
        written.materials,
        written.size,
        deep.depth,
        deep.steel,
        ends,
        with_least=design.web.enough(design.legs * design.stirrup.area, spacings[-1]),
    )
    written.note(state_section_limit(sheet, written.size, concrete, demand, ends))
    where = "near the supports" if several else "in the whole beam"
    design_strength, checks = state_zone(
        sheet, written.materials, written.size, concrete, demand, ends, where, "1" if several else ""
    )
    written.note(checks)
    strengths = {spacings[0]: design_strength}
    widest = ends
    if several:
        widest, strengths[spacings[-1]] = _middle(written, spacings[-1], concrete)
    written.note(state_least_stirrups(sheet, written.materials, written.size, concrete, demand, widest))
    pressed = [face.pressed for face in (design.bottom, design.top) if face.pressed is not None]
    if pressed:
        thinnest = min(pressed, key=lambda group: group.bar.diameter)
        written.note(
            state_compression_ties(sheet, written.size, widest.spacing, thinnest, written.size.stirrup)
        )
    written.shear_strengths.update(strengths)
    _zones(written, strengths)
    written.note(state_torsion(sheet, written.materials, written.size, concrete.phi))
    if len(design.wings) == 1:
        sheet.text(
            "A slab meets this beam from one side only: where it is built in, the beam is twisted as far as "
            "it holds the slab's edge. Such torsion is redistributed (ACI 318-19 22.7.3.2); bars against its "
            "cracks are not worked out here.",
            role="caution",
        )


def _take(written: Written, spacing: float, words: str, tag: str) -> Stirrups:
    design = written.design
    given = written.work.given.design["stirrups"]["spacing"]
    origin = f"{written.mark} design.stirrups" if given else "chosen by the template"
    return take_stirrups(written.sheet, design.stirrup, design.legs, spacing, origin, words=words, tag=tag)


def _middle(written: Written, spacing: float, concrete: Concrete) -> tuple[Stirrups, Line]:
    """The zone with the wider spacing where the shear is largest."""
    zone = max(
        (each for each in written.design.zones if each.spacing == spacing),
        key=lambda each: round(each.shear, 9),
    )
    work, sheet = written.work, written.sheet
    demand = sheet.take(
        "V_u,2",
        zone.shear,
        "kN",
        f"Largest shear between the zones, {work.show(zone.start, 'm')} to {work.show(zone.stop, 'm')}",
        ENVELOPE,
        given=False,
    )
    stirrups = _take(written, spacing, "elsewhere", "2")
    design_strength, checks = state_zone(
        sheet, written.materials, written.size, concrete, demand, stirrups, "elsewhere", "2"
    )
    written.note(checks)
    return stirrups, design_strength


def shear_figure(written: Written) -> Figure:
    """Shear against what concrete and stirrups carry."""
    strengths = written.shear_strengths
    capacity = [
        (zone.start, zone.stop, strengths[zone.spacing].value, strengths[zone.spacing].value)
        for zone in written.design.zones
    ]
    return strength_figure(written.work, "shear", capacity, compared=compared(written), width_mm=HALF)


def compared(written: Written) -> list[tuple[float, float]]:
    """Between the critical sections of each span."""
    found = []
    for stretch in written.design.actions.stretches:
        places = {each.left: each.at for each in written.design.criticals if each.span == stretch.number}
        start, end = places.get(True, stretch.start), places.get(False, stretch.end)
        if start < end:
            found.append((start, end))
    return found


def _zones(written: Written, strengths: dict[float, Line]) -> None:
    work = written.work
    rows: list[list[Any]] = []
    for zone in written.design.zones:
        strength = strengths[zone.spacing]
        rows.append(
            [
                f"{work.show(zone.start, 'm')} to {work.show(zone.stop, 'm')}",
                work.show(zone.spacing * 1000, "mm", exact=True),
                work.show(zone.shear, "kN"),
                [strength.shown, " (", strength.link, ")"],
                f"{zone.shear / strength.value:.2f}",
            ]
        )
    written.sheet.table(
        [
            ("stirrup zone", "left"),
            ("spacing", "right"),
            ("largest shear", "right"),
            ("design strength", "right"),
            ("ratio", "right"),
        ],
        rows,
        caption="Stirrups along the beam, from its start; the first stands at most half a spacing from the "
        "face of the support.",
    )
