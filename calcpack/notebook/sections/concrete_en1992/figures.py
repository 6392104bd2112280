"""Figures of a concrete beam after EN 1992-1-1: section, layout of bars, resistance, deflection."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np

from calcpack.clauses.bars import Bar
from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.model import Bars
from calcpack.figures.bar_layout import bar_layout
from calcpack.figures.capacity import Capacity, capacity_figure
from calcpack.figures.deflected import deflected_shape
from calcpack.figures.figure import Figure
from calcpack.figures.section import section_figure
from calcpack.notebook.work import Work

SAMPLES = 160
HALF = 84.0  # [mm], two figures side by side


def _size(bar: Bar) -> str:
    return bar.words.removesuffix(" mm")


def _text(work: Work, bars: Bars) -> str:
    return f"{bars.count} {_size(bars.bar)}"


def _places(bars: Bars, web: float, depth: float, top: bool) -> list[tuple[float, float, float]]:
    """Centres of bars, seen in the section."""
    found, size = [], bars.bar.diameter
    for layer, number in enumerate(bars.layers):
        height = bars.inset + size / 2 + layer * bars.pitch
        reach = web / 2 - bars.inset - size / 2
        across = [0.0] if number == 1 else np.linspace(-reach, reach, number).tolist()
        found += [(x, depth - height if top else height, size) for x in across]
    return found


def section_figures(work: Work, design: Design) -> list[tuple[Figure, str]]:
    """The section in the span, and over a support where its top bars are others."""
    section = work.given.section
    assert section is not None
    shear, outline = design.shear, design.case.sagging
    spacings = sorted({round(zone.spacing * 1e3) for zone in shear.zones})
    stirrups = f"{_size(shear.stirrups.bar)} at {'/'.join(map(str, spacings))}"
    found = []
    tops = [(design.through.bars, "in the span"), (design.top.bars, "over supports")] if design.top else []
    if not tops or len({bars.count for bars, _ in tops}) == 1:
        tops = [(design.top.bars if design.top else design.through.bars, "")]
    for top, where in tops:
        hogging = where == "over supports" or not design.case.sag
        face = design.top if hogging and design.top else design.bottom
        compressed: tuple[float, str] = (face.bending.x, "bottom" if hogging else "top")
        figure = section_figure(
            section,
            work.study.system,
            bars=[
                *_places(design.bottom.bars, outline.web, outline.depth, False),
                *_places(top, outline.web, outline.depth, True),
            ],
            stirrup=(design.case.cover, shear.stirrups.bar.diameter, shear.stirrups.legs),
            callouts=[
                (_text(work, top), outline.depth - top.centroid),
                (_text(work, design.bottom.bars), design.bottom.bars.centroid),
            ],
            stirrup_text=stirrups,
            neutral_axis=(compressed[0], "bottom" if hogging else "top"),
            stress_block=design.case.strength.lam * compressed[0],
            mark=work.given.mark,
            width_mm=72.0 if len(tops) == 1 else 66.0,
        )
        found.append((figure, f"Section {where or 'with its bars'}; hatched: stress block at resistance."))
    return found


def bars_figure(work: Work, design: Design) -> tuple[Figure, str]:
    """Bars along the beam, stirrup zones."""
    length, case = work.given.length, design.case
    layers = [("bottom", 0.0, length, _text(work, design.bottom.bars))]
    through = design.through.bars
    if design.top and not design.zones:
        through = design.top.bars
    layers.append(("top", 0.0, length, _text(work, through)))
    if design.top:
        more = design.top.bars.count - through.count
        size = _size(design.top.bars.bar)
        layers += [("top", zone.start, zone.end, f"{more} {size}") for zone in design.zones]
    size = _size(design.shear.stirrups.bar)
    zones = []
    for zone in design.shear.zones:
        count = math.ceil((zone.end - zone.start) / zone.spacing - 1e-9)
        zones.append(
            (zone.start, zone.end, zone.spacing, f"{size} at {round(zone.spacing * 1e3)}, {count} pcs")
        )
    figure = bar_layout(
        length, work.bearings, layers, zones, work.study.system, fixed=case.fixed, mark=work.given.mark
    )
    return figure, "Bars along the beam, without what reaches into supports; diameters and spacings in mm."


def moment_figure(work: Work, design: Design) -> tuple[Figure, str]:
    """Shifted moments against the resistance."""
    case, x = design.case, design.case.places
    marks = {0.0, case.length}
    for zone in design.zones:
        marks |= {zone.start, zone.full_start, zone.full_end, zone.end}
    places = np.array(sorted(marks))
    full = design.top.bending.moment if design.top else design.through.bending.moment
    bottom = design.bottom.bending.moment if case.sag else 0.0
    hogging = np.interp(places, x, design.top_resistance) if design.zones else np.full_like(places, full)
    stretches = [
        Capacity(float(a), float(b), bottom, float(one), bottom, float(other))
        for (a, one), (b, other) in pairwise(zip(places, hogging, strict=True))
    ]
    figure = capacity_figure(
        case.length,
        work.bearings,
        "moment",
        ((x, design.sagging), (x, -design.hogging)),
        stretches,
        work.study.system,
        fixed=case.fixed,
        mark=work.given.mark,
        width_mm=HALF,
    )
    shift = work.show(design.shear.shift, "m")
    return figure, f"Moments of all strength combinations, shifted by {shift} (9.2.1.3), and the resistance."


def shear_figure(work: Work, design: Design) -> tuple[Figure, str]:
    """Shear against what the stirrups carry."""
    case, shear = design.case, design.shear
    stretches = []
    for zone in shear.zones:
        ties, struts = shear.capacity(zone.spacing)
        least = min(ties, struts)
        stretches.append(Capacity(zone.start, zone.end, least, least))
    compared = []
    for span in case.spans:
        inside = [
            place.at
            for place in shear.places
            if (place.side == "right" and case.supports[place.support].at == span.start)
            or (place.side == "left" and case.supports[place.support].at == span.end)
        ]
        start = min([at for at in inside if at < (span.start + span.end) / 2], default=span.start)
        end = max([at for at in inside if at >= (span.start + span.end) / 2], default=span.end)
        compared.append((start, max(start, end)))
    figure = capacity_figure(
        case.length,
        work.bearings,
        "shear",
        (case.shear.upper.sample(SAMPLES), case.shear.lower.sample(SAMPLES)),
        stretches,
        work.study.system,
        compared=compared,
        fixed=case.fixed,
        mark=work.given.mark,
        width_mm=HALF,
    )
    return figure, "Shear of all strength combinations and the smaller of what stirrups and struts carry."


def deflection_figure(work: Work, design: Design) -> tuple[Figure, str]:
    """Final deflections against their limit."""
    spans = design.deflections
    x = np.concatenate([each.x for each in spans])
    line = np.concatenate([each.line for each in spans])
    # A quarter of the places draws the curve; where a span deflects most is named, and stays.
    drawn = np.isin(x, [each.at for each in spans])
    drawn[::4] = True
    limits = [
        (design.case.spans[each.number].start, design.case.spans[each.number].end, each.limit)
        for each in spans
        if each.limit
    ]
    figure = deflected_shape(
        work.given.length,
        work.bearings,
        x[drawn],
        line[drawn],
        limits,
        work.study.system,
        title="final deflection",
        fixed=design.case.fixed,
        mark=work.given.mark,
        width_mm=150.0,
    )
    return figure, "Each span with live load where it deflects that span most."
