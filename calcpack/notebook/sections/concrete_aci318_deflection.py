"""The deflection section of a concrete beam to ACI 318-19."""

from __future__ import annotations

from dataclasses import replace

from calcpack.clauses.aci318.deflection import (
    Bent,
    Gross,
    Limits,
    Sag,
    state_average,
    state_deflection,
    state_effective_inertia,
    state_gross,
    state_least_depth,
)
from calcpack.clauses.aci318.materials import Checks
from calcpack.notebook.sections.concrete_aci318_actions import Service, Stretch
from calcpack.notebook.sections.concrete_aci318_lines import Written
from calcpack.notebook.sections.concrete_aci318_rehearsal import draft_of
from calcpack.sheet import Expression, Line, measured, number


def state_deflections(written: Written) -> None:
    """The span that comes nearest to its limits in lines, the others in a table."""
    sheet, work, actions = written.sheet, written.work, written.design.actions
    sheet.section("Deflection")
    name, _ = actions.service_factors
    part = f"{actions.sustained_live:g}"
    sheet.text(
        f"Cracked as under {name}, all of it; the same effective section serves every stage, since the "
        f"beam has carried that load before. Sustained: D + {part} L. The analysis gives deflections times "
        "E I with live load where it is worst for each."
    )
    gross = state_gross(sheet, written.materials, written.size)
    found = {}
    for stretch, service in zip(actions.stretches, actions.service(), strict=True):
        draft = replace(written, work=draft_of(work))
        found[stretch.number] = (stretch, service, _stretch(draft, gross, stretch, service))
    worst = max(found.values(), key=lambda each: round(_ratio(each[2]), 9))
    if len(found) > 1:
        _table(written, {stretch.number: checks for stretch, _, checks in found.values()})
    written.note(_stretch(written, gross, worst[0], worst[1]))


def _ratio(checks: Checks) -> float:
    return max((float(line.check(name)["ratio"]) for name, line in checks), default=0.0)


def _table(written: Written, found: dict[int, Checks]) -> None:
    work, rows = written.work, []
    for number_, checks in found.items():
        for name, line in checks:
            check = line.check(name)
            rows.append(
                [
                    f"span {number_}",
                    name.removeprefix("deflection, "),
                    work.show(check["demand"], check["unit"]),
                    work.show(check["capacity"], check["unit"]),
                    f"{check['ratio']:.2f}",
                ]
            )
    written.sheet.table(
        [
            ("span", "left"),
            ("deflection", "left"),
            ("value", "right"),
            ("limit", "right"),
            ("ratio", "right"),
        ],
        rows,
        caption="Every span, worked out as the worst of them is below.",
    )


def _stretch(written: Written, gross: Gross, stretch: Stretch, service: Service) -> Checks:
    sheet, work, size, materials = written.sheet, written.work, written.size, written.materials
    design, keys = written.design, written.work.given.design
    actions = design.actions
    name, _ = actions.service_factors
    words = f"{'overhang' if stretch.overhang else 'span'} {stretch.number}"
    span = work.lines["span", stretch.number - 1]
    ends = [actions.hogs(stretch, left) and not stretch.overhang for left in (True, False)]
    held = ("simply supported", "one end continuous", "both ends continuous")[sum(ends)]
    state_least_depth(sheet, materials, size, span, "cantilever" if stretch.overhang else held)
    sagging: Line | None = None
    if "bottom" in written.bent and not stretch.overhang and service.sagging > 0:
        bars = written.bent["bottom"]
        bent = Bent(
            service.sagging,
            f"Largest sagging moment of {words} under {name}",
            bars.steel,
            bars.depth,
            False,
            "m",
        )
        sagging = state_effective_inertia(sheet, materials, size, gross, bent)
    hogging = []
    for left, tag in ((True, "a"), (False, "b")):
        moment = service.hogging[0 if left else 1]
        if "top" in written.bent and actions.hogs(stretch, left) and work.study.significant(moment, "moment"):
            bars = written.bent["top"]
            where = f"Hogging moment at the {'left' if left else 'right'} of {words} under {name}"
            bent = Bent(moment, where, bars.steel, bars.depth, True, tag)
            hogging.append(state_effective_inertia(sheet, materials, size, gross, bent))
    if sagging is not None:
        inertia = state_average(sheet, sagging, hogging)
    else:
        inertia = hogging[0] if hogging else gross.inertia
    reach: Expression = 2 * span if stretch.overhang else span.as_expression()
    limits = keys["deflection_limits"]
    return state_deflection(
        sheet,
        materials,
        inertia,
        Sag(service.live, service.sustained, "analysis, service loads"),
        Limits(limits["live"], limits["total"], reach),
        keys["load_duration"],
        _compression(written, stretch),
        words,
    )


def _compression(written: Written, stretch: Stretch) -> Expression | None:
    """Ratio of the bars in the compressed face: at midspan the top ones that run through, of a cantilever
    the bottom ones.
    """
    group = written.design.bottom.group if stretch.overhang else written.design.running
    face = "top" if stretch.overhang else "bottom"
    if face not in written.bent:
        return None
    width = written.size.web if stretch.overhang or written.size.face is None else written.size.face
    area = number(group.count) * measured(group.bar.area * 1e6, "mm^2")
    return area / (width * written.bent[face].depth)
