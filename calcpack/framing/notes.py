"""What is worth a second look on a plan, though not wrong."""

from __future__ import annotations

import math
from collections.abc import Mapping

from calcpack.framing.bearings import free_points
from calcpack.framing.edges import Edge, edge_name
from calcpack.framing.plan import Plan
from calcpack.framing.plane import dot
from calcpack.framing.types import Bearing, FramedBeam, PanelTransfer
from calcpack.job.model import Beam, Point


def between_panels(plan: Plan, rows: Mapping[str, tuple[Edge, ...]]) -> list[str]:
    """Panels that meet over nothing, and cantilever slabs on either side of one edge."""
    notes = []
    hung: dict[tuple[str, str], str] = {}
    for mark, row in rows.items():
        supported = [edge for edge in row if edge.supported]
        for edge in row:
            for neighbour in edge.neighbours:
                if supported == [edge]:
                    hung[mark, neighbour] = edge_name(plan, edge.line)
                elif not edge.supported and plan.rank_of_panel[mark] < plan.rank_of_panel[neighbour]:
                    notes.append(
                        f"panels {mark} and {neighbour} meet at {edge_name(plan, edge.line)} "
                        "with nothing under it: it is a free edge of both"
                    )
    for (mark, neighbour), where in hung.items():
        if (neighbour, mark) in hung and plan.rank_of_panel[mark] < plan.rank_of_panel[neighbour]:
            notes.append(
                f"panels {mark} and {neighbour} are both cantilever slabs off {where}: "
                "they only balance each other"
            )
    return notes


def passed_over(plan: Plan) -> list[str]:
    """Columns, walls and beams that beams pass over without resting on them."""
    return [note for beam in plan.job.beams for note in _passed_over(plan, beam)]


def _passed_over(plan: Plan, beam: Beam) -> list[str]:
    """Columns and walls under a beam's run that it does not name."""
    close = plan.tolerance.close
    line = plan.beams[beam.mark]
    own = [point for point, free in zip(beam.points, free_points(beam), strict=True) if not free]

    def named(point: Point) -> bool:
        return any(math.dist(point, other) <= close for other in own)

    notes = []
    for column in plan.columns_near(line.start, line.end):
        if line.distance(column.at) <= close and not named(column.at):
            notes.append(
                f"beam {beam.mark} does not rest on column {column.mark}, over which it passes "
                f"at {plan.name(column.at)}: the point is no support in its line"
            )
    for mark in plan.walls_near(line.start, line.end):
        wall = plan.walls[mark]
        stretch = line.beside(wall)
        if stretch is not None and stretch[1] - stretch[0] > close and stretch[2] <= close:
            notes.append(
                f"beam {beam.mark} lies over wall {mark} {plan.stretch(line, *stretch[:2])}: "
                "it rests on it only at the points in its line"
            )
            continue
        at = line.crossing(wall)
        if at is None:
            continue
        point = line.point(at)
        if max(line.distance(point), wall.distance(point)) <= close and not named(point):
            notes.append(
                f"beam {beam.mark} does not rest on wall {mark}, over which it passes "
                f"at {plan.name(point)}: the point is no support in its line"
            )
    for mark in plan.beams_near(line.start, line.end):
        other = plan.beams[mark]
        at = line.crossing(other) if plan.rank[mark] > plan.rank[beam.mark] else None
        if at is None:
            continue
        point = line.point(at)
        ends = (*beam.points, *plan.by_mark[mark].points)
        if max(line.distance(point), other.distance(point)) <= close and all(
            math.dist(point, end) > close for end in ends
        ):
            notes.append(
                f"beams {beam.mark} and {mark} cross at {plan.name(point)} and neither rests on the other: "
                "no load passes there"
            )
    return notes


def twisting(plan: Plan, found: Mapping[str, tuple[Bearing, ...]]) -> list[str]:
    """Fixed ends that rest on a beam: their moment twists or bends it, which is not followed further."""
    notes = []
    for beam in plan.job.beams:
        for fixed, number, end in ((beam.fixed_start, 0, "start"), (beam.fixed_end, -1, "end")):
            row = found.get(beam.mark, ())
            if fixed and row and row[number].kind == "beam":
                carrier = row[number].mark
                along = abs(dot(plan.beams[carrier].direction, plan.beams[beam.mark].direction))
                does = "bends" if along > 0.5 else "twists"
                notes.append(
                    f"beam {beam.mark} is fixed at its {end} to beam {carrier}: "
                    f"its end moment {does} that beam, which its sheet does not follow"
                )
    return notes


def idle(
    plan: Plan, panels: Mapping[str, PanelTransfer], found: Mapping[str, tuple[Bearing, ...]]
) -> list[str]:
    """Columns and walls on which nothing stands."""
    used = {(bearing.kind, bearing.mark) for row in found.values() for bearing in row}
    for transfer in panels.values():
        used.update((share.carrier_kind, share.carrier) for share in transfer.shares)
    notes = [f"column {c.mark} carries nothing" for c in plan.job.columns if ("column", c.mark) not in used]
    return notes + [f"wall {w.mark} carries nothing" for w in plan.job.walls if ("wall", w.mark) not in used]


def lifting(plan: Plan, solved: Mapping[str, FramedBeam]) -> list[str]:
    """Bearings that a beam pulls up under dead load alone."""
    notes = []
    for beam in plan.job.beams:
        framed = solved[beam.mark]
        largest = sum(abs(load.total) for load in framed.loads.get("dead", ()))
        for bearing, reaction in zip(framed.bearings, framed.reactions.get("dead", ()), strict=False):
            if reaction < -1e-9 * largest:
                notes.append(
                    f"beam {beam.mark} lifts off at {bearing.name} under dead load: "
                    f"{bearing.kind} {bearing.mark} has to hold it down"
                )
    return notes
