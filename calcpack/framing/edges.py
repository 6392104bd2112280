"""What runs along the edges of the panels: beams and walls under them, panels beyond them."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations, pairwise
from typing import Literal

from calcpack.framing.plan import NEARLY, Plan
from calcpack.framing.plane import Interval, Line, between, clipped, cross, gaps, inside
from calcpack.job.errors import Problem
from calcpack.job.model import Beam, Panel, Wall

Kind = Literal["beam", "wall"]


@dataclass(frozen=True)
class Piece:
    """A part of an edge with one beam or wall under it.

    Parameters
    ----------
    start, end : float [m]
        Along the edge.
    kind, mark :
        What is under it.
    at_start, at_end : float [m]
        The same two places along the beam or wall from its own start.
    """

    start: float
    end: float
    kind: Kind
    mark: str
    at_start: float
    at_end: float


@dataclass(frozen=True)
class Edge:
    """A panel's edge and what runs along it.

    Parameters
    ----------
    line : Line
    pieces : tuple of Piece
        Covering the whole edge without gap or overlap, or none: a free edge.
    neighbours : tuple of marks
        Panels beyond the edge.
    continuous : bool
        They cover all of it.
    """

    line: Line
    pieces: tuple[Piece, ...]
    neighbours: tuple[str, ...]
    continuous: bool

    @property
    def supported(self) -> bool:
        """Something runs along it."""
        return bool(self.pieces)


def panel_edges(plan: Plan) -> tuple[list[tuple[Edge, ...]], list[Problem]]:
    """The edges of every panel, and what is wrong with what runs along them.

    Returns
    -------
    edges : list of tuples of Edge, panel by panel
        An edge with a fault is left free.
    problems : list
    """
    problems: list[Problem] = []
    found = []
    for number, panel in enumerate(plan.job.panels):
        row = []
        for line in plan.panels[number]:
            neighbours, beyond = _beyond(plan, number, line)
            pieces = _pieces(plan, panel, line, problems)
            row.append(Edge(line, pieces, neighbours, not gaps(beyond, line.length, plan.tolerance.close)))
        found.append(tuple(row))
    return found, problems


def _beyond(plan: Plan, number: int, line: Line) -> tuple[tuple[str, ...], list[Interval]]:
    """The panels on the other side of an edge, and the stretches of it they cover."""
    marks, covered = [], []
    for other in plan.panel_boxes.near((line.start, line.end)):
        for edge in plan.panels[other] if other != number else ():
            if (stretch := line.beside(edge)) is not None:
                start, end, gap = stretch
                if gap <= plan.tolerance.close < end - start:
                    marks.append(plan.job.panels[other].mark)
                    covered.append((start, end))
    return tuple(marks), covered


def _pieces(plan: Plan, panel: Panel, line: Line, problems: list[Problem]) -> tuple[Piece, ...]:
    """What runs under an edge, in order along it; empty for a free edge and where something is wrong."""
    close = plan.tolerance.close
    pieces: list[Piece] = []
    faults: list[Problem] = []
    for kind, mark, run in _runs(plan, line):
        stretch = line.beside(run)
        if stretch is None or stretch[1] - stretch[0] <= close:
            continue
        start, end, gap = stretch
        if gap <= close:
            carrier = plan.beams[mark] if kind == "beam" else plan.walls[mark]
            at = [carrier.place(line.point(along))[0] for along in (start, end)]
            pieces.append(Piece(start, end, kind, mark, at[0], at[1]))
        elif gap <= NEARLY and end - start > 10 * NEARLY:
            faults.append(_beside(plan, panel, line, kind, mark, stretch))
    pieces.sort(key=lambda piece: (piece.start, piece.end))
    open_parts = gaps(((piece.start, piece.end) for piece in pieces), line.length, close)
    if pieces and open_parts and not faults:
        faults.append(_partly(plan, panel, line, pieces, open_parts))
    for first, second in combinations(pieces, 2):
        if min(first.end, second.end) - second.start > close:
            faults.append(_two_supports(plan, panel, line, first, second))
    problems += faults
    return () if faults or not pieces else _joined(plan, line, pieces)


def _runs(plan: Plan, line: Line) -> list[tuple[Kind, str, Line]]:
    """Every straight run of a beam or wall near a line."""
    found: list[tuple[Kind, str, Line]] = []
    for mark in plan.beams_near(line.start, line.end):
        found += [("beam", mark, run) for run in plan.runs(plan.by_mark[mark])]
    found += [("wall", mark, plan.walls[mark]) for mark in plan.walls_near(line.start, line.end)]
    return found


def _joined(plan: Plan, line: Line, pieces: list[Piece]) -> tuple[Piece, ...]:
    """The pieces with their ends brought together, so that they cover the edge exactly.

    Places on a beam that are one of its points, or one of its ends, are moved onto it.
    """
    cuts = [0.0, *(piece.start for piece in pieces[1:]), line.length]
    joined = []
    for piece, (start, end) in zip(pieces, pairwise(cuts), strict=True):
        if piece.kind == "beam":
            knots = plan.places(plan.by_mark[piece.mark])
        else:
            knots = (0.0, plan.walls[piece.mark].length)
        at = [_snapped(place, knots, plan.tolerance.close) for place in (piece.at_start, piece.at_end)]
        joined.append(Piece(start, end, piece.kind, piece.mark, at[0], at[1]))
    return tuple(joined)


def _snapped(place: float, knots: tuple[float, ...], close: float) -> float:
    nearest = min(knots, key=lambda knot: abs(knot - place))
    return nearest if abs(nearest - place) <= close else place


def edge_name(plan: Plan, line: Line) -> str:
    """An edge in words.

    Named by its two corners: "the edge from A1 to B1".
    """
    return f"the edge {plan.stretch(line, 0.0, line.length)}"


def _partly(
    plan: Plan, panel: Panel, line: Line, pieces: list[Piece], parts: tuple[Interval, ...]
) -> Problem:
    missing = " and ".join(plan.stretch(line, *part) for part in parts)
    there = " and ".join(dict.fromkeys(f"{piece.kind} {piece.mark}" for piece in pieces))
    return plan.problem(
        panel,
        "corners",
        f"{edge_name(plan, line)} is supported only in part, by {there}: nothing runs along it {missing}",
        "support it along its whole length, or divide the panel where the support ends",
    )


def _two_supports(plan: Plan, panel: Panel, line: Line, first: Piece, second: Piece) -> Problem:
    where = plan.stretch(line, second.start, min(first.end, second.end))
    return plan.problem(
        panel,
        "corners",
        f"{edge_name(plan, line)} has two supports on the same stretch: "
        f"{first.kind} {first.mark} and {second.kind} {second.mark} both run along it {where}",
        "take one of them away there, or let one end where the other begins",
    )


def _beside(
    plan: Plan, panel: Panel, line: Line, kind: Kind, mark: str, stretch: tuple[float, float, float]
) -> Problem:
    return plan.problem(
        panel,
        "corners",
        f"{kind} {mark} runs {plan.length(stretch[2])} beside {edge_name(plan, line)}, "
        "too near to be clear of it and too far to carry it",
        "give both the same points, or one of them more decimals",
    )


def lines_inside(plan: Plan) -> list[Problem]:
    """Beams and walls that run under the inside of a panel."""
    problems = []
    lines: list[tuple[Kind, Beam | Wall, Line]] = []
    for beam in plan.job.beams:
        if beam.mark in plan.beams:
            lines += [("beam", beam, run) for run in plan.runs(beam)]
    lines += [("wall", wall, plan.walls[wall.mark]) for wall in plan.job.walls if wall.mark in plan.walls]
    for kind, thing, line in lines:
        for number in plan.panel_boxes.near((line.start, line.end)):
            panel = plan.job.panels[number]
            chord = _chord(plan.panels[number], line)
            if chord is None:
                continue
            depth = inside(panel.corners, line.point(sum(chord) / 2))
            if depth <= plan.tolerance.close or (depth <= NEARLY and _runs_beside(plan, number, line)):
                continue  # along an edge, or reported as running beside one
            problems.append(
                plan.problem(
                    panel,
                    "corners",
                    f"{kind} {thing.mark} runs under the inside of the panel, {plan.stretch(line, *chord)}",
                    f"divide the panel along {kind} {thing.mark}: a panel ends where it is supported",
                )
            )
    return problems


def _runs_beside(plan: Plan, number: int, line: Line) -> bool:
    """Whether a line all but runs along one of a panel's edges."""
    stretches = (edge.beside(line) for edge in plan.panels[number])
    return any(
        stretch is not None and stretch[2] <= NEARLY and stretch[1] - stretch[0] > 10 * NEARLY
        for stretch in stretches
    )


