"""How each panel hands its load on: one way or two, and which share each beam or wall gets."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from calcpack.framing.draining import Basin, nearest_edges, strips_along, unit
from calcpack.framing.edges import Edge, Piece, check_inside, check_overlaps, edge_name, panel_edges
from calcpack.framing.notes import between_panels
from calcpack.framing.plan import Plan
from calcpack.framing.plane import area, dot, edges, smallest_box
from calcpack.framing.types import EdgeShare, PanelTransfer
from calcpack.job.model import Basis, Panel, Point

SQUARE = 1e-3
"""A corner out of square by less than this [rad] is a right angle, as coordinates to the millimetre go."""
SAME_RATIO = 1e-9
NUMBERS = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine")


@dataclass(frozen=True)
class Way:
    """The decision for one panel: which way it spans, and why."""

    transfer: Literal["two-way", "one-way"]
    direction: Point | None
    reason: str


def choose(panel: Panel, supported: Sequence[bool], basis: Basis) -> Way:
    """Decide how a panel spans.

    Parameters
    ----------
    panel : Panel
    supported : sequence of bool
        Edge by edge; one at least.
    basis : Basis

    Returns
    -------
    Way

    Source: common practice; the ratio of sides is the job's ``one_way_ratio``.

    Examples
    --------
    >>> from calcpack.job.model import Place
    >>> outline = ((0.0, 0.0), (9.0, 0.0), (9.0, 4.5), (0.0, 4.5))
    >>> panel = Panel(mark="P1", corners=outline, corner_names=("",) * 4, place=Place(file="job.toml"))
    >>> choose(panel, (True,) * 4, Basis()).reason
    'rectangle supported on four sides, long/short = 2 ≥ 2: spans one way, the short way'
    """
    if panel.transfer == "two-way":
        return Way("two-way", None, "two-way as given")
    if panel.transfer == "one-way x":
        return Way("one-way", (1.0, 0.0), "one-way along x as given")
    if panel.transfer == "one-way y":
        return Way("one-way", (0.0, 1.0), "one-way along y as given")
    count = sum(supported)
    if count == 1:
        (line,) = (edge for edge, held in zip(edges(panel.corners), supported, strict=True) if held)
        x, y = line.direction
        return Way("one-way", (-y, x), "supported on one side only: cantilever slab")
    if not is_rectangle(panel.corners):
        return Way("two-way", None, f"not a rectangle, supported on {_sides(count)}: spans two ways")
    ways = rectangle_ways(panel.corners)
    if count == 2 and supported[0] == supported[2]:
        # edges 0 and 2 run along ways[0], so the span between them runs along ways[1]
        return Way("one-way", ways[1 if supported[0] else 0][0], "rectangle supported on two opposite sides: "
                   "spans one way, between them")  # fmt: skip
    if count < 4:
        adjacent = " that meet" if count == 2 else ""
        return Way("two-way", None, f"rectangle supported on {_sides(count)}{adjacent}: spans two ways")
    (short_way, short), (_, long) = sorted(ways, key=lambda way: way[1])
    ratio, limit = long / short, basis.one_way_ratio
    if ratio >= limit * (1 - SAME_RATIO):
        words = f"long/short = {_shown(max(ratio, limit), limit)} ≥ {limit:g}: spans one way, the short way"
        return Way("one-way", short_way, f"rectangle supported on four sides, {words}")
    words = f"long/short = {_shown(ratio, limit)} < {limit:g}: spans two ways"
    return Way("two-way", None, f"rectangle supported on four sides, {words}")


def _sides(count: int) -> str:
    number = NUMBERS[count] if count < len(NUMBERS) else str(count)
    return f"{number} sides"


def _shown(ratio: float, limit: float) -> str:
    """The ratio, with as many decimals as tell it from the limit."""
    for decimals in range(3, 12):
        text = f"{round(ratio, decimals):.{decimals + 1}g}"
        if float(text) != limit or ratio == limit:
            return text
    return repr(ratio)


def is_rectangle(corners: Sequence[Point]) -> bool:
    """Four corners, each a right angle."""
    lines = edges(corners)
    return len(lines) == 4 and all(
        abs(dot(a.direction, b.direction)) <= SQUARE for a, b in pairwise((*lines, lines[0]))
    )


def rectangle_ways(corners: Sequence[Point]) -> tuple[tuple[Point, float], tuple[Point, float]]:
    """Direction and length of a rectangle's sides: those of edges 0 and 2, those of edges 1 and 3."""
    ways = []
    for a, b, c, d in (corners, (*corners[1:], corners[0])):
        vector = ((b[0] - a[0] + c[0] - d[0]) / 2, (b[1] - a[1] + c[1] - d[1]) / 2)
        ways.append((unit(vector), math.hypot(*vector)))
    return ways[0], ways[1]


