"""The deflection section of a concrete beam to ACI 318-19."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

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
from calcpack.figures import deflected_shape
from calcpack.notebook.sections.concrete_aci318.actions import Service, Stretch
from calcpack.notebook.sections.concrete_aci318.lines import Written
from calcpack.notebook.sections.rehearsal import draft_of
from calcpack.notebook.work import StatedDeflection
from calcpack.sheet import Expression, Line, measured, number


class Deflected(NamedTuple):
    """A stretch of the beam with the lines of its deflections."""

    stretch: Stretch
    service: Service
    checks: Checks
    inertia: Line  # I_e
    growth: Line  # λ_Δ
    live: Line | None
    after: Line


def state_deflections(written: Written) -> None:
    """The span that comes nearest to its limits in lines, the others in a table; the deflected beam."""
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
    found = []
    for stretch, service in zip(actions.stretches, actions.service(), strict=True):
        draft = replace(written, work=draft_of(work))
        found.append(_stretch(draft, gross, stretch, service))
    worst = max(found, key=lambda each: round(_ratio(each.checks), 9))
    if len(found) > 1:
        _table(written, found)
    shown = _stretch(written, gross, worst.stretch, worst.service)
    written.note(shown.checks)
    work.deflections = _stated(written, shown, several=len(found) > 1)
    _figure(written, found)


def _stated(written: Written, shown: Deflected, *, several: bool) -> tuple[StatedDeflection, ...]:
    """What the first page and the results say."""
    where = f", {_words(shown.stretch)}" if several else ""
    after, live = _lines(written, shown)
    x = shown.service.x
    stated = [
        StatedDeflection(
            "total_mm",
            f"deflection after attachment{where}",
            float(x[int(after.argmax())]),
            f"live load; creep and shrinkage under D + {written.design.actions.sustained_live:g} L",
            shown.after,
        )
    ]
    if shown.live is not None:
        at = float(x[int(live.argmax())])
        stated.append(
            StatedDeflection("live_mm", f"deflection, live load{where}", at, "immediate, cracked", shown.live)
        )
    return tuple(stated)


def _lines(written: Written, each: Deflected) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Deflections along a stretch [m]: after attachment of partitions, and under live load."""
    rigidity = written.materials.ec.value * 1e3 * each.inertia.value * 1e-12  # [kNm2]
    live = each.service.live_line / rigidity
    return each.growth.value * each.service.sustained_line / rigidity + live, live


def _figure(written: Written, found: Sequence[Deflected]) -> None:
    """The deflected beam against its limits; every span with its own effective section."""
    work, given = written.work, written.work.given
    limits = given.design["deflection_limits"]
    x = np.concatenate([each.service.x for each in found])
    lines = [_lines(written, each) for each in found]
    after, live = (np.concatenate([pair[which] for pair in lines]) for which in (0, 1))

    def bounds(over: float) -> list[tuple[float, float, float]]:
        return [
            (
                each.stretch.start,
                each.stretch.end,
                each.stretch.length * (2 if each.stretch.overhang else 1) / over,
            )
            for each in found
        ]

    further = [("immediate, under live load", x, live, bounds(limits["live"]))] if live.any() else []
    figure = deflected_shape(
        given.length,
        work.bearings,
        x,
        after,
        bounds(limits["total"]),
        work.study.system,
        title="after attachment of partitions",
        further=further,
        fixed=given.fixed,
        mark=given.mark,
        width_mm=150.0,
    )
    written.sheet.figure(
        figure,
        "Deflections of the cracked beam against their limits, each span with its own effective section and "
        "live load where it is worst for each place.",
    )


def _words(stretch: Stretch) -> str:
    return f"{'overhang' if stretch.overhang else 'span'} {stretch.number}"


def _ratio(checks: Checks) -> float:
    return max((float(line.check(name)["ratio"]) for name, line in checks), default=0.0)


def _table(written: Written, found: Sequence[Deflected]) -> None:
    work, rows = written.work, []
    for each in found:
        for name, line in each.checks:
            check = line.check(name)
            rows.append(
                [
                    _words(each.stretch),
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


def _stretch(written: Written, gross: Gross, stretch: Stretch, service: Service) -> Deflected:
    sheet, work, size, materials = written.sheet, written.work, written.size, written.materials
    keys, actions = written.work.given.design, written.design.actions
    words = _words(stretch)
    span = work.lines["span", stretch.number - 1]
    ends = [actions.hogs(stretch, left) and not stretch.overhang for left in (True, False)]
    held = ("simply supported", "one end continuous", "both ends continuous")[sum(ends)]
    state_least_depth(sheet, materials, size, span, "cantilever" if stretch.overhang else held)
    with sheet.repeating():
        inertia = _inertia(written, gross, stretch, service, words)
    reach: Expression = 2 * span if stretch.overhang else span.as_expression()
    limits = keys["deflection_limits"]
    stated = state_deflection(
        sheet,
        materials,
        inertia,
        Sag(service.live, service.sustained, "analysis, service loads"),
        Limits(limits["live"], limits["total"], reach),
        keys["load_duration"],
        _compression(written, stretch),
        words,
    )
    return Deflected(stretch, service, stated.checks, inertia, stated.growth, stated.live, stated.after)


def _inertia(written: Written, gross: Gross, stretch: Stretch, service: Service, words: str) -> Line:
    """The effective second moment of area of a stretch; the largest moment in full, others in short."""
    sheet, work, size, materials = written.sheet, written.work, written.size, written.materials
    actions = written.design.actions
    name, _ = actions.service_factors
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
        return state_average(sheet, sagging, hogging)
    return hogging[0] if hogging else gross.inertia


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
