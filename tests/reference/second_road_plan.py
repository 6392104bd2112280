"""Second road: what drains to a beam or wall.

Measured along lines at right angles to an edge, or along the strips, between exact break points.
"""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Callable, Iterable
from itertools import pairwise
from typing import NamedTuple

import numpy as np
from second_road_job import SAME, Floor, Slab, Spread


class Side:
    """A panel's edge: ``along`` it and ``inward`` at right angles."""

    def __init__(self, start: np.ndarray, end: np.ndarray) -> None:
        self.start, self.length = start, math.dist(start, end)
        self.along = (end - start) / self.length
        self.inward = np.array([-self.along[1], self.along[0]])

    def at(self, s: float, inward: float = 0.0) -> np.ndarray:
        return self.start + s * self.along + inward * self.inward

    def foot(self, point: np.ndarray) -> float:
        return float((point - self.start) @ self.along)

    def distance(self, point: np.ndarray) -> float:
        return float((point - self.start) @ self.inward)


class Piece(NamedTuple):
    """What holds a stretch of an edge, and its own coordinates there."""

    start: float
    end: float
    kind: str
    mark: str
    at_start: float
    at_end: float


class Cell(NamedTuple):
    """Between two break points what drains to an edge is linear."""

    start: float
    end: float
    first: float
    last: float


def sides_of(slab: Slab) -> list[Side]:
    return [Side(a, b) for a, b in zip(slab.corners, np.roll(slab.corners, -1, axis=0), strict=True)]


def holding(floor: Floor, side: Side) -> list[Piece]:
    """Beams and walls along an edge, in order."""
    found = []
    lines = [("beam", mark, bar.points[[0, -1]], bar.knots) for mark, bar in floor.bars.items()]
    lines += [("wall", mark, ends, [0.0, math.dist(*ends)]) for mark, ends in floor.walls.items()]
    for kind, mark, ends, knots in lines:
        feet = [side.foot(end) for end in ends]
        low, high = max(0.0, min(feet)), min(side.length, max(feet))
        if high - low <= SAME:
            continue
        order = np.argsort(feet)
        off = np.interp([low, high], np.sort(feet), np.array([side.distance(end) for end in ends])[order])
        if np.abs(off).max() > SAME:
            continue
        run = Side(*ends)
        at = [run.foot(side.at(s)) for s in (low, high)]
        at = [next((knot for knot in knots if abs(knot - place) <= SAME), place) for place in at]
        found.append(Piece(low, high, kind, mark, *at))
    return sorted(found)


def continues(floor: Floor, slab: Slab, side: Side) -> bool:
    """Whether panels cover all the other side of an edge: looked up beyond it, stretch by stretch."""
    others = [other for other in floor.slabs if other is not slab]
    feet = [side.foot(corner) for other in others for corner in other.corners]
    stops = sorted({0.0, side.length, *(foot for foot in feet if 0 < foot < side.length)})
    middles = [side.at((a + b) / 2, -10 * SAME) for a, b in pairwise(stops) if b - a > 10 * SAME]
    return all(
        any(min(edge.distance(point) for edge in sides_of(other)) > 0 for other in others)
        for point in middles
    )  # fmt: skip


def way_of(floor: Floor, slab: Slab, sides: list[Side], held: list[bool]) -> np.ndarray | None:
    """The direction of a one-way panel's span; None for two-way."""
    if slab.transfer == "two-way":
        return None
    if slab.transfer.startswith("one-way"):
        return np.array([1.0, 0.0] if slab.transfer.endswith("x") else [0.0, 1.0])
    if sum(held) == 1:
        return None  # a cantilever slab: the one edge is the nearest of all
    square = len(sides) == 4 and all(abs(a.along @ b.along) < 1e-6 for a, b in pairwise(sides))
    if square and held in ([True, False] * 2, [False, True] * 2):
        return sides[held.index(True)].inward
    if square and all(held):
        short, long = sorted(sides[:2], key=lambda side: side.length)
        if long.length >= floor.basis.get("one_way_ratio", 2.0) * short.length * (1 - 1e-9):
            return short.along
    return None


