"""One panel: how it is divided among the edges that hold it."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator, Sequence
from typing import NotRequired, TypedDict

import numpy as np

from calcpack.figures.drawing import (
    BODY,
    FILLS,
    GREY,
    HAIR,
    HEAVY,
    INK,
    LINES,
    PALE,
    SMALL,
    THIN,
    WHITE,
    Drawing,
    Stroke,
)
from calcpack.figures.figure import Figure
from calcpack.figures.labels import Box, Placer, fits
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.parts import arrow, dimension_chain, length, line_height
from calcpack.figures.plan_data import Coordinates, span_directions
from calcpack.figures.shapes import Array, Pair, centroid, circle, pairs
from calcpack.sheet.display import System, show

MOST_TICKS = 6  # more dimensions in a row than that cannot be read
ARC = 4.2  # radius of an angle's arc [mm]


class ShareData(TypedDict):
    """What drains to one beam or wall under an edge."""

    edge: int  # from corner ``edge`` to the next
    carrier: str
    carrier_kind: str  # "beam" | "wall"
    region: Sequence[Coordinates]  # outline [m]
    area: float  # [m2]
    continuous: bool


class DividedPanelData(TypedDict):
    """A panel with its shares; lengths in m."""

    mark: str
    corners: Sequence[Coordinates]
    shares: Sequence[ShareData]
    note: NotRequired[str]
    transfer: NotRequired[str]
    direction: NotRequired[Coordinates | None]


def panel_drainage(panel: DividedPanelData, system: System = "SI", width_mm: float = 70.0) -> Figure:
    """A panel with its dividing lines, the areas that drain to each edge, and what fixes their shape.

    Parameters
    ----------
    panel : DividedPanelData
        The outline going round, and the shares edge by edge. An edge without a share is free.
    system : "SI" or "US"
    width_mm : float [mm]

    Returns
    -------
    Figure

    Examples
    --------
    >>> share = {"carrier_kind": "beam", "area": 4.0, "continuous": False}
    >>> square = [[0, 0], [4, 0], [4, 4], [0, 4]]
    >>> shares = [
    ...     {"edge": n, "carrier": f"B{n + 1}", "region": [square[n], square[(n + 1) % 4], [2, 2]], **share}
    ...     for n in range(4)
    ... ]
    >>> print(panel_drainage({"mark": "P1", "corners": square, "shares": shares}).alt)
    Panel P1 drains to B1 4.00 m², B2 4.00 m², B3 4.00 m² and B4 4.00 m².
    """
    corners = np.asarray(panel["corners"], dtype=float)
    shares = panel["shares"]
    turn = _turn(corners)
    frame = np.array([[math.cos(turn), -math.sin(turn)], [math.sin(turn), math.cos(turn)]])
    # In its own frame a turned rectangle stands upright: dimensions run along its edges.
    local = corners @ frame
    low, high = local.min(axis=0), local.max(axis=0)
    scale = min((width_mm - 16.0) / (high[0] - low[0]), 0.8 * width_mm / (high[1] - low[1]))
    left = (width_mm - 9.0 - (high[0] - low[0]) * scale) / 2
    shift = np.array([max(left, 4.0), 0.0]) - low * scale

    def at(points: Sequence[Coordinates] | Array) -> Array:
        placed: Array = np.asarray(points, dtype=float) @ frame * scale + shift
        return placed

    drawing = Drawing()
    placer = Placer((0.3, -1e9, width_mm - 0.3, 1e9))
    ring = at(corners)
    regions = [at(share["region"]) for share in shares]
    _edges(drawing, ring, shares)
    for region, share in zip(regions, shares, strict=True):
        upright = _steep(ring, share["edge"])
        drawing.hatch(region, 135.0 if upright else 45.0, 1.5, Stroke(HAIR, PALE))
        drawing.outline(region, Stroke(0.5))
    _angles(drawing, placer, ring, regions, shares)
    for region, share in zip(regions, shares, strict=True):
        _name_region(drawing, placer, region, share, system)
    half = _half_side(panel, local, shares)
    _dimensions(drawing, [ring, *regions], scale, system, half, width_mm)
    _title(drawing, panel, ring, frame)
    return drawing.finish(width_mm, _spoken(panel, system))


def _turn(corners: Array) -> float:
    """Angle [radians] of a rectangle's flatter side; 0 for any other outline."""
    sides = np.roll(corners, -1, axis=0) - corners
    lengths = np.hypot(sides[:, 0], sides[:, 1])
    following = np.roll(sides, -1, axis=0)
    square = np.abs((sides * following).sum(axis=1)) < 1e-9 * lengths * np.roll(lengths, -1)
    if len(corners) != 4 or not square.all():
        return 0.0
    angle = math.atan2(float(sides[0, 1]), float(sides[0, 0])) % (math.pi / 2)
    return angle - math.pi / 2 if angle > math.pi / 4 + 1e-9 else angle


