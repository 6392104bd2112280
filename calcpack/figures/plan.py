"""The key plan: where a beam stands and what drains to it."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator, Sequence

import numpy as np

from calcpack.figures.drawing import (
    BODY,
    FILLS,
    GREY,
    HAIR,
    HEAVY,
    INK,
    LINES,
    MEDIUM,
    PALE,
    SIGNS,
    SMALL,
    TEXT,
    THICK,
    THIN,
    WHITE,
    Drawing,
    Stroke,
)
from calcpack.figures.figure import Figure
from calcpack.figures.labels import Box, Placer, fits, meets
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.parts import arrow, length, line_height, upright
from calcpack.figures.plan_data import BeamShape, PanelShape, PlanData, PlanShape, read_plan
from calcpack.figures.plan_view import View, draw_grid, view_of, window_about
from calcpack.figures.shapes import Array, Pair, centroid, clip_ring, clip_segment, pairs
from calcpack.sheet.display import System

ARROW = 2.6  # half a span arrow [mm]
MARK_ROOM = 22.0  # a longer mark is shortened [mm]
HATCHES = (45.0, 135.0)

Ring = list[Pair]


def key_plan(
    plan: PlanData,
    mark: str | None = None,
    system: System = "SI",
    width_mm: float = 75.0,
    dimensions: bool = True,
) -> Figure:
    """A framing plan with one beam marked, or with every beam labelled.

    Parameters
    ----------
    plan : PlanData
        Grid, panels, beams, columns, walls, regions; lengths in m.
    mark : str
        The beam drawn thick, with the regions hatched that drain to it; None labels all beams.
        In a floor too large to be read at this width only the bays about the beam are shown, with a
        small plan of the whole beside them.
    system : "SI" or "US"
        How dimensions are shown.
    width_mm : float [mm]
    dimensions : bool
        Whether the distances of grid lines are written.

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        The plan holds no beam with that mark.

    Examples
    --------
    >>> plan = {
    ...     "grid": {"x": {"A": 0.0, "B": 6.0}, "y": {"1": 0.0, "2": 4.5}},
    ...     "panels": [{"mark": "P1", "corners": [[0, 0], [6, 0], [6, 4.5], [0, 4.5]], "note": "5.50 kPa"}],
    ...     "beams": [{"mark": "B1", "points": [[0, 0], [6, 0]]}],
    ...     "regions": [{"panel": "P1", "outline": [[0, 0], [6, 0], [3.75, 2.25], [2.25, 2.25]]}],
    ... }
    >>> print(key_plan(plan, "B1").alt)
    Framing plan, 6.00 m by 4.50 m: beam B1, 6.00 m long; panel P1 (5.50 kPa) drains to it.
    """
    shape = read_plan(plan)
    beam = None if mark is None else shape.beam(mark)
    height = (1.3 if beam is None else 1.0) * width_mm
    window = window_about(shape, beam, width_mm - 16.0, height - 18.0)
    view = view_of(shape, window, system, width_mm, height - 18.0, dimensions)
    whole = window == shape.extent()
    drawing = Drawing()
    placer = Placer((0.3, -1e9, width_mm - 0.3, 1e9))
    draw_grid(drawing, shape, view, system, dimensions, width_mm, placer)
    placer.block(*drawing.boxes)
    _structure(drawing, shape, view, beam, placer)
    regions = _regions(drawing, shape, view)
    if beam is None:
        _label_beams(drawing, shape, view, placer)
    else:
        _mark_beam(drawing, beam, view, placer)
    for panel in shape.panels:
        _label_panel(drawing, panel, view, placer, regions)
    if beam is None:
        _label_supports(drawing, shape, view, placer, regions)
    foot = drawing.extent()[1] - 1.0
    if view.drawn_out:
        foot = (
            drawing.text(width_mm / 2, foot, view.drawn_out, SMALL, level="under", tone=GREY).bounds()[1]
            - 0.8
        )
    if beam is not None and not whole:
        _locator(drawing, shape, beam, view, width_mm, foot)
    return drawing.finish(width_mm, _spoken(shape, beam, system))


def _structure(
    drawing: Drawing, plan: PlanShape, view: View, marked: BeamShape | None, placer: Placer
) -> None:
    """Panel edges, walls, beams and columns; all that labels keep clear of."""
    for panel in plan.panels:
        for start, end in zip(panel.corners, np.roll(panel.corners, -1, axis=0), strict=True):
            _clipped(drawing, view, start, end, Stroke(HAIR, GREY), LINES, placer)
    for _, line in plan.walls:
        _clipped(drawing, view, line[0], line[1], Stroke(4.6, INK, cap="projecting"), LINES, placer)
        _clipped(drawing, view, line[0], line[1], Stroke(3.8, PALE, cap="projecting"), LINES, placer)
    for beam in plan.beams:
        thick = marked is not None and beam.mark == marked.mark
        stroke = Stroke(THICK if thick else MEDIUM, INK)
        for start, end in zip(beam.points, beam.points[1:], strict=False):
            _clipped(drawing, view, start, end, stroke, HEAVY if thick else LINES, placer)
    for _, at in plan.columns:
        if clip_segment(tuple(at), tuple(at), view.window):
            x, y = view.at(at[None])[0].tolist()
            half = 0.95
            corners = [(x - half, y - half), (x + half, y - half), (x + half, y + half), (x - half, y + half)]
            drawing.area(corners, INK, HEAVY)
            placer.block(Box(x, y, 2 * half + 0.6, 2 * half + 0.6))


def _clipped(
    drawing: Drawing, view: View, start: Array, end: Array, stroke: Stroke, layer: int, placer: Placer
) -> None:
    part = clip_segment((float(start[0]), float(start[1])), (float(end[0]), float(end[1])), view.window)
    if part is not None and part[0] != part[1]:
        line = view.at(part)
        drawing.line(line, stroke, layer)
        placer.block_line(line)


def _regions(drawing: Drawing, plan: PlanShape, view: View) -> list[Ring]:
    """The draining regions, hatched so that neighbours differ."""
    whole = {panel.mark: panel.corners for panel in plan.panels}
    chosen: dict[str, int] = {}
    taken: list[tuple[str, Array]] = []
    drawn = []
    for mark, outline in plan.regions:
        if len(outline) < 3:
            continue
        if mark not in chosen:
            beside = {chosen[other] for other, area in taken if _touch(whole.get(mark, outline), area)}
            chosen[mark] = next((n for n in range(len(HATCHES)) if n not in beside), 0)
        taken.append((mark, whole.get(mark, outline)))
        ring = view.at(outline)
        drawing.hatch(ring, HATCHES[chosen[mark]], 1.15, Stroke(HAIR, INK))
        drawing.outline(ring, Stroke(0.4, INK))
        drawn.append(pairs(ring))
    return drawn


def _touch(one: Array, other: Array) -> bool:
    """Whether two outlines share a stretch of an edge."""
    for a, b in zip(one, np.roll(one, -1, axis=0), strict=True):
        side = b - a
        length = float(np.hypot(*side))
        for c, d in zip(other, np.roll(other, -1, axis=0), strict=True):
            off = [abs(float(side[0] * (p - a)[1] - side[1] * (p - a)[0])) / length for p in (c, d)]
            along = sorted(float(side @ (p - a)) / length for p in (c, d))
            if max(off) < 1e-6 and min(along[1], length) - max(along[0], 0.0) > 1e-6:
                return True
    return False


def _mark_beam(drawing: Drawing, beam: BeamShape, view: View, placer: Placer) -> None:
    """The marked beam's label on its longest span, or beside it where the span is too short."""
    line = view.at(beam.points)
    for number, (x, y) in enumerate(line.tolist()):
        free = (number == 0 and beam.free[0]) or (number == len(line) - 1 and beam.free[1])
        if not free:
            drawing.disc(x, y, 0.75, INK, SIGNS)
            drawing.disc(x, y, 0.42, WHITE, SIGNS)
    text = shorten(beam.mark, MARK_ROOM, BODY, bold=True)
    width, height = text_width(text, BODY, bold=True), line_height(BODY)
    a, b = max(itertools.pairwise(line), key=lambda span: float(np.hypot(*(span[1] - span[0]))))
    angle = upright(math.degrees(math.atan2(*(b - a)[::-1].tolist())))
    x, y = ((a + b) / 2).tolist()
    if float(np.hypot(*(b - a))) >= width + 7.0:
        box = Box(x, y, width + 1.0, height, angle)
        placer.block(box)
        drawing.text(x, y, text, BODY, angle=angle, bold=True, mask=True)
    else:
        box = placer.choose(_beside([(a, b)], width, height, angle, 1.0), penalty=0.1)
        drawing.text(box.x, box.y, text, BODY, level="box", angle=angle, bold=True, mask=True)