def cells_between(stops: Iterable[float], depth: Callable[[float], float]) -> list[Cell]:
    """A piecewise linear function by its values inside the cells between all places where it may bend."""
    found = []
    for a, b in pairwise(sorted(stops)):
        if b - a < 1e-8:
            continue
        low, middle, high = (depth(a + part * (b - a)) for part in (0.25, 0.5, 0.75))
        assert abs(low + high - 2 * middle) < 1e-9 * max(1.0, middle), "a break point was missed"
        found.append(Cell(a, b, max(0.0, 1.5 * low - 0.5 * high), max(0.0, 1.5 * high - 0.5 * low)))
    return [cell for cell in found if max(cell.first, cell.last) > 1e-9]


def nearest(sides: list[Side], reach: dict[int, float], own: int) -> list[Cell]:
    """Two-way: how much of each line at right angles to an edge is nearer to it than to the others."""
    side = sides[own]
    # all bounds as n·p + c >= 0: inside the panel, and no other edge nearer
    bounds = [(each.inward, -float(each.start @ each.inward)) for each in sides]
    inward, behind = bounds[own]
    for other, far in reach.items():
        if other != own:
            bounds.append(
                (bounds[other][0] * reach[own] - inward * far, bounds[other][1] * reach[own] - behind * far)
            )

    def depth(s: float) -> float:
        low, high = -math.inf, math.inf
        for normal, offset in bounds:
            value, slope = float(normal @ side.at(s)) + offset, float(normal @ side.inward)
            if abs(slope) < 1e-12:
                if value < 0:
                    return 0.0
            elif slope > 0:
                low = max(low, -value / slope)
            else:
                high = min(high, -value / slope)
        return max(0.0, high - low)

    corners = [side.foot(corner.start) for corner in sides]
    stops = {0.0, side.length, *corners}
    for k, (one, first) in enumerate(bounds):
        for two, second in bounds[:k]:
            pair = np.array([one, two])
            if abs(np.linalg.det(pair)) > 1e-9:
                stops.add(side.foot(np.linalg.solve(pair, [-first, -second])))
    return cells_between((s for s in stops if min(corners) <= s <= max(corners)), depth)


def strips(sides: list[Side], held: list[bool], way: np.ndarray, own: int) -> list[Cell]:
    """One-way: the strips that end on an edge, by their length and how densely they stand on it."""
    side = sides[own]
    dense = abs(float(side.inward @ way))  # strip width to a length of edge
    if dense < 1e-6:
        return []
    across = np.array([-way[1], way[0]])
    into = way if side.inward @ way > 0 else -way

    def depth(s: float) -> float:
        place = side.at(s)
        length, other = min(
            (-each.distance(place) / float(each.inward @ into), number)
            for number, each in enumerate(sides)
            if number != own and float(each.inward @ into) < -1e-6
        )
        return length * dense * (0.5 if held[other] else 1.0)

    slope = float(side.along @ across)
    stops = {0.0, side.length, *(float((each.start - side.start) @ across) / slope for each in sides)}
    return cells_between((s for s in stops if 0 <= s <= side.length), depth)


def shares(floor: Floor, slab: Slab) -> list[tuple[Piece, list[Cell], dict[float, float]]]:
    """What each beam or wall gets of a panel: its stretch, depths and areas at points, at its own places."""
    sides = sides_of(slab)
    pieces = [holding(floor, side) for side in sides]
    held = [bool(row) for row in pieces]
    way = way_of(floor, slab, sides, held)
    far = floor.basis["dividing_lines"] == "60 at continuous edges"
    reach = {
        k: math.sqrt(3) if far and continues(floor, slab, sides[k]) else 1.0
        for k in range(len(sides))
        if held[k]
    }
    found = []
    for own in reach:
        cells = nearest(sides, reach, own) if way is None else strips(sides, held, way, own)
        for piece in pieces[own]:
            ours: list[Cell] = []
            beyond: dict[float, float] = defaultdict(float)
            forward = piece.at_end > piece.at_start

            def onto(s: float, piece: Piece = piece) -> float:
                return float(np.interp(s, (piece.start, piece.end), (piece.at_start, piece.at_end)))

            for cell in cells:
                spread, length = Spread(*cell, ""), sides[own].length
                if piece.start < SAME and (part := spread.part(-math.inf, 0.0)):
                    beyond[piece.at_start] += part.total
                if piece.end > length - SAME and (part := spread.part(length, math.inf)):
                    beyond[piece.at_end] += part.total
                part = spread.part(piece.start, piece.end)
                if part and part.end - part.start > 1e-8:
                    a, b = (part.first, part.last) if forward else (part.last, part.first)
                    ours.append(Cell(*sorted((onto(part.start), onto(part.end))), a, b))
            found.append((piece, ours, dict(beyond)))
    return found
