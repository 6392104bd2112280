"""Points, lines and convex outlines in the plan.

Outlines run counter-clockwise. Everything is worked out from differences of coordinates, so a plan
that stands far from its origin loses no accuracy.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise

import numpy as np

from calcpack.job.model import Point

Outline = tuple[Point, ...]
Interval = tuple[float, float]


@dataclass(frozen=True)
class Tolerance:
    """Below which distances [m] things coincide.

    Parameters
    ----------
    close : float [m]
        What the user gives as one place is one place: a micrometre (a thousand-millionth of
        a plan wider than 1 km), far above what a conversion from feet loses.
    noise : float [m]
        What arithmetic alone can shift a point.
    """

    close: float
    noise: float

    @classmethod
    def of(cls, points: Iterable[Point]) -> Tolerance:
        """The tolerances for a plan with these points.

        Examples
        --------
        >>> Tolerance.of([(0.0, 0.0), (30.0, 40.0)]).close
        1e-06
        """
        places = np.array(list(points) or [(0.0, 0.0)])
        size = float(np.hypot(*np.ptp(places, axis=0)))
        largest = float(np.abs(places).max())
        return cls(max(1e-6, 1e-9 * size), 1e-11 * size + 1e-14 * largest)


@dataclass(frozen=True)
class Line:
    """A straight line from one point to another; ``place`` and ``point`` work along it."""

    start: Point
    end: Point

    @cached_property
    def length(self) -> float:
        """[m]."""
        return math.dist(self.start, self.end)

    @cached_property
    def direction(self) -> Point:
        """Unit vector from start to end."""
        return ((self.end[0] - self.start[0]) / self.length, (self.end[1] - self.start[1]) / self.length)

    def place(self, point: Point) -> Point:
        """Distance of a point along the line from its start, and to the left of it [m].

        Examples
        --------
        >>> Line((1.0, 0.0), (1.0, 5.0)).place((0.0, 2.0))
        (2.0, 1.0)
        """
        x, y = point[0] - self.start[0], point[1] - self.start[1]
        along, across = self.direction
        return x * along + y * across, y * along - x * across

    def point(self, along: float, left: float = 0.0) -> Point:
        """The point at a distance from the start [m], so far to the left of the line."""
        x, y = self.direction
        return (self.start[0] + along * x - left * y, self.start[1] + along * y + left * x)

    def distance(self, point: Point) -> float:
        """Shortest distance from a point to the line between its ends [m]."""
        along, left = self.place(point)
        return math.hypot(left, max(0.0, -along, along - self.length))

    def beside(self, other: Line) -> tuple[float, float, float] | None:
        """The stretch of this line that another runs beside, and how far off it is there at most.

        Returns
        -------
        (from, to, gap) : [m] along this line; None where the other has no extent along it.

        Examples
        --------
        >>> Line((0.0, 0.0), (6.0, 0.0)).beside(Line((9.0, 0.0), (2.0, 0.0)))
        (2.0, 6.0, 0.0)
        """
        (first, left_first), (last, left_last) = self.place(other.start), self.place(other.end)
        start, end = max(0.0, min(first, last)), min(self.length, max(first, last))
        if end <= start:
            return None
        slope = (left_last - left_first) / (last - first)
        gap = max(abs(left_first + slope * (along - first)) for along in (start, end))
        return start, end, gap

    def crossing(self, other: Line) -> float | None:
        """Where the two lines, taken without end, cross: distance along this one [m]; None if parallel."""
        across = cross(self.direction, other.direction)
        if abs(across) < 1e-12:
            return None
        way = (other.start[0] - self.start[0], other.start[1] - self.start[1])
        return cross(way, other.direction) / across


def cross(a: Point, b: Point) -> float:
    """Cross product."""
    return a[0] * b[1] - a[1] * b[0]


def dot(a: Point, b: Point) -> float:
    """Scalar product."""
    return a[0] * b[0] + a[1] * b[1]


def between(a: Point, b: Point, part: float = 0.5) -> Point:
    """The point that lies this part of the way from a to b."""
    return (a[0] + part * (b[0] - a[0]), a[1] + part * (b[1] - a[1]))


def edges(outline: Sequence[Point]) -> tuple[Line, ...]:
    """The edges of an outline, edge i from corner i to corner i + 1; the outline lies to their left."""
    return tuple(Line(a, b) for a, b in zip(outline, (*outline[1:], outline[0]), strict=True))


def area(outline: Sequence[Point]) -> float:
    """Area of an outline [m2], positive counter-clockwise; zero below three points.

    Examples
    --------
    >>> area(((0.0, 0.0), (6.0, 0.0), (6.0, 4.5), (0.0, 4.5)))
    27.0
    """
    if len(outline) < 3:
        return 0.0
    x, y = outline[0]
    moved = [(px - x, py - y) for px, py in outline[1:]]
    return sum(cross(a, b) for a, b in pairwise(moved)) / 2


def clipped(outline: Sequence[Point], value: Callable[[Point], float], noise: float) -> Outline:
    """The part of a convex outline where a linear function is not positive.

    A value within the noise counts as zero, so that a corner on the dividing line stays as it is.

    Examples
    --------
    >>> clipped(((0.0, 0.0), (2.0, 0.0), (2.0, 2.0), (0.0, 2.0)), lambda p: p[0] - 1.0, 1e-12)
    ((0.0, 0.0), (1.0, 0.0), (1.0, 2.0), (0.0, 2.0))
    """
    values = [0.0 if abs(v) <= noise else v for v in map(value, outline)]
    kept: list[Point] = []
    for here, there, v, w in zip(
        outline, (*outline[1:], *outline[:1]), values, values[1:] + values[:1], strict=True
    ):
        if v <= 0:
            kept.append(here)
        if v * w < 0:
            kept.append(between(here, there, v / (v - w)))
    return without_repeats(kept, noise)


def without_repeats(outline: Sequence[Point], noise: float) -> Outline:
    """The outline with each corner once; empty if fewer than three are left."""
    kept: list[Point] = []
    for point in outline:
        if not kept or math.dist(point, kept[-1]) > noise:
            kept.append(point)
    while len(kept) > 1 and math.dist(kept[0], kept[-1]) <= noise:
        kept.pop()
    return tuple(kept) if len(kept) > 2 else ()


def inside(outline: Sequence[Point], point: Point) -> float:
    """How deep a point lies inside a convex outline [m], negative outside.

    Examples
    --------
    >>> inside(((0.0, 0.0), (6.0, 0.0), (6.0, 4.5), (0.0, 4.5)), (3.0, 1.0))
    1.0
    """
    return min(edge.place(point)[1] for edge in edges(outline))


def smallest_box(outline: Sequence[Point]) -> tuple[float, float]:
    """Short and long side of the rectangle of least area about a convex outline [m].

    It has one side along one of the edges (a known theorem on the enclosing rectangle).
    """
    boxes = []
    for edge in edges(outline):
        places = [edge.place(corner) for corner in outline]
        sides = [max(values) - min(values) for values in zip(*places, strict=True)]
        boxes.append((sides[0] * sides[1], min(sides), max(sides)))
    return min(boxes)[1:]


def gaps(covered: Iterable[Interval], length: float, close: float) -> tuple[Interval, ...]:
    """The parts of 0..length, longer than ``close``, that no interval covers.

    Examples
    --------
    >>> gaps([(0.0, 2.0), (3.0, 6.0)], 6.0, 1e-6)
    ((2.0, 3.0),)
    """
    open_parts = []
    reached = 0.0
    for start, end in sorted((*covered, (length, length))):
        if start - reached > close:
            open_parts.append((reached, start))
        reached = max(reached, end)
    return tuple(open_parts)


class Boxes:
    """Which of many things may touch a place: their boxes, compared all at once."""

    def __init__(self, things: Iterable[Sequence[Point]], margin: float) -> None:
        bounds = [(*np.min(points, axis=0), *np.max(points, axis=0)) for points in things]
        self._bounds = np.array(bounds or np.empty((0, 4)), dtype=float).reshape(-1, 4)
        self._margin = margin

    def near(self, points: Sequence[Point]) -> list[int]:
        """Numbers of the things whose box comes within the margin of the box about these points."""
        low, high = np.min(points, axis=0) - self._margin, np.max(points, axis=0) + self._margin
        meets = (self._bounds[:, :2] <= high).all(axis=1) & (self._bounds[:, 2:] >= low).all(axis=1)
        return [int(number) for number in np.nonzero(meets)[0]]
