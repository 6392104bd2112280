"""Plane geometry the drawings need: circles, hatching, centres, what lies inside."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Pair = tuple[float, float]
Points = Sequence[Pair] | Array


def circle(x: float, y: float, radius: float, start: float = 0.0, end: float = 360.0) -> Array:
    """Points of a circle, or of the arc from one angle to another [degrees]."""
    count = max(6, round(abs(end - start) / 9) + 1)
    angles = np.radians(np.linspace(start, end, count))
    return np.column_stack([x + radius * np.cos(angles), y + radius * np.sin(angles)])


def hatching(points: Points, angle: float, spacing: float) -> Iterable[Array]:
    """The pieces of parallel lines that lie inside an outline.

    Examples
    --------
    >>> [piece.tolist() for piece in hatching([(0, 0), (2, 0), (2, 2), (0, 2)], 0.0, 1.0)]
    [[[0.0, 0.5], [2.0, 0.5]], [[0.0, 1.5], [2.0, 1.5]]]
    """
    ring = np.asarray(points, dtype=float)
    cos, sin = math.cos(math.radians(angle)), math.sin(math.radians(angle))
    turned = ring @ np.array([[cos, -sin], [sin, cos]])
    x, y = turned[:, 0], turned[:, 1]
    x2, y2 = np.roll(x, -1), np.roll(y, -1)
    # A whole number of steps fits, so that no line comes to lie close to an edge that runs its way.
    low, high = float(y.min()), float(y.max())
    count = max(1, round((high - low) / spacing))
    levels = low + (np.arange(count) + 0.5) * (high - low) / count
    above, above2 = y[None, :] > levels[:, None], y2[None, :] > levels[:, None]
    crosses = above != above2
    rise = np.where(y2 == y, 1.0, y2 - y)
    at = np.where(crosses, x + (levels[:, None] - y) * (x2 - x) / rise, np.inf)
    at.sort(axis=1)
    back = np.array([[cos, sin], [-sin, cos]])
    for level, row, found in zip(levels, at, crosses.sum(axis=1), strict=True):
        for number in range(0, int(found) - 1, 2):
            if row[number + 1] - row[number] > 0.15:
                yield np.array([[row[number], level], [row[number + 1], level]]) @ back


def centroid(points: Points) -> Pair:
    """Centre of area of an outline; of its points where it has no area.

    Examples
    --------
    >>> centroid([(0, 0), (3, 0), (0, 3)])
    (1.0, 1.0)
    """
    ring = np.asarray(points, dtype=float)
    x, y = ring[:, 0], ring[:, 1]
    x2, y2 = np.roll(x, -1), np.roll(y, -1)
    cross = x * y2 - x2 * y
    total = float(cross.sum())
    if abs(total) < 1e-12:
        return float(x.mean()), float(y.mean())
    return float(((x + x2) * cross).sum() / (3 * total)), float(((y + y2) * cross).sum() / (3 * total))


def within(ring: Sequence[Pair], x: float, y: float) -> bool:
    """Whether a point lies inside an outline (even-odd rule).

    Examples
    --------
    >>> square = [(0, 0), (2, 0), (2, 2), (0, 2)]
    >>> within(square, 1, 1), within(square, 3, 1)
    (True, False)
    """
    inside = False
    x1, y1 = ring[-1]
    for x2, y2 in ring:
        if (y1 > y) != (y2 > y) and x < x1 + (y - y1) * (x2 - x1) / (y2 - y1):
            inside = not inside
        x1, y1 = x2, y2
    return inside


def pairs(points: Points) -> list[Pair]:
    """Points as pairs of plain floats."""
    return [(float(x), float(y)) for x, y in np.asarray(points, dtype=float).tolist()]


def clip_segment(
    start: Pair, end: Pair, window: tuple[float, float, float, float]
) -> tuple[Pair, Pair] | None:
    """The part of a segment inside a window (left, bottom, right, top), if any.

    Examples
    --------
    >>> clip_segment((-1.0, 1.0), (5.0, 1.0), (0.0, 0.0, 2.0, 2.0))
    ((0.0, 1.0), (2.0, 1.0))
    """
    enter, leave = 0.0, 1.0
    dx, dy = end[0] - start[0], end[1] - start[1]
    for step, a, low, high in ((dx, start[0], window[0], window[2]), (dy, start[1], window[1], window[3])):
        if abs(step) < 1e-12:
            if not low <= a <= high:
                return None
            continue
        one, two = sorted(((low - a) / step, (high - a) / step))
        enter, leave = max(enter, one), min(leave, two)
        if enter > leave:
            return None
    return (
        (start[0] + dx * enter, start[1] + dy * enter),
        (start[0] + dx * leave, start[1] + dy * leave),
    )


def clip_ring(points: Points, window: tuple[float, float, float, float]) -> Array:
    """The part of a convex outline inside a window; no points where there is none.

    Examples
    --------
    >>> clip_ring([(0, 0), (4, 0), (4, 1), (0, 1)], (1.0, -9.0, 2.0, 9.0)).tolist()
    [[1.0, 0.0], [2.0, 0.0], [2.0, 1.0], [1.0, 1.0]]
    """
    ring = pairs(points)
    for axis, limit, sign in ((0, window[0], 1), (0, window[2], -1), (1, window[1], 1), (1, window[3], -1)):
        kept: list[Pair] = []
        for a, b in zip(ring, [*ring[1:], *ring[:1]], strict=True):
            here, there = sign * (a[axis] - limit), sign * (b[axis] - limit)
            if here >= 0:
                kept.append(a)
            if (here > 0 > there) or (here < 0 < there):
                t = here / (here - there)
                kept.append((a[0] + (b[0] - a[0]) * t, a[1] + (b[1] - a[1]) * t))
        ring = kept
    first = ring.index(min(ring)) if ring else 0
    return np.asarray(ring[first:] + ring[:first], dtype=float).reshape(-1, 2)


def simplified(points: Points, tolerance: float = 0.01) -> Array:
    """A polyline with the points left out that lie within a tolerance of it (Douglas and Peucker).

    Examples
    --------
    >>> simplified([(0, 0), (1, 0.001), (2, 0), (2, 5)]).tolist()
    [[0.0, 0.0], [2.0, 0.0], [2.0, 5.0]]
    """
    line = np.asarray(points, dtype=float)
    keep = np.zeros(len(line), dtype=bool)
    keep[[0, -1]] = True
    pending = [(0, len(line) - 1)]
    while pending:
        first, last = pending.pop()
        if last - first < 2:
            continue
        start, along = line[first], line[last] - line[first]
        inner = line[first + 1 : last] - start
        square = float(along @ along)
        part = np.clip(inner @ along / square, 0.0, 1.0) if square > 0 else np.zeros(len(inner))
        off = np.hypot(*(inner - part[:, None] * along).T)
        worst = int(off.argmax())
        if off[worst] > tolerance:
            middle = first + 1 + worst
            keep[middle] = True
            pending += [(first, middle), (middle, last)]
    return line[keep]
