"""Which part of a panel drains to which part of its edges: two roads, both exact.

Two-way, the region of an edge holds the points nearer to it than to any other supported edge, and
what is loaded is the foot of each point. One-way, the panel is cut into strips along the span, and
what is loaded is where each strip ends.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Protocol

from calcpack.framing.plane import (
    Interval,
    Line,
    Outline,
    area,
    between,
    clipped,
    cross,
    dot,
    without_repeats,
)
from calcpack.job.model import Point

PARALLEL = 1e-3
"""An edge turned by less than this [rad] from the strips is taken as parallel to them.

Coordinates given to the millimetre turn a short edge that much.
"""


@dataclass(frozen=True)
class Drained:
    """What drains to a stretch of an edge.

    Parameters
    ----------
    region : outline [m]
    depth : tuple of (along the edge, depth) [m]
    ends : tuple of (along the edge, area) [m], [m2]
        What drains there from beyond the edge's end.
    """

    region: Outline
    depth: tuple[Point, ...]
    ends: tuple[Point, ...] = ()


class Basin(Protocol):
    """All that drains to one edge."""

    def onto(self, start: float, end: float) -> Drained:
        """What of it reaches a stretch of the edge; whoever holds an end of it gets what lies beyond."""
        ...  # pragma: no cover


@dataclass(frozen=True)
class Nearest:
    """The part of a panel nearest to one edge, a convex outline.

    Parameters
    ----------
    edge : Line
    region : outline [m]
    noise : float [m]
    """

    edge: Line
    region: Outline
    noise: float

    def onto(self, start: float, end: float) -> Drained:
        """What has its foot between two places of the edge, and beyond its ends."""
        first, last = start <= self.noise, end >= self.edge.length - self.noise
        region = self.region
        if not first:
            region = self._part(region, after=start)
        if not last:
            region = self._part(region, before=end)
        beyond = ((start, self._part(region, before=start)), (end, self._part(region, after=end)))
        ends = [(at, area(part)) for at, part in beyond if area(part) > self.noise * self.edge.length]
        middle = self._part(self._part(region, after=start), before=end)
        corners = [self.edge.place(corner) for corner in middle]
        return Drained(region, _profile(corners, (start, end), self.noise), tuple(ends))

    def _part(self, region: Outline, after: float = -math.inf, before: float = math.inf) -> Outline:
        if math.isfinite(after):
            return clipped(region, lambda point: after - self.edge.place(point)[0], self.noise)
        return clipped(region, lambda point: self.edge.place(point)[0] - before, self.noise)


def nearest_edges(
    outline: Outline, reach: Mapping[int, float], edges: Sequence[Line], noise: float
) -> dict[int, Basin]:
    """Divide a panel among its supported edges by distance.

    Parameters
    ----------
    outline : outline [m]
    reach : mapping of edge -> how far it draws from, in proportion
        The supported edges; a point belongs where distance over reach is least.
    edges : sequence of Line
    noise : float [m]

    Returns
    -------
    dict of edge -> Basin

    Source: distance to the line of each edge; with equal reach the dividing lines halve the angle
    between two edges (45° at a square corner), with a reach of √3 to 1 they stand at 60° to the farther
    reaching edge of a square corner. Common practice.

    Examples
    --------
    >>> from calcpack.framing.plane import edges
    >>> outline = ((0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0))
    >>> basins = nearest_edges(outline, dict.fromkeys(range(4), 1.0), edges(outline), 1e-12)
    >>> basins[0].onto(0.0, 6.0).depth
    ((0.0, 0.0), (2.0, 2.0), (4.0, 2.0), (6.0, 0.0))
    """
    basins: dict[int, Basin] = {}
    for number, own in reach.items():
        region = outline
        for other, far in reach.items():
            if other != number:
                region = clipped(region, _excess(edges[number], own, edges[other], far), noise)
        basins[number] = Nearest(edges[number], region, noise)
    return basins


def _excess(edge: Line, reach: float, other: Line, other_reach: float) -> Callable[[Point], float]:
    """A function that is positive where a point belongs to the other edge."""

    def excess(point: Point) -> float:
        return other_reach * edge.place(point)[1] - reach * other.place(point)[1]

    return excess


def _profile(corners: Sequence[Point], cuts: Sequence[float], noise: float) -> tuple[Point, ...]:
    """Depth of a convex outline, given by (along, distance), over the distance along.

    >>> _profile([(0.0, 0.0), (4.0, 0.0), (4.0, 1.0), (2.0, 3.0)], (0.0, 4.0), 1e-12)
    ((0.0, 0.0), (2.0, 3.0), (4.0, 1.0))
    """
    sides = [sorted(side) for side in pairwise((*corners, *corners[:1]))]
    points: list[Point] = []
    for start, end in pairwise(_stations((along for along, _ in corners), cuts, noise)):
        middle = (start + end) / 2
        across = [(a, b) for a, b in sides if a[0] < middle < b[0]]
        for along in (start, end) if across else ():
            distances = [a[1] + (along - a[0]) / (b[0] - a[0]) * (b[1] - a[1]) for a, b in across]
            depth = max(distances) - min(distances)
            points.append((along, depth if depth > noise else 0.0))
    return _without_repeated(points, noise)


def _stations(places: Iterable[float], cuts: Sequence[float], noise: float) -> list[float]:
    """All places in order, those within the noise as one, the cuts kept as they are."""
    kept = sorted(cuts)
    for place in sorted(places):
        if all(abs(place - other) > noise for other in kept):
            kept.append(place)
    return sorted(kept)


def _without_repeated(points: Iterable[Point], noise: float) -> tuple[Point, ...]:
    kept: list[Point] = []
    for point in points:
        if not kept or math.dist(point, kept[-1]) > noise:
            kept.append(point)
    return tuple(kept)


@dataclass(frozen=True)
class Strip:
    """Neighbouring strips of one kind, where they end on an edge.

    Parameters
    ----------
    along : (start, end) [m]
        On the edge.
    depth : (at start, at end) [m]
        How far they reach, at right angles to the edge.
    far : (at start, at end)
        The points they reach to.
    """

    along: Interval
    depth: Interval
    far: tuple[Point, Point]

    def cut(self, start: float, end: float) -> Strip:
        """The part that ends on a stretch of the edge."""
        parts = [(place - self.along[0]) / (self.along[1] - self.along[0]) for place in (start, end)]
        depth = [self.depth[0] + part * (self.depth[1] - self.depth[0]) for part in parts]
        far = [between(*self.far, part) for part in parts]
        return Strip((start, end), (depth[0], depth[1]), (far[0], far[1]))


@dataclass(frozen=True)
class Strips:
    """All strips that end on one edge, in order along it."""

    edge: Line
    strips: tuple[Strip, ...]
    noise: float

    def onto(self, start: float, end: float) -> Drained:
        """The strips that end on a stretch of the edge."""
        parts = []
        for strip in self.strips:
            low, high = max(start, strip.along[0]), min(end, strip.along[1])
            if high - low > self.noise:
                parts.append(strip if (low, high) == strip.along else strip.cut(low, high))
        if not parts:
            return Drained((), ())
        near = [self.edge.point(parts[0].along[0]), self.edge.point(parts[-1].along[1])]
        far = [point for part in reversed(parts) for point in reversed(part.far)]
        region = without_repeats([*near, *far], self.noise)
        points = [point for part in parts for point in zip(part.along, part.depth, strict=True)]
        sum_of_depth = sum((b[0] - a[0]) * (a[1] + b[1]) / 2 for a, b in pairwise(points))
        # equal to 1 but where an edge is parallel to the strips only within the tolerance
        scale = area(region) / sum_of_depth if sum_of_depth else 1.0
        if abs(scale - 1.0) > 1e-12:
            points = [(along, depth * scale) for along, depth in points]
        return Drained(region, _without_repeated(points, self.noise))


def strips_along(
    direction: Point, supported: Sequence[bool], edges: Sequence[Line], noise: float
) -> tuple[dict[int, Basin], tuple[tuple[int, int], ...], tuple[int, ...]]:
    """Divide a panel into strips that run from edge to edge in one direction.

    A strip gives half to each end, or all to the one that is supported. Its load comes down where it
    ends: over a length of edge that grows with the skew, so that the depth is the length given, times
    the cosine of the skew.

    Parameters
    ----------
    direction : unit vector
    supported : sequence of bool
        Edge by edge.
    edges : sequence of Line
    noise : float [m]

    Returns
    -------
    basins : dict of edge -> Basin
    lost : pairs of edges between which strips have no support at all
    hung : edges off which strips cantilever

    Examples
    --------
    >>> from calcpack.framing.plane import edges
    >>> outline = edges(((0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0)))
    >>> basins, _, _ = strips_along((0.0, 1.0), [True] * 4, outline, 1e-12)
    >>> basins[0].onto(0.0, 6.0).depth
    ((0.0, 2.0), (6.0, 2.0))
    """
    slopes = [cross(edge.direction, direction) for edge in edges]  # of the inward normal to the strips
    levels = _levels(direction, slopes, edges)
    stations = _stations(levels, (min(levels), max(levels)), noise)
    levels = [min(stations, key=lambda station: abs(station - level)) for level in levels]
    spans = [(levels[i], levels[(i + 1) % len(edges)]) for i in range(len(edges))]
    starting = [i for i, slope in enumerate(slopes) if slope > PARALLEL]
    ending = [i for i, slope in enumerate(slopes) if slope < -PARALLEL]
    rows: dict[int, list[Strip]] = {}
    lost: list[tuple[int, int]] = []
    hung: list[int] = []
    for low, high in pairwise(stations):
        middle = (low + high) / 2
        (first,) = (i for i in starting if min(spans[i]) < middle < max(spans[i]))
        (last,) = (i for i in ending if min(spans[i]) < middle < max(spans[i]))
        if not (supported[first] or supported[last]):
            lost.append((first, last))
            continue
        share = 0.5 if supported[first] and supported[last] else 1.0
        places = {
            i: [_at_level(level, spans[i], edges[i].length) for level in (low, high)] for i in (first, last)
        }
        ends = {i: [edges[i].point(place) for place in places[i]] for i in (first, last)}
        for own, other in ((first, last), (last, first)):
            if not supported[own]:
                continue
            if share == 1.0:
                hung.append(own)
            far = [between(mine, theirs, share) for mine, theirs in zip(ends[own], ends[other], strict=True)]
            depth = [max(0.0, edges[own].place(point)[1]) for point in far]
            depth = [value if value > noise else 0.0 for value in depth]
            a, b = (0, 1) if places[own][0] < places[own][1] else (1, 0)
            rows.setdefault(own, []).append(
                Strip((places[own][a], places[own][b]), (depth[a], depth[b]), (far[a], far[b]))
            )
    basins: dict[int, Basin] = {
        i: Strips(edges[i], tuple(sorted(row, key=lambda strip: strip.along)), noise)
        for i, row in rows.items()
    }
    return basins, tuple(dict.fromkeys(lost)), tuple(dict.fromkeys(hung))


def _levels(direction: Point, slopes: Sequence[float], edges: Sequence[Line]) -> list[float]:
    """Where each corner stands across the strips; both ends of a parallel edge stand level."""
    origin = edges[0].start
    levels = [cross(direction, (edge.start[0] - origin[0], edge.start[1] - origin[1])) for edge in edges]
    for i, slope in enumerate(slopes):
        if abs(slope) <= PARALLEL:
            j = (i + 1) % len(edges)
            levels[i] = levels[j] = (levels[i] + levels[j]) / 2
    return levels


def _at_level(level: float, span: Interval, length: float) -> float:
    """Distance along an edge, whose ends stand at the levels of ``span``, of a level between [m]."""
    if level in span:
        return length if level == span[1] else 0.0
    return (level - span[0]) / (span[1] - span[0]) * length


def unit(vector: Point) -> Point:
    """The vector of length 1 with the same direction."""
    length = math.sqrt(dot(vector, vector))
    return (vector[0] / length, vector[1] / length)