def _label_beams(drawing: Drawing, plan: PlanShape, view: View, placer: Placer) -> None:
    """Every beam's mark along it, the shortest beams first: they have the fewest places."""
    lines = [(beam, view.at(beam.points)) for beam in plan.beams]
    for beam, line in sorted(lines, key=lambda item: float(np.hypot(*(item[1][-1] - item[1][0])))):
        text = shorten(beam.mark, MARK_ROOM, SMALL, bold=True)
        width, height = text_width(text, SMALL, bold=True), line_height(SMALL)
        spans = sorted(
            itertools.pairwise(line),
            key=lambda span: -round(float(np.hypot(*(span[1] - span[0]))), 6),
        )
        angle = upright(math.degrees(math.atan2(*(line[-1] - line[0])[::-1].tolist())))
        box = placer.choose(_beside(spans, width, height, angle, 0.45), penalty=0.05)
        drawing.text(box.x, box.y, text, SMALL, level="box", angle=angle, bold=True, mask=True)


def _beside(
    spans: Sequence[tuple[Array, Array]], width: float, height: float, angle: float, gap: float
) -> Iterator[Box]:
    """Places for a label along a beam: above (left of) it, then below, from the middle outwards."""
    cos, sin = math.cos(math.radians(angle)), math.sin(math.radians(angle))
    for away in (0.0, 1.0):
        for part in (0.5, 0.32, 0.68, 0.2, 0.8):
            for a, b in spans:
                x, y = (a + (b - a) * part).tolist()
                for side in (1.0, -1.0):
                    off = side * (height / 2 + gap + away * height)
                    yield Box(x - off * sin, y + off * cos, width, height, angle)


