"""Where labels go: boxes, what is in their way, the best of several places."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from calcpack.figures.shapes import Array, Pair, Points, within


@dataclass(frozen=True, slots=True)
class Box:
    """A rectangle about its centre [mm], turned by an angle [degrees]."""

    x: float
    y: float
    width: float
    height: float
    angle: float = 0.0

    def corners(self) -> list[Pair]:
        """The four corners, counter-clockwise."""
        cos, sin = math.cos(math.radians(self.angle)), math.sin(math.radians(self.angle))
        half, rise = self.width / 2, self.height / 2
        signs = ((-half, -rise), (half, -rise), (half, rise), (-half, rise))
        return [(self.x + a * cos - b * sin, self.y + a * sin + b * cos) for a, b in signs]

    def bounds(self) -> tuple[float, float, float, float]:
        """Left, bottom, right, top."""
        if self.angle == 0.0:
            half, rise = self.width / 2, self.height / 2
        else:
            cos, sin = abs(math.cos(math.radians(self.angle))), abs(math.sin(math.radians(self.angle)))
            half = (self.width * cos + self.height * sin) / 2
            rise = (self.width * sin + self.height * cos) / 2
        return self.x - half, self.y - rise, self.x + half, self.y + rise

    def grown(self, by: float) -> Box:
        """The same, wider by that much on every side."""
        return replace(self, width=self.width + 2 * by, height=self.height + 2 * by)

    def moved(self, across: float, up: float) -> Box:
        """The same, elsewhere."""
        return replace(self, x=self.x + across, y=self.y + up)


def overlap(one: Box, other: Box) -> bool:
    """Whether two boxes share some area.

    Examples
    --------
    >>> overlap(Box(0, 0, 2, 2), Box(1.9, 0, 2, 2)), overlap(Box(0, 0, 2, 2), Box(1.9, 1.9, 1, 1, 45))
    (True, False)
    """
    first, second = one.bounds(), other.bounds()
    if first[0] >= second[2] or second[0] >= first[2] or first[1] >= second[3] or second[1] >= first[3]:
        return False
    if one.angle % 90 == 0 and other.angle % 90 == 0:
        return True
    # Separating axes: two rectangles are apart if they are apart along a side of either.
    points, others = one.corners(), other.corners()
    for angle in (one.angle, one.angle + 90, other.angle, other.angle + 90):
        cos, sin = math.cos(math.radians(angle)), math.sin(math.radians(angle))
        here = [x * cos + y * sin for x, y in points]
        there = [x * cos + y * sin for x, y in others]
        if max(here) <= min(there) or max(there) <= min(here):
            return False
    return True


class Placer:
    """Finds places for labels that keep clear of one another, of lines and of the edge.

    Parameters
    ----------
    bounds : (left, bottom, right, top) [mm]
        Labels should stay within; infinite where there is no edge.

    Examples
    --------
    >>> placer = Placer()
    >>> placer.block(Box(0, 0, 10, 3))
    >>> placer.choose([Box(2, 0, 4, 3), Box(8, 0, 4, 3)])
    Box(x=8, y=0, width=4, height=3, angle=0.0)
    """

    OVERLAP, CROSSING, OUTSIDE = 100.0, 12.0, 400.0  # what is worst, when nothing is free

    def __init__(self, bounds: tuple[float, float, float, float] | None = None) -> None:
        self.bounds = bounds or (-math.inf, -math.inf, math.inf, math.inf)
        self.boxes: list[Box] = []
        self._bounds: list[tuple[float, float, float, float]] = []
        self._segments: list[Array] = []

    def block(self, *boxes: Box) -> None:
        """Nothing shall cover these."""
        self.boxes += boxes
        self._bounds += [box.bounds() for box in boxes]

    def block_line(self, points: Points) -> None:
        """No label shall be crossed by this polyline."""
        line = np.asarray(points, dtype=float)
        self._segments.append(np.hstack([line[:-1], line[1:]]))

    def crossings(self, box: Box) -> int:
        """How many of the blocked line segments touch a box."""
        if not self._segments:
            return 0
        if len(self._segments) > 1:
            self._segments = [np.vstack(self._segments)]
        lines = self._segments[0]
        left, bottom, right, top = box.bounds()
        near = (
            (np.minimum(lines[:, 0], lines[:, 2]) <= right)
            & (np.maximum(lines[:, 0], lines[:, 2]) >= left)
            & (np.minimum(lines[:, 1], lines[:, 3]) <= top)
            & (np.maximum(lines[:, 1], lines[:, 3]) >= bottom)
        )
        return sum(touches(box, *line) for line in lines[near].tolist())

    def covered(self, start: Pair, end: Pair) -> int:
        """How many of the blocked boxes a segment would run through."""
        left, right = sorted((start[0], end[0]))
        bottom, top = sorted((start[1], end[1]))
        return sum(
            a <= right and c >= left and b <= top and d >= bottom and touches(box, *start, *end)
            for box, (a, b, c, d) in zip(self.boxes, self._bounds, strict=True)
        )

    def cost(self, box: Box) -> float:
        """How bad a place is; 0 is free."""
        left, bottom, right, top = box.bounds()
        low, under, high, over = self.bounds
        beyond = max(low - left, under - bottom, right - high, top - over)
        cost = self.OUTSIDE + beyond if beyond > 1e-6 else 0.0
        for other, (a, b, c, d) in zip(self.boxes, self._bounds, strict=True):
            if a < right and c > left and b < top and d > bottom and overlap(box, other):
                cost += self.OVERLAP
        return cost + self.CROSSING * self.crossings(box)

    def pick(self, places: Iterable[Box], penalty: float = 0.0, lead: Pair | None = None) -> tuple[int, Box]:
        """The first free place, or the least bad one, with its number; each further one is worse.

        ``lead`` is the point the label belongs to: a line from there should cross no other label.

        Raises
        ------
        ValueError
            No places are given.
        """
        found: tuple[int, Box] | None = None
        least = math.inf
        for number, box in enumerate(places):
            worse = penalty * number
            if worse >= least:
                break
            cost = self.cost(box) + worse
            if lead is not None and cost < least:
                cost += self.CROSSING * self.covered(lead, lead_foot(box, lead))
            if cost < least:
                found, least = (number, box), cost
            if cost == worse:
                break
        if found is None:
            raise ValueError("no places given")
        return found

    def choose(self, places: Iterable[Box], penalty: float = 0.0) -> Box:
        """As :meth:`pick`; the place is blocked from then on."""
        _, box = self.pick(places, penalty)
        self.block(box)
        return box


def lead_foot(box: Box, point: Pair) -> Pair:
    """Where on a level box's lower or upper side a line from a point ends."""
    left, bottom, right, top = box.bounds()
    return min(max(point[0], left + 0.4), right - 0.4), bottom if bottom > point[1] else top


