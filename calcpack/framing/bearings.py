"""What every beam stands on, and the order in which beams can be solved."""

from __future__ import annotations

import heapq
import math
from collections.abc import Mapping
from itertools import pairwise

from calcpack.framing.plan import NEARLY, Plan
from calcpack.framing.types import Bearing
from calcpack.job.model import Beam, Point


def check_falling(plan: Plan) -> None:
    """Fault beams with fewer restraints than they need."""
    for beam in plan.job.beams:
        held = [name for name, free in zip(beam.point_names, free_points(beam), strict=True) if not free]
        if len(held) + beam.fixed_start + beam.fixed_end < 2:
            only = f"only at {held[0]}, about which it turns over" if held else "nowhere"
            plan.fault(
                beam,
                "line",
                f"the beam falls over: it is held {only}",
                "it needs two supports, or one support with that end fixed",
            )


def free_points(beam: Beam) -> tuple[bool, ...]:
    """For each of a beam's points whether it is a free tip."""
    middle = (False,) * (len(beam.points) - 2)
    return (beam.free_start, *middle, beam.free_end)


def bearings(plan: Plan) -> dict[str, tuple[Bearing, ...]]:
    """What stands under each point of each beam that is not a free tip; faults go to the plan.

    A column goes before a wall, a wall before a beam, the first in the file before the next.
    """
    found: dict[str, tuple[Bearing, ...]] = {}
    meetings: list[Point] = []
    for beam in plan.job.beams:
        row = []
        for at, point, name, free in zip(
            plan.places(beam), beam.points, beam.point_names, free_points(beam), strict=True
        ):
            if not free:
                bearing = _bearing(plan, beam, point, name, at, meetings)
                row += [bearing] if bearing else []
        found[beam.mark] = tuple(row)
    return found


def _bearing(
    plan: Plan, beam: Beam, point: Point, name: str, at: float, meetings: list[Point]
) -> Bearing | None:
    close = plan.tolerance.close
    for column in plan.columns_near(point):
        if math.dist(column.at, point) <= close:
            return Bearing(at, "column", column.mark, name)
    for mark in plan.walls_near(point):
        if plan.walls[mark].distance(point) <= close:
            return Bearing(at, "wall", mark, name)
    carriers: list[str] = []
    others: list[str] = []
    for mark in plan.beams_near(point):
        if mark != beam.mark and plan.beams[mark].distance(point) <= close:
            (others if _stands_at(plan, plan.by_mark[mark], point) else carriers).append(mark)
    if len(carriers) == 1:
        return Bearing(at, "beam", carriers[0], name)
    if carriers:
        both = " and ".join(f"beam {mark}" for mark in carriers)
        message = f"{both} both pass under {name}: it is not clear which of them carries the beam"
        plan.fault(beam, "line", message, "put a column there, or end one of them before it")
    elif others:
        if all(math.dist(point, meeting) > close for meeting in meetings):
            meetings.append(point)
            met = " and ".join(f"beam {mark}" for mark in others)
            message = (
                f"nothing stands under {name}, where the beam meets {met}: "
                "each names the point as a support of its own"
            )
            remedy = "put a column or a wall there, or let one of them pass under it without naming it"
            plan.fault(beam, "line", message, remedy)
    else:
        message = f"nothing stands under {name}: no column, no wall and no beam{_nearest(plan, point)}"
        remedy = (
            "support the beam there, or name that end in 'free'"
            if at in (0.0, plan.beams[beam.mark].length)
            else ("support the beam there, or take the point out of its line")
        )
        plan.fault(beam, "line", message, remedy)
    return None


def _stands_at(plan: Plan, beam: Beam, point: Point) -> bool:
    """Whether a point is a support of the beam's own."""
    return any(
        not free and math.dist(own, point) <= plan.tolerance.close
        for own, free in zip(beam.points, free_points(beam), strict=True)
    )


def _nearest(plan: Plan, point: Point) -> str:
    """In words, what all but stands under a point."""
    found = [(math.dist(column.at, point), f"column {column.mark}") for column in plan.columns_near(point)]
    found += [(plan.walls[mark].distance(point), f"wall {mark}") for mark in plan.walls_near(point)]
    found += [
        (plan.beams[mark].distance(point), f"beam {mark}")
        for mark in plan.beams_near(point)
        if plan.tolerance.close < plan.beams[mark].distance(point)
    ]
    near = [entry for entry in found if entry[0] <= 2 * NEARLY]
    if not near:
        return ""
    gap, what = min(near)
    return f" ({what} misses it by {plan.length(gap)})"


def solving_order(plan: Plan, found: Mapping[str, tuple[Bearing, ...]]) -> tuple[str, ...]:
    """The beams so that each comes before those that carry it; among those free to go, the job's order.

    A ring of beams in which every one stands on the next is a fault, which goes to the plan.
    """
    carriers = {
        mark: {bearing.mark for bearing in row if bearing.kind == "beam"} for mark, row in found.items()
    }
    waiting = dict.fromkeys(found, 0)
    for marks in carriers.values():
        for mark in marks:
            waiting[mark] += 1
    order: list[str] = []
    ready = [plan.rank[mark] for mark, count in waiting.items() if not count]
    heapq.heapify(ready)
    while len(order) < len(found):
        if not ready:
            ring = _ring(plan, carriers, set(found) - set(order))
            _fault_ring(plan, ring)
            freed = ring[0]  # taken out, so that what is left can be looked at
            waiting[freed] = 0
            heapq.heappush(ready, plan.rank[freed])
        mark = plan.job.beams[heapq.heappop(ready)].mark
        order.append(mark)
        for carrier in carriers[mark]:
            waiting[carrier] -= 1
            if waiting[carrier] == 0:
                heapq.heappush(ready, plan.rank[carrier])
    return tuple(order)


def _ring(plan: Plan, carriers: Mapping[str, set[str]], left: set[str]) -> list[str]:
    """A ring among beams every one of which carries another of them; each stands on the next."""
    walk = [min(left, key=plan.rank.__getitem__)]
    while True:
        above = (mark for mark in left if walk[-1] in carriers[mark])
        mark = min(above, key=plan.rank.__getitem__)
        if mark in walk:
            ring = walk[walk.index(mark) :][::-1]
            first = ring.index(min(ring, key=plan.rank.__getitem__))
            return ring[first:] + ring[:first]
        walk.append(mark)


def _fault_ring(plan: Plan, ring: list[str]) -> None:
    first, *rest = ring
    chain = [f"{first} stands on {rest[0]}", *(f"{a} on {b}" for a, b in pairwise([*rest, first]))]
    plan.fault(
        plan.by_mark[first],
        "line",
        f"the beams stand on each other in a ring: {', '.join(chain)}",
        "put a column or a wall under one of these points",
    )