def _chord(outline: tuple[Line, ...], line: Line) -> Interval | None:
    """The stretch of a line that lies within an outline."""
    low, high = 0.0, line.length
    for edge in outline:
        left, rate = edge.place(line.start)[1], cross(edge.direction, line.direction)
        if abs(rate) < 1e-12:
            if left < 0:
                return None
        elif rate > 0:
            low = max(low, -left / rate)
        else:
            high = min(high, -left / rate)
    return (low, high) if high > low else None


def overlaps(plan: Plan) -> list[Problem]:
    """Panels that lie over each other, by more than what counts as one place."""
    problems = []
    close, noise = plan.tolerance.close, plan.tolerance.noise
    for number, panel in enumerate(plan.job.panels):
        for other in plan.panel_boxes.near(panel.corners):
            if other <= number:
                continue
            common = plan.job.panels[other].corners
            for edge in plan.panels[number]:
                common = clipped(common, lambda point, edge=edge: close - edge.place(point)[1], noise)  # type: ignore[misc]
            if common:
                middle = between(common[0], common[len(common) // 2])
                problems.append(
                    plan.problem(
                        plan.job.panels[other],
                        "corners",
                        f"the panel and panel {panel.mark} overlap about {plan.name(middle)}",
                        "every part of the floor belongs to one panel",
                    )
                )
    return problems
