"""Panels divided again: which part of an outline drains to which edge, by cutting half-planes and strips."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from itertools import pairwise

Point = tuple[float, float]
Outline = Sequence[Point]


def area(outline: Outline) -> float:
    """Of a closed outline, counter-clockwise positive [m2].

    Examples
    --------
    >>> area([(0, 0), (4, 0), (4, 3), (0, 3)])
    12.0
    """
    pairs = zip(outline, [*outline[1:], *outline[:1]], strict=True)
    return math.fsum(a[0] * b[1] - b[0] * a[1] for a, b in pairs) / 2


def inside(outline: Outline, excess: Callable[[Point], float]) -> list[Point]:
    """The part of a convex outline where a linear function is not above zero."""
    kept: list[Point] = []
    for a, b in zip(outline, [*outline[1:], *outline[:1]], strict=True):
        left, right = excess(a), excess(b)
        if left <= 0:
            kept.append(a)
        if left * right < 0:
            part = left / (left - right)
            kept.append((a[0] + part * (b[0] - a[0]), a[1] + part * (b[1] - a[1])))
    return kept


def _distance(start: Point, end: Point) -> Callable[[Point], float]:
    """Distance of a point inside from the line of an edge [m]."""
    length = math.dist(start, end)
    x, y = (end[0] - start[0]) / length, (end[1] - start[1]) / length
    return lambda point: x * (point[1] - start[1]) - y * (point[0] - start[0])


def nearest_areas(corners: Outline, reach: Mapping[int, float]) -> dict[int, float]:
    """Area of a convex panel that drains to each supported edge, the nearest by distance over reach [m2].

    Examples
    --------
    >>> nearest_areas([(0, 0), (6, 0), (6, 4), (0, 4)], dict.fromkeys(range(4), 1.0))
    {0: 8.0, 1: 4.0, 2: 8.0, 3: 4.0}
    """
    edges = list(zip(corners, [*corners[1:], *corners[:1]], strict=True))
    far = {number: _distance(*edges[number]) for number in reach}
    found = {}
    for own in reach:
        region: Sequence[Point] = corners
        for other in reach:
            if other == own:
                continue

            def excess(point: Point, own: int = own, other: int = other) -> float:
                return far[own](point) / reach[own] - far[other](point) / reach[other]

            region = inside(region, excess)
        found[own] = area(region) if len(region) > 2 else 0.0
    return found


def strip_areas(corners: Outline, supported: Sequence[bool], direction: Point) -> dict[int, float]:
    """Area of a panel that drains to each edge when it is cut into strips along a direction [m2].

    A strip gives half to each end, or all of it to the one that is supported.

    Examples
    --------
    >>> strip_areas([(0, 0), (6, 0), (6, 4), (0, 4)], [True] * 4, (0.0, 1.0))
    {0: 12.0, 2: 12.0}
    """
    size = math.hypot(*direction)
    along = (direction[0] / size, direction[1] / size)
    edges = list(zip(corners, [*corners[1:], *corners[:1]], strict=True))

    def across(point: Point) -> float:
        return along[0] * point[1] - along[1] * point[0]

    def reach(edge: tuple[Point, Point], level: float) -> float:
        low, high = across(edge[0]), across(edge[1])
        part = (level - low) / (high - low)
        point = [a + part * (b - a) for a, b in zip(*edge, strict=True)]
        return along[0] * point[0] + along[1] * point[1]

    widest = max(map(across, corners)) - min(map(across, corners))
    levels = sorted(map(across, corners))
    found: dict[int, float] = {}
    for low, high in pairwise(levels):
        if high - low <= 1e-9 * widest:
            continue
        middle = (low + high) / 2
        hit = [
            number
            for number, (a, b) in enumerate(edges)
            if min(across(a), across(b)) < middle < max(across(a), across(b))
        ]
        if len(hit) != 2:
            raise ValueError("the outline is not convex")
        depth = abs(reach(edges[hit[0]], middle) - reach(edges[hit[1]], middle))
        both = supported[hit[0]] and supported[hit[1]]
        for number in hit:
            if supported[number]:
                found[number] = found.get(number, 0.0) + (0.5 if both else 1.0) * depth * (high - low)
    return dict(sorted(found.items()))