def _label_panel(
    drawing: Drawing, panel: PanelShape, view: View, placer: Placer, regions: list[Ring]
) -> None:
    """A panel's mark, note and span arrows, as much of it as has room, clear of hatching if possible."""
    seen = clip_ring(panel.corners, view.window)
    if len(seen) < 3:
        return
    ring = pairs(view.at(seen))
    mark, note = shorten(panel.mark, MARK_ROOM, BODY), shorten(panel.note, MARK_ROOM, SMALL)
    directions = [_on_paper(direction, view) for direction in panel.directions]
    for avoid in (True, False):
        for lines, arrows in _variants(mark, note, bool(directions)):
            box = _free_place(ring, _block(lines, arrows), placer, regions if avoid else [])
            if box is not None:
                placer.block(box)
                masked = any(meets(box, region) for region in regions)
                _write_panel(drawing, box, lines, directions if arrows else [], masked)
                return


def _variants(mark: str, note: str, arrows: bool) -> Iterator[tuple[list[tuple[str, float]], bool]]:
    """What a panel's label may consist of, the fullest first."""
    full = [(mark, BODY), (note, SMALL)] if note else [(mark, BODY)]
    if arrows:
        yield full, True
    yield full, False
    if note:
        yield [(mark, BODY)], False
    yield [(mark, 6.0)], False


def _block(lines: list[tuple[str, float]], arrows: bool) -> tuple[float, float]:
    width = max(text_width(text, size) for text, size in lines)
    height = sum(line_height(size) for _, size in lines)
    if arrows:
        return width + 2 * ARROW + 1.4, max(height, 2 * ARROW)
    return width, height


def _free_place(ring: Ring, size: Pair, placer: Placer, regions: list[Ring]) -> Box | None:
    """The place nearest to the panel's centre where a block is inside the panel and in nobody's way."""
    middle = centroid(ring)
    wide = max(x for x, _ in ring) - min(x for x, _ in ring)
    high = max(y for _, y in ring) - min(y for _, y in ring)
    steps = [step * 0.084 for step in range(-5, 6)]
    places = [(middle[0] + a * wide, middle[1] + b * high) for a in steps for b in steps]
    places.sort(key=lambda place: round(math.dist(place, middle), 6))
    for x, y in places:
        box = Box(x, y, *size)
        clear = box.grown(0.7)
        if fits(clear, ring) and placer.cost(clear) == 0 and not any(meets(clear, r) for r in regions):
            return box
    return None


