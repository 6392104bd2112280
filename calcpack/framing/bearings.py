"""What every beam stands on, and the order in which beams can be solved."""

from __future__ import annotations

import heapq
from collections.abc import Mapping
from itertools import pairwise

from calcpack.framing.plan import NEARLY, Plan
from calcpack.framing.plane import dot
from calcpack.framing.types import Bearing
from calcpack.job.errors import Problem
from calcpack.job.model import Beam, Point


def beam_problems(plan: Plan) -> list[Problem]:
    """What is wrong with beams and walls taken by themselves: their points, ends and restraints."""
    problems = []
    close = plan.tolerance.close
    for wall in plan.job.walls:
        if wall.mark not in plan.walls:
            message = f"the wall starts and ends at the same point, {plan.name(wall.line[0])}"
            problems.append(plan.problem(wall, "line", message, "give two different points"))
    for beam in plan.job.beams:
        if beam.mark not in plan.beams:
            message = f"the beam starts and ends at the same point, {plan.name(beam.points[0])}"
            problems.append(plan.problem(beam, "line", message, "give two different points"))
            continue
        line = plan.beams[beam.mark]
        places = [line.place(point) for point in beam.points]
        for number, (along, left) in enumerate(places):
            if abs(left) > close:
                ends = plan.stretch(line, 0.0, line.length)
                foot = plan.coordinates(line.point(along), 8)
                problems.append(
                    plan.problem(
                        beam,
                        "line",
                        f"{beam.point_names[number]} lies {plan.length(abs(left))} off the line {ends}",
                        f"a beam is straight: the point of its line nearest to it is {foot}",
                    )
                )
        for number, ((a, _), (b, _)) in enumerate(pairwise(places)):
            if b - a <= close:
                here, there = beam.point_names[number : number + 2]
                what = "is the same point as" if abs(b - a) <= close else "comes before"
                message = f"the points are out of order: along the beam {there} {what} {here}"
                problems.append(plan.problem(beam, "line", message, "list them from start to end"))
        problems += _end_problems(plan, beam)
    return problems


def _end_problems(plan: Plan, beam: Beam) -> list[Problem]:
    problems = []
    ends = (("start", beam.fixed_start, beam.free_start), ("end", beam.fixed_end, beam.free_end))
    for end, fixed, free in ends:
        if fixed and free:
            message = f"the {end} is both fixed and free"
            remedy = "an end held against rotation has a support: take it out of one of the two"
            problems.append(plan.problem(beam, "free", message, remedy))
    held = [name for name, free in zip(beam.point_names, _free(beam), strict=True) if not free]
    if not problems and len(held) + beam.fixed_start + beam.fixed_end < 2:
        only = f"only at {held[0]}, about which it turns over" if held else "nowhere"
        problems.append(
            plan.problem(
                beam,
                "line",
                f"the beam falls over: it is held {only}",
                "it needs two supports, or one support with that end fixed",
            )
        )
    return problems


def _free(beam: Beam) -> tuple[bool, ...]:
    """For each of a beam's points whether it is a free tip."""
    middle = (False,) * (len(beam.points) - 2)
    return (beam.free_start, *middle, beam.free_end)


def bearings(plan: Plan) -> tuple[dict[str, tuple[Bearing, ...]], list[Problem], list[str]]:
    """What stands under each point of each beam that is not a free tip.

    A column goes before a wall, a wall before a beam, the first in the file before the next.

    Returns
    -------
    bearings : dict of mark -> tuple of Bearing
    problems : list
    notes : list of str
        Columns and walls that a beam passes over.
    """
    found: dict[str, tuple[Bearing, ...]] = {}
    problems: list[Problem] = []
    notes: list[str] = []
    meetings: list[Point] = []
    for beam in plan.job.beams:
        if beam.mark not in plan.beams:
            continue
        row = []
        for at, point, name, free in zip(
            plan.places(beam), beam.points, beam.point_names, _free(beam), strict=True
        ):
            if not free:
                bearing = _bearing(plan, beam, point, name, at, meetings, problems)
                row += [bearing] if bearing else []
        found[beam.mark] = tuple(row)
        notes += _passed_over(plan, beam)
    return found, problems, notes


