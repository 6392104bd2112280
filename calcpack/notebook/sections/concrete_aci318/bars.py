"""The section on bars of a concrete beam to ACI 318-19: distances, cracks, development, where they end."""

from __future__ import annotations

from calcpack.clauses.aci318.detailing import (
    Layer,
    state_development,
    state_end,
    state_service_stress,
    state_spacing,
    state_top_length,
)
from calcpack.clauses.aci318.materials import cite
from calcpack.clauses.aci318.strength import INCH
from calcpack.figures import Figure, bar_layout
from calcpack.notebook.sections.concrete_aci318.faces import worst_end
from calcpack.notebook.sections.concrete_aci318.lines import ENVELOPE, Written
from calcpack.notebook.sections.concrete_aci318.shear import HALF, shear_figure
from calcpack.notebook.sections.strength_figures import strength_figure
from calcpack.sheet import Line

SAMPLES = 120
WIDTH = 150.0  # of the bar layout [mm]


def state_bars(written: Written) -> None:
    """Distances, crack control, development, length of the top bars."""
    sheet, design = written.sheet, written.design
    sheet.section("Bars: distances, crack control, development")
    given = written.work.given.design["aggregate"]
    aggregate = sheet.take(
        "d_agg",
        design.cage.aggregate * 1000,
        "mm",
        "Nominal largest size of the aggregate",
        f"{written.mark} design.aggregate" if given else "chosen by the template, common practice",
        word="largest size of the aggregate",
    )
    stress = state_service_stress(sheet, written.materials)
    layers: dict[str, Layer] = {}
    for name, face in written.faces:
        if face.task is not None:
            with sheet.repeating():
                layers[name] = state_spacing(
                    sheet, written.size, face.group, aggregate, stress, name, written.tag(name)
                )
            written.note(layers[name].checks)
    if design.cage.depth > 36 * INCH:
        sheet.text(
            "The beam is deeper than 36 in: skin reinforcement stands along both sides over half the depth "
            "next to the tension face, spaced as for crack control (ACI 318-19 9.7.2.3).",
            role="caution",
        )
    with sheet.repeating():
        if "bottom" in written.bent:
            _bottom(written, layers["bottom"])
        top = _top(written, layers["top"]) if "top" in written.bent else None
    _figures(written, top)


def _bottom(written: Written, layer: Layer) -> None:
    design, bending = written.design, written.bent["bottom"]
    development = state_development(
        written.sheet,
        written.materials,
        written.size,
        design.bottom.group,
        layer,
        bending.outermost,
        top=False,
        tag=written.tag("bottom"),
    )
    ends = design.actions.ends(design.cage.cover)
    for number, inflection in enumerate((False, True)):
        end = worst_end(ends, bending.nominal.value, design.bottom.group, inflection=inflection)
        if end is not None:
            written.note(state_end(written.sheet, bending, development, end, "AB"[number]))
    written.sheet.text(
        "All bottom bars run into the supports by at least 6 in; that is more than the part of them that "
        "9.7.3.8.1 and 9.7.3.8.2 ask for. Over inner supports they are spliced or continuous (9.7.7).",
        role="note",
    )


def _top(written: Written, layer: Layer) -> Line | None:
    """Development of the top bars; how far they run, unless through."""
    sheet, design, bending = written.sheet, written.design, written.bent["top"]
    development = state_development(
        written.sheet,
        written.materials,
        written.size,
        design.top.group,
        layer,
        bending.outermost,
        top=design.top_is_high,
        tag=written.tag("top"),
    )
    actions, half = design.actions, design.actions.half
    for stretch in actions.stretches:
        if stretch.overhang and actions.hogs(stretch, stretch.supported[0]):
            span = written.work.lines["span", stretch.number - 1]
            line = sheet.require(
                development.length <= (span - written.size.cover),
                f"Development of the top bars in overhang {stretch.number}",
                cite("9.7.3.4"),
            )
            written.note(((f"development, overhang {stretch.number}", line),))
    if design.through:
        sheet.text(
            "The top bars run through: there are but two, or combinations hog over most of a span, or the "
            "bars are counted in compression there.",
            role="note",
        )
        return None
    reaches = [
        actions.hogging_reach(stretch, left)
        for stretch in actions.stretches
        if not stretch.overhang
        for left in (True, False)
        if actions.hogs(stretch, left)
    ]
    if not reaches:
        return None
    hogging = sheet.take(
        "x_h",
        max(reaches),
        "m",
        "How far from a support's centre a span hogs, at most",
        ENVELOPE,
        given=False,
        word="reach of the hogging moment",
    )
    widest = sheet.take(
        "w_2",
        half * 1000,
        "mm",
        "Half the width of the supports",
        f"{written.mark} design.support_width",
        word="half the width of the supports",
    )
    clear = max((each for each in actions.stretches if not each.overhang), key=lambda each: each.clear)
    span = written.work.lines["span", clear.number - 1]
    return state_top_length(sheet, bending, development, hogging, span, widest)