def _write_panel(
    drawing: Drawing, box: Box, lines: list[tuple[str, float]], directions: list[Pair], masked: bool
) -> None:
    left, bottom, right, top = box.bounds()
    if masked:
        drawing.area(box.grown(0.4).corners(), WHITE, HEAVY)
    if directions:
        x, y = left + ARROW, box.y
        for dx, dy in directions:
            for sign in (1.0, -1.0):
                tip = (x + sign * dx * ARROW, y + sign * dy * ARROW)
                arrow(drawing, (x, y), tip, Stroke(THIN, GREY), 1.2, TEXT)
        left += 2 * ARROW + 1.4
    y = (bottom + top + sum(line_height(size) for _, size in lines)) / 2
    for text, size in lines:
        y -= line_height(size) / 2
        drawing.text((left + right) / 2, y, text, size, level="box")
        y -= line_height(size) / 2


def _on_paper(direction: Pair, view: View) -> Pair:
    x, y = direction[0] * view.scale[0], direction[1] * view.scale[1]
    length = math.hypot(x, y)
    return (x / length, y / length)


def _label_supports(
    drawing: Drawing, plan: PlanShape, view: View, placer: Placer, regions: list[Ring]
) -> None:
    """Marks of columns and walls, where there is a free place beside them."""
    points = [(mark, at) for mark, at in plan.columns]
    points += [(mark, line.mean(axis=0)) for mark, line in plan.walls]
    for mark, at in points:
        x, y = view.at(at[None])[0].tolist()
        text = shorten(mark, MARK_ROOM, 6.0)
        width, height = text_width(text, 6.0), line_height(6.0)
        for dx, dy in ((1, -1), (1, 1), (-1, -1), (-1, 1)):
            box = Box(x + dx * (width / 2 + 1.3), y + dy * (height / 2 + 1.0), width, height)
            if placer.cost(box) == 0 and not any(meets(box, region) for region in regions):
                placer.block(box)
                drawing.text(box.x, box.y, text, 6.0, level="box", tone=GREY)
                break


def _locator(
    drawing: Drawing, plan: PlanShape, beam: BeamShape, view: View, width: float, top: float
) -> None:
    """The whole floor, small, with the window framed and the beam in it."""
    a, b, c, d = plan.extent()
    scale = min(30.0 / max(c - a, 1e-6), 16.0 / max(d - b, 1e-6))
    across, up = (c - a) * scale, (d - b) * scale
    origin = np.array([width - across - 2.0, top - up - 1.0])

    def at(points: Array) -> Array:
        placed: Array = (points - np.array([a, b])) * scale + origin
        return placed

    for panel in plan.panels:
        drawing.outline(at(panel.corners), Stroke(HAIR, PALE), FILLS)
    low, under, high, over = view.window
    frame = np.array([(low, under), (high, under), (high, over), (low, over)])
    drawing.outline(at(frame), Stroke(THIN, INK), LINES)
    drawing.line(at(beam.points), Stroke(1.2, INK), HEAVY)
    drawing.text(
        origin[0] - 1.6, origin[1] + up / 2, "framed: the part shown", SMALL, anchor="right", tone=GREY
    )


def _spoken(plan: PlanShape, beam: BeamShape | None, system: System) -> str:
    a, b, c, d = plan.extent()
    size = f"Framing plan, {length(c - a, system)} by {length(d - b, system)}"
    if beam is None:
        marks = _listed([item.mark for item in plan.beams])
        return f"{size}: beams {marks}; panels {_listed([_noted(panel) for panel in plan.panels])}."
    long = float(np.hypot(*np.diff(beam.points, axis=0).T).sum())
    text = f"{size}: beam {beam.mark}, {length(long, system)} long"
    noted = {panel.mark: _noted(panel) for panel in plan.panels}
    draining = list(dict.fromkeys(noted.get(mark, mark) for mark, _ in plan.regions))
    if not draining:
        return f"{text}; no panel drains to it."
    *first, last = draining
    if first:
        return f"{text}; panels {', '.join(first)} and {last} drain to it."
    return f"{text}; panel {last} drains to it."


def _noted(panel: PanelShape) -> str:
    return f"{panel.mark} ({panel.note})" if panel.note else panel.mark


def _listed(names: list[str]) -> str:
    more = len(names) - 12
    text = ", ".join(names[:12]) or "none"
    return f"{text} and {more} more" if more > 0 else text