def _bearing(
    plan: Plan, beam: Beam, point: Point, name: str, at: float, meetings: list[Point], problems: list[Problem]
) -> Bearing | None:
    close = plan.tolerance.close
    for column in plan.columns_near(point):
        if _apart(column.at, point) <= close:
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
        problems.append(
            plan.problem(beam, "line", message, "put a column there, or end one of them before it")
        )
    elif others:
        if all(_apart(point, meeting) > close for meeting in meetings):
            meetings.append(point)
            met = " and ".join(f"beam {mark}" for mark in others)
            message = (
                f"nothing stands under {name}, where the beam meets {met}: "
                "each names the point as a support of its own"
            )
            remedy = "put a column or a wall there, or let one of them pass under it without naming it"
            problems.append(plan.problem(beam, "line", message, remedy))
    else:
        message = f"nothing stands under {name}: no column, no wall and no beam{_nearest(plan, point)}"
        remedy = (
            "support the beam there, or name that end in 'free'"
            if at in (0.0, plan.beams[beam.mark].length)
            else ("support the beam there, or take the point out of its line")
        )
        problems.append(plan.problem(beam, "line", message, remedy))
    return None


def _stands_at(plan: Plan, beam: Beam, point: Point) -> bool:
    """Whether a point is a support of the beam's own."""
    return any(
        not free and _apart(own, point) <= plan.tolerance.close
        for own, free in zip(beam.points, _free(beam), strict=True)
    )


def _nearest(plan: Plan, point: Point) -> str:
    """In words, what all but stands under a point."""
    found = [(_apart(column.at, point), f"column {column.mark}") for column in plan.columns_near(point)]
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


def _apart(a: Point, b: Point) -> float:
    x, y = a[0] - b[0], a[1] - b[1]
    return float((x * x + y * y) ** 0.5)


def _passed_over(plan: Plan, beam: Beam) -> list[str]:
    """Columns and walls under a beam's run that it does not name."""
    close = plan.tolerance.close
    line = plan.beams[beam.mark]
    own = [point for point, free in zip(beam.points, _free(beam), strict=True) if not free]

    def named(point: Point) -> bool:
        return any(_apart(point, other) <= close for other in own)

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
            _apart(point, end) > close for end in ends
        ):
            notes.append(
                f"beams {beam.mark} and {mark} cross at {plan.name(point)} and neither rests on the other: "
                "no load passes there"
            )
    return notes


def solving_order(
    plan: Plan, found: Mapping[str, tuple[Bearing, ...]]
) -> tuple[tuple[str, ...], list[Problem]]:
    """The beams so that each comes before those that carry it; among those free to go, the job's order.

    Returns
    -------
    order : tuple of marks
    problems : list
        One for each ring of beams in which every one stands on the next.
    """
    carriers = {
        mark: {bearing.mark for bearing in row if bearing.kind == "beam"} for mark, row in found.items()
    }
    waiting = dict.fromkeys(found, 0)
    for marks in carriers.values():
        for mark in marks:
            waiting[mark] += 1
    order: list[str] = []
    problems: list[Problem] = []
    ready = [plan.rank[mark] for mark, count in waiting.items() if not count]
    heapq.heapify(ready)
    while len(order) < len(found):
        if not ready:
            ring = _ring(plan, carriers, set(found) - set(order))
            problems.append(_ring_problem(plan, ring))
            freed = ring[0]  # taken out, so that what is left can be looked at
            waiting[freed] = 0
            heapq.heappush(ready, plan.rank[freed])
        mark = plan.job.beams[heapq.heappop(ready)].mark
        order.append(mark)
        for carrier in carriers[mark]:
            waiting[carrier] -= 1
            if waiting[carrier] == 0:
                heapq.heappush(ready, plan.rank[carrier])
    return tuple(order), problems


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


def _ring_problem(plan: Plan, ring: list[str]) -> Problem:
    first, *rest = ring
    chain = [f"{first} stands on {rest[0]}", *(f"{a} on {b}" for a, b in pairwise([*rest, first]))]
    return plan.problem(
        plan.by_mark[first],
        "line",
        f"the beams stand on each other in a ring: {', '.join(chain)}",
        "put a column or a wall under one of these points",
    )


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