def transfers(plan: Plan) -> tuple[dict[str, PanelTransfer], list[str]]:
    """How every panel hands its load on, and what is worth a second look; faults go to the plan.

    Panels with a fault along their edges are left out.
    """
    check_inside(plan)
    check_overlaps(plan)
    rows = {panel.mark: row for panel, row in zip(plan.job.panels, panel_edges(plan), strict=True) if row}
    notes: list[str] = []
    panels = {
        panel.mark: _transfer(plan, panel, rows[panel.mark], notes)
        for panel in plan.job.panels
        if panel.mark in rows
    }
    return panels, [*notes, *between_panels(plan, rows)]


def _transfer(plan: Plan, panel: Panel, row: tuple[Edge, ...], notes: list[str]) -> PanelTransfer:
    supported = tuple(edge.supported for edge in row)
    continuous = tuple(edge.continuous for edge in row)
    basins: dict[int, Basin] = {}
    way = Way("two-way", None, "no support")
    if not any(supported):
        plan.fault(
            panel,
            "corners",
            "the panel has no support: no beam and no wall runs along any of its edges",
            "give a beam or a wall the same two points as an edge of the panel",
        )
    else:
        way = choose(panel, supported, plan.job.basis)
        _check_cantilever(plan, panel, row)
        basins = _basins(plan, panel, row, way, notes)
    shares = tuple(
        share
        for number, basin in sorted(basins.items())
        for piece in row[number].pieces
        if (share := _share(number, row[number], piece, basin)) is not None
    )
    rectangle = is_rectangle(panel.corners)
    if rectangle:
        short, long = sorted(length for _, length in rectangle_ways(panel.corners))
    else:
        short, long = smallest_box(panel.corners)
    return PanelTransfer(
        panel, area(panel.corners), (short, long), rectangle,
        way.transfer, way.direction, way.reason, supported, continuous, shares,
    )  # fmt: skip


def _check_cantilever(plan: Plan, panel: Panel, row: tuple[Edge, ...]) -> None:
    held = [edge for edge in row if edge.supported]
    if len(held) != 1 or held[0].continuous:
        return
    where = edge_name(plan, held[0].line)
    if held[0].neighbours:
        beyond = f"panel {' and panel '.join(held[0].neighbours)} covers only part of the other side"
    else:
        beyond = "no panel lies on the other side"
    plan.fault(
        panel,
        "corners",
        f"the panel is a cantilever slab off {where}, its only support, "
        f"and is not continuous over it: {beyond}",
        "continue the slab over the whole of that edge, or support another edge",
    )


def _basins(plan: Plan, panel: Panel, row: tuple[Edge, ...], way: Way, notes: list[str]) -> dict[int, Basin]:
    lines = [edge.line for edge in row]
    held = [number for number, edge in enumerate(row) if edge.supported]
    noise = plan.tolerance.noise
    if way.direction is None or (panel.transfer == "auto" and len(held) == 1):
        uneven = plan.job.basis.dividing_lines == "60 at continuous edges"
        reach = {number: math.sqrt(3) if uneven and row[number].continuous else 1.0 for number in held}
        return nearest_edges(panel.corners, reach, lines, noise)
    basins, lost, hung = strips_along(way.direction, [edge.supported for edge in row], lines, noise)
    for pair in lost:
        first, last = (edge_name(plan, lines[number]) for number in pair)
        plan.fault(
            panel,
            "transfer",
            f"the strips between {first} and {last} have no support at either end",
            "turn the span, or support one of the two edges",
        )
    for number in hung:
        if len(held) > 1 and not row[number].continuous:
            notes.append(
                f"panel {panel.mark}: strips cantilever off {edge_name(plan, lines[number])}, "
                "over which the slab does not continue"
            )
    return basins


def _share(number: int, edge: Edge, piece: Piece, basin: Basin) -> EdgeShare | None:
    """What one beam or wall under an edge gets, with places along the beam or wall; None for nothing."""
    drained = basin.onto(piece.start, piece.end)
    if not drained.region:
        return None
    length, reached = piece.end - piece.start, abs(piece.at_end - piece.at_start)
    # 1 but for what the user's points are apart; keeps the load whole
    scale = length / reached if abs(reached / length - 1) > 1e-12 else 1.0
    way = math.copysign(1 / scale, piece.at_end - piece.at_start)

    def at(along: float) -> float:
        if along == piece.end:
            return piece.at_end
        return piece.at_start + (along - piece.start) * way

    depth = [(at(along), value * scale) for along, value in drained.depth]
    return EdgeShare(
        edge=number,
        carrier=piece.mark,
        carrier_kind=piece.kind,
        region=drained.region,
        depth=tuple(depth if way > 0 else reversed(depth)),
        ends=tuple(sorted((at(along), size) for along, size in drained.ends)),
        area=area(drained.region),
        continuous=edge.continuous,
    )