def touches(box: Box, x1: float, y1: float, x2: float, y2: float) -> bool:
    """Whether a segment enters a box (clipping it against the box's sides)."""
    cos, sin = math.cos(math.radians(box.angle)), math.sin(math.radians(box.angle))
    ax, ay, bx, by = x1 - box.x, y1 - box.y, x2 - box.x, y2 - box.y
    start = (ax * cos + ay * sin, ay * cos - ax * sin)
    end = (bx * cos + by * sin, by * cos - bx * sin)
    enter, leave = 0.0, 1.0
    for a, b, half in ((start[0], end[0], box.width / 2), (start[1], end[1], box.height / 2)):
        step = b - a
        if abs(step) < 1e-12:
            if abs(a) >= half:
                return False
            continue
        one, two = sorted(((-half - a) / step, (half - a) / step))
        enter, leave = max(enter, one), min(leave, two)
        if enter >= leave:
            return False
    return True


def fits(box: Box, ring: Sequence[Pair]) -> bool:
    """Whether a box lies inside an outline."""
    return all(within(ring, x, y) for x, y in box.corners()) and not cuts(box, ring)


def meets(box: Box, ring: Sequence[Pair]) -> bool:
    """Whether a box and an outline's inside share a point."""
    return within(ring, box.x, box.y) or cuts(box, ring)


def cuts(box: Box, ring: Sequence[Pair]) -> bool:
    """Whether an outline runs through a box."""
    return any(touches(box, *a, *b) for a, b in itertools.pairwise([ring[-1], *ring]))


def spread(wanted: Sequence[float], gaps: Sequence[float], low: float, high: float) -> list[float]:
    """Places nearest to those wanted (rising) that keep the gaps between neighbours.

    Parameters
    ----------
    wanted : (n,)
    gaps : (n - 1,)
        Least distance from each to the next.
    low, high : float
        Between which they stay, as far as the gaps leave room.

    Examples
    --------
    >>> spread([0.0, 1.0, 10.0], [4.0, 4.0], -5.0, 20.0)
    [-1.5, 2.5, 10.0]
    """
    if not wanted:
        return []
    offsets = [0.0, *itertools.accumulate(gaps)]
    # With the gaps taken out the places must only not fall: pool neighbours that would (least squares).
    pools: list[list[float]] = []
    for place, offset in zip(wanted, offsets, strict=True):
        pools.append([place - offset, 1.0])
        while len(pools) > 1 and pools[-2][0] > pools[-1][0]:
            (a, n), (b, m) = pools[-2], pools.pop()
            pools[-1] = [(a * n + b * m) / (n + m), n + m]
    level = [value for value, count in pools for _ in range(round(count))]
    last = offsets[-1]
    return [max(min(value, high - last), low) + offset for value, offset in zip(level, offsets, strict=True)]