def _steep(ring: Array, edge: int) -> bool:
    side = ring[(edge + 1) % len(ring)] - ring[edge]
    return bool(abs(side[1]) > abs(side[0]))


def _edges(drawing: Drawing, ring: Array, shares: Sequence[ShareData]) -> None:
    """Beams and walls under the edges, free edges dashed, neighbours' slabs begun beyond continuous ones."""
    held = {share["edge"]: share for share in shares}
    middle = np.asarray(centroid(ring))
    for number, (start, end) in enumerate(zip(ring, np.roll(ring, -1, axis=0), strict=True)):
        share = held.get(number)
        if share is None:
            drawing.line([start, end], Stroke(THIN, INK, (3.0, 1.5)), HEAVY)
        elif share["carrier_kind"] == "wall":
            drawing.line([start, end], Stroke(4.6, INK, cap="projecting"), LINES)
            drawing.line([start, end], Stroke(3.8, PALE, cap="projecting"), LINES)
        else:
            drawing.line([start, end], Stroke(1.4), HEAVY)
        if share is not None and share["continuous"]:
            side = (end - start) / float(np.hypot(*(end - start)))
            out = np.array([side[1], -side[0]])
            out = out if float(out @ (start - middle)) > 0 else -out
            for corner in (start, end):
                drawing.line([corner, corner + 2.2 * out], Stroke(HAIR, GREY), FILLS)


def _angles(
    drawing: Drawing, placer: Placer, ring: Array, regions: list[Array], shares: Sequence[ShareData]
) -> None:
    """The angle between an edge and the dividing line at its corner: each different one once."""
    seen: set[float] = set()
    found = [
        item
        for region, share in zip(regions, shares, strict=True)
        for item in _corner_angles(ring, region, share["edge"])
    ]
    # Of the two angles at a corner the larger one is told, and first that of the lowest corner.
    best: dict[Pair, tuple[float, float, float]] = {}
    for corner, angle, start, end in found:
        if angle > best.get(corner, (0.0, 0.0, 0.0))[0] + 1e-6:
            best[corner] = (angle, start, end)
    for corner in sorted(best, key=lambda point: (round(point[1], 3), round(point[0], 3))):
        angle, start, end = best[corner]
        if round(angle, 1) in seen or angle < 12.0:
            continue
        seen.add(round(angle, 1))
        x, y = corner
        drawing.line(circle(x, y, ARC, start, end), Stroke(HAIR, INK), LINES)
        text, middle = f"{round(angle, 1):g}°", math.radians((start + end) / 2)
        width, height = text_width(text, SMALL), line_height(SMALL)
        # In a narrow angle the figure stands farther out, where it fits between the lines.
        narrow = min(0.6 * height / math.sin(math.radians(angle) / 2), 11.0)
        reach = max(ARC + 0.8 + width / 2, narrow)
        box = Box(x + reach * math.cos(middle), y + reach * math.sin(middle), width, height)
        placer.block(box)
        drawing.text(box.x, box.y, text, SMALL, level="box", mask=True)


def _corner_angles(ring: Array, region: Array, edge: int) -> Iterator[tuple[Pair, float, float, float]]:
    """Where a region's side leaves a corner of its edge: the corner, the angle, from and to [degrees]."""
    count = len(region)
    for here, there in ((edge, (edge + 1) % len(ring)), ((edge + 1) % len(ring), edge)):
        corner, along = ring[here], ring[there] - ring[here]
        for n in range(count):
            if float(np.hypot(*(region[n] - corner))) > 1e-6:
                continue
            base = math.degrees(math.atan2(along[1], along[0]))
            for other in (region[n - 1], region[(n + 1) % count]):
                side = other - corner
                if float(np.hypot(*side)) < 1e-9:
                    continue
                off = (math.degrees(math.atan2(side[1], side[0])) - base + 180.0) % 360.0 - 180.0
                if 1.0 < abs(off) < 89.0:
                    x, y = corner.tolist()
                    yield (round(x, 6), round(y, 6)), abs(off), base, base + off