def _figures(written: Written, top: Line | None) -> None:
    work, design, given = written.work, written.design, written.work.given
    layers: list[tuple[str, float, float, str]] = []
    if top is not None:
        running = design.running
        layers.append(("top", 0.0, given.length, running.words))
        more = design.top.group.count - running.count
        for start, end in _over_supports(written, top.value):
            if more > 0:
                layers.append(("top", start, end, f"{more} {design.top.group.bar.name}"))
    else:
        layers.append(("top", 0.0, given.length, design.top.group.words))
    layers.append(("bottom", 0.0, given.length, design.bottom.group.words))
    zones = [
        (
            zone.start,
            zone.stop,
            zone.spacing,
            f"{design.stirrup.name} at {work.show(zone.spacing * 1000, 'mm', exact=True)}",
        )
        for zone in design.zones
    ]
    sheet = written.sheet
    with sheet.columns([1, 1]) as column:
        sheet.figure(_moments(written, top), "Moments against the design strength of the bars there.")
        column()
        sheet.figure(
            shear_figure(written), "Shear against its design strength, between the critical sections."
        )
    figure = bar_layout(
        given.length,
        work.bearings,
        layers,
        zones,
        work.study.system,
        fixed=given.fixed,
        mark=given.mark,
        width_mm=WIDTH,
    )
    sheet.figure(figure, "Bars and stirrup zones; not a bending schedule.")


def _over_supports(written: Written, reach: float) -> list[tuple[float, float]]:
    """Where the further top bars lie, stretches that meet put together."""
    actions, length = written.design.actions, written.work.given.length
    found: list[tuple[float, float]] = []
    for stretch in actions.stretches:
        for left in (True, False):
            if not actions.hogs(stretch, left):
                continue
            at = stretch.start if left else stretch.end
            start, end = max(at - reach, 0.0), min(at + reach, length)
            if found and start <= found[-1][1]:
                found[-1] = (found[-1][0], max(end, found[-1][1]))
            else:
                found.append((start, end))
    return found


def _moments(written: Written, top: Line | None) -> Figure:
    """Moments and their design strength, the hogging one as far as the top bars lie."""
    design, given = written.design, written.work.given
    sagging = design.bottom.state.design if design.bottom.state is not None else 0.0
    hogging = design.top.state.design if design.top.state is not None else 0.0
    less = hogging
    if top is not None and design.top.task is not None:
        less = design.top.task.state(design.running).design
    capacity: list[tuple[float, ...]] = []
    place = 0.0
    for start, end in _over_supports(written, top.value) if top is not None else []:
        if start > place:
            capacity.append((place, start, sagging, less))
        capacity.append((start, end, sagging, hogging))
        place = end
    if place < given.length:
        capacity.append((place, given.length, sagging, less))
    return strength_figure(written.work, "moment", capacity, compared=_between_faces(written), width_mm=HALF)


def _between_faces(written: Written) -> list[tuple[float, float]]:
    """The beam without what lies over its columns, whose faces decide."""
    half, length = written.design.actions.half, written.work.given.length
    columns = [bearing.at for bearing in written.work.given.bearings if bearing.kind == "column"]
    found, place = [], 0.0
    for at in columns if half else []:
        if at - half > place:
            found.append((place, at - half))
        place = at + half
    if place < length:
        found.append((place, length))
    return found
