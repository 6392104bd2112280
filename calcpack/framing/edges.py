"""What runs along the edges of the panels: beams and walls under them, panels beyond them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from calcpack.framing.plan import NEARLY, Plan
from calcpack.framing.plane import Interval, Line, between, clipped, cross, gaps, inside
from calcpack.job.model import Panel, Point

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


def panel_edges(plan: Plan) -> list[tuple[Edge, ...] | None]:
    """The edges of every panel; None for a panel where something is wrong with what runs along them."""
    found: list[tuple[Edge, ...] | None] = []
    for number, panel in enumerate(plan.job.panels):
        row = []
        for line in plan.panels[number]:
            neighbours, beyond = _beyond(plan, number, line)
            pieces = _pieces(plan, panel, line)
            if pieces is not None:
                continuous = not gaps(beyond, line.length, plan.tolerance.close)
                row.append(Edge(line, pieces, neighbours, continuous))
        found.append(tuple(row) if len(row) == len(panel.corners) else None)
    return found


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


def _pieces(plan: Plan, panel: Panel, line: Line) -> tuple[Piece, ...] | None:
    """What runs under an edge, in order along it; empty for a free edge, None where something is wrong."""
    close = plan.tolerance.close
    pieces: list[Piece] = []
    right = True
    for kind, mark, carrier in _lines(plan, line):
        stretch = line.beside(carrier)
        if stretch is None or stretch[1] - stretch[0] <= close:
            continue
        start, end, gap = stretch
        if gap <= close:
            at = [carrier.place(line.point(along))[0] for along in (start, end)]
            pieces.append(Piece(start, end, kind, mark, at[0], at[1]))
        elif gap <= NEARLY and end - start > 10 * NEARLY:
            _beside(plan, panel, line, kind, mark, gap)
            right = False
    pieces.sort(key=lambda piece: (piece.start, piece.end))
    open_parts = gaps(((piece.start, piece.end) for piece in pieces), line.length, close)
    if pieces and open_parts and right:
        _partly(plan, panel, line, pieces, open_parts)
        right = False
    for number, piece in enumerate(pieces[1:], 1):
        farthest = max(pieces[:number], key=lambda before: before.end)
        if min(farthest.end, piece.end) - piece.start > close:
            _two_supports(plan, panel, line, farthest, piece)
            right = False
    if not right:
        return None
    return _joined(plan, line, pieces) if pieces else ()


def _lines(plan: Plan, line: Line) -> list[tuple[Kind, str, Line]]:
    """Every beam and wall near a line."""
    beams, walls = plan.beams_near(line.start, line.end), plan.walls_near(line.start, line.end)
    found: list[tuple[Kind, str, Line]] = [("beam", mark, plan.beams[mark]) for mark in beams]
    return [*found, *(("wall", mark, plan.walls[mark]) for mark in walls)]


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
    """An edge in words: the edge from A1 to B1."""
    return f"the edge {plan.stretch(line, 0.0, line.length)}"


def _partly(plan: Plan, panel: Panel, line: Line, pieces: list[Piece], parts: tuple[Interval, ...]) -> None:
    missing = " and ".join(plan.stretch(line, *part) for part in parts)
    there = " and ".join(dict.fromkeys(f"{piece.kind} {piece.mark}" for piece in pieces))
    plan.fault(
        panel,
        "corners",
        f"{edge_name(plan, line)} is supported only in part, by {there}: nothing runs along it {missing}",
        "support it along its whole length, or divide the panel where the support ends",
    )


def _two_supports(plan: Plan, panel: Panel, line: Line, first: Piece, second: Piece) -> None:
    where = plan.stretch(line, second.start, min(first.end, second.end))
    plan.fault(
        panel,
        "corners",
        f"{edge_name(plan, line)} has two supports on the same stretch: "
        f"{first.kind} {first.mark} and {second.kind} {second.mark} both run along it {where}",
        "take one of them away there, or let one end where the other begins",
    )


def _beside(plan: Plan, panel: Panel, line: Line, kind: Kind, mark: str, gap: float) -> None:
    plan.fault(
        panel,
        "corners",
        f"{kind} {mark} runs {plan.length(gap)} beside {edge_name(plan, line)}, "
        "too near to be clear of it and too far to carry it",
        "give both the same points, or one of them more decimals",
    )


def check_inside(plan: Plan) -> None:
    """Fault beams and walls that run under the inside of a panel."""
    lines: list[tuple[Kind, str, Line]] = [("beam", mark, line) for mark, line in plan.beams.items()]
    lines += [("wall", mark, line) for mark, line in plan.walls.items()]
    for kind, mark, line in lines:
        for number in plan.panel_boxes.near((line.start, line.end)):
            panel = plan.job.panels[number]
            chord = _chord(plan.panels[number], line)
            if chord is None:
                continue
            depth = inside(panel.corners, line.point(sum(chord) / 2))
            if depth <= plan.tolerance.close or (depth <= NEARLY and _runs_beside(plan, number, line)):
                continue  # along an edge, or faulted as running beside one
            plan.fault(
                panel,
                "corners",
                f"{kind} {mark} runs under the inside of the panel, {plan.stretch(line, *chord)}",
                f"divide the panel along {kind} {mark}: a panel ends where it is supported",
            )


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


def check_overlaps(plan: Plan) -> None:
    """Fault panels that lie over each other, by more than what counts as one place."""
    noise = plan.tolerance.noise
    for number, panel in enumerate(plan.job.panels):
        for other in plan.panel_boxes.near(panel.corners):
            if other <= number:
                continue
            over = plan.job.panels[other]
            common = over.corners
            for edge in plan.panels[number]:
                common = clipped(common, _shortfall(edge, plan.tolerance.close), noise)
            if common:
                middle = plan.name(between(common[0], common[len(common) // 2]))
                plan.fault(
                    over,
                    "corners",
                    f"the panel and panel {panel.mark} overlap about {middle}",
                    "every part of the floor belongs to one panel",
                )


def _shortfall(edge: Line, depth: float) -> Callable[[Point], float]:
    """A function that is positive where a point lies less deep than that inside an edge."""
    return lambda point: depth - edge.place(point)[1]