def _name_region(drawing: Drawing, placer: Placer, region: Array, share: ShareData, system: System) -> None:
    """The carrier's mark and the area, where the region has room for them."""
    ring = pairs(region)
    mark, area = shorten(share["carrier"], 18.0, BODY, bold=True), show(share["area"], "m^2", system)
    variants: list[list[tuple[str, float, bool]]] = [
        [(mark, BODY, True), (area, SMALL, False)],
        [(f"{mark} {area}", SMALL, False)],
        [(mark, SMALL, True)],
    ]
    middle = centroid(ring)
    wide = max(x for x, _ in ring) - min(x for x, _ in ring)
    high = max(y for _, y in ring) - min(y for _, y in ring)
    steps = [step * 0.05 for step in range(-8, 9)]
    places = [(middle[0] + a * wide, middle[1] + b * high) for a in steps for b in steps]
    places.sort(key=lambda place: round(math.dist(place, middle), 6))
    for lines in variants:
        width = max(text_width(text, size, bold) for text, size, bold in lines)
        height = sum(line_height(size) for _, size, _ in lines)
        for x, y in places:
            box = Box(x, y, width + 1.0, height + 0.4)
            if fits(box, ring) and placer.cost(box) == 0:
                placer.block(box)
                drawing.area(box.corners(), WHITE, LINES)
                top = y + height / 2
                for text, size, bold in lines:
                    drawing.text(x, top - line_height(size) / 2, text, size, level="box", bold=bold)
                    top -= line_height(size)
                return


def _half_side(panel: DividedPanelData, local: Array, shares: Sequence[ShareData]) -> float | None:
    """Half the short side [m] where 45° lines divide a rectangle held on all sides."""
    upright = len(local) == 4 and len(np.unique(np.round(local[:, 0], 6))) == 2
    if (
        panel.get("transfer", "two-way") != "two-way"
        or not upright
        or {s["edge"] for s in shares} != {0, 1, 2, 3}
    ):
        return None
    return float((local.max(axis=0) - local.min(axis=0)).min()) / 2


def _dimensions(
    drawing: Drawing, rings: list[Array], scale: float, system: System, half: float | None, width: float
) -> None:
    """Chains under the panel and at its right, over corners and the ends of dividing lines."""
    low, high = rings[0].min(axis=0), rings[0].max(axis=0)
    for axis in (0, 1):
        ticks = _ticks([ring[:, axis] for ring in rings])
        if len(ticks) > MOST_TICKS + 1:
            ticks = _ticks([rings[0][:, axis]])
        labels = []
        for a, b in itertools.pairwise(ticks):
            plain = length(round((b - a) / scale, 6), system)
            named = f"S/2 = {plain}"
            is_half = half is not None and abs((b - a) / scale - half) < 1e-6
            labels.append(named if is_half and text_width(named, SMALL) + 1.0 <= b - a else plain)
        if axis == 0:
            dimension_chain(drawing, ticks, labels, (0.0, float(low[1]) - 4.6), bounds=(0.5, width - 0.5))
        else:
            dimension_chain(drawing, ticks, labels, (float(high[0]) + 4.8, 0.0), 90.0)


def _ticks(values: list[Array]) -> list[float]:
    """Different values, rising."""
    ordered = sorted(float(value) for item in values for value in item)
    return [b for a, b in itertools.pairwise([-math.inf, *ordered]) if b - a > 1e-4]


def _title(drawing: Drawing, panel: DividedPanelData, ring: Array, frame: Array) -> None:
    """The panel's mark, its load, its span arrows, above it."""
    x, y = float(ring[:, 0].min()), float(ring[:, 1].max()) + 2.6
    mark, note = shorten(panel["mark"], 24.0, BODY, bold=True), shorten(panel.get("note", ""), 24.0, SMALL)
    right = drawing.text(x, y, mark, BODY, anchor="left", level="base", bold=True).bounds()[2]
    if words := ", ".join(filter(None, [panel.get("transfer", ""), note])):
        right = drawing.text(right + 1.6, y, words, SMALL, anchor="left", level="base").bounds()[2]
    corners = np.asarray(panel["corners"], dtype=float)
    for dx, dy in (np.asarray(span_directions(corners, panel)).reshape(-1, 2) @ frame).tolist():
        for reach in (2.2, -2.2):
            middle = (right + 4.0, y + 0.9)
            tip = (middle[0] + reach * dx, middle[1] + reach * dy)
            arrow(drawing, middle, tip, Stroke(THIN, GREY), 1.1)


def _spoken(panel: DividedPanelData, system: System) -> str:
    areas: dict[str, float] = {}
    for share in panel["shares"]:
        areas[share["carrier"]] = areas.get(share["carrier"], 0.0) + share["area"]
    parts = [f"{carrier} {show(area, 'm^2', system)}" for carrier, area in areas.items()]
    if not parts:
        return f"Panel {panel['mark']} drains nowhere."
    *first, last = parts
    listed = f"{', '.join(first)} and {last}" if first else last
    return f"Panel {panel['mark']} drains to {listed}."
