"""Effective width of a flange, and how far the slab reaches on either side."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

Point = tuple[float, float]
Segment = tuple[Point, Point]
NEAR = 1e-6  # [m]


class FlangeSide(NamedTuple):
    """One side of a flange."""

    reach: float  # b_i [m], from the web
    effective: float  # b_eff,i [m]


def effective_side(reach: float, zero_moments: float) -> FlangeSide:
    """What one side of the flange gives.

    Parameters
    ----------
    reach : float [m]
        b_i: half the clear distance to the next beam, or all of it to a free edge.
    zero_moments : float [m]
        l_0, between points of zero moment.

    Source: EN 1992-1-1:2004, 5.3.2.1(3), (5.7a) and (5.7b).

    Examples
    --------
    >>> round(effective_side(2.1, 5.1).effective, 9), effective_side(0.4, 5.1).effective
    (0.93, 0.4)
    """
    return FlangeSide(reach, min(0.2 * reach + 0.1 * zero_moments, 0.2 * zero_moments, reach))


def span_zero_moments(length: float, left: str, right: str) -> tuple[float, float]:
    """l_0 of a span under sagging moment, and its share of the length.

    Parameters
    ----------
    length : float [m]
    left, right : str
        "simple", "continuous" (fixed ends too) or "free".

    Returns
    -------
    l_0 : float [m]
    share : float

    Source: EN 1992-1-1:2004, 5.3.2.1(2), Figure 5.2; simple span and cantilever by their meaning.

    Examples
    --------
    >>> span_zero_moments(6.0, "simple", "continuous"), span_zero_moments(6.0, "simple", "simple")
    ((5.1, 0.85), (6.0, 1.0))
    """
    held = (left == "continuous") + (right == "continuous")
    share = 1.0 if "free" in (left, right) else (1.0, 0.85, 0.7)[held]
    return share * length, share


def support_zero_moments(left: float, right: float) -> float:
    """l_0 about an inner support from the lengths on both sides [m]; 0 where there is none.

    Parameters
    ----------
    left, right : float [m]

    Source: EN 1992-1-1:2004, 5.3.2.1(2), Figure 5.2.

    Examples
    --------
    >>> round(support_zero_moments(6.0, 5.0), 9)
    1.65
    """
    return 0.15 * (left + right)


def reaches(
    span: Segment, panels: Sequence[Sequence[Point]], neighbours: Sequence[Segment], web: float
) -> tuple[float, float]:
    """How far the slab belongs to a beam, left and right of it seen along the span.

    Parameters
    ----------
    span : segment [m]
        In plan.
    panels : sequence of outlines [m]
        Convex.
    neighbours : sequence of segments [m]
        Other beams and the walls.
    web : float [m]
        Width of the web; the neighbours are taken to be as wide.

    Returns
    -------
    left, right : float [m]
        b_i: half the clear distance to the neighbour, or the slab's overhang from the web; the least of
        nine places along the span. 0 where there is no slab on a side.

    Source: EN 1992-1-1:2004, 5.3.2.1(3), Figure 5.3.

    Examples
    --------
    >>> slab = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.5), (0.0, 4.5)]
    >>> found = reaches(((0.0, 0.0), (6.0, 0.0)), [slab], [((0.0, 4.5), (6.0, 4.5))], 0.3)
    >>> [round(each, 9) for each in found]
    [2.1, 0.0]
    """
    (x0, y0), (x1, y1) = span
    length = math.hypot(x1 - x0, y1 - y0)
    normal = (-(y1 - y0) / length, (x1 - x0) / length)
    found = []
    for sign in (1.0, -1.0):
        way = (sign * normal[0], sign * normal[1])
        sides = []
        for part in range(1, 10):
            at = (x0 + (x1 - x0) * part / 10, y0 + (y1 - y0) * part / 10)
            sides.append(_reach(at, way, panels, neighbours, web))
        found.append(min(sides))
    return found[0], found[1]


def _reach(
    at: Point,
    way: Point,
    panels: Sequence[Sequence[Point]],
    neighbours: Sequence[Segment],
    web: float,
) -> float:
    edge = 0.0
    for _ in panels:  # from panel to panel, to where the slab ends
        ahead = (at[0] + way[0] * (edge + NEAR), at[1] + way[1] * (edge + NEAR))
        panel = next((each for each in panels if _inside(ahead, each)), None)
        if panel is None:
            break
        edge = max((hit for one in _sides(panel) if (hit := _hit(at, way, one)) is not None), default=edge)
    hits = [hit for one in neighbours if (hit := _hit(at, way, one)) is not None and hit > NEAR]
    next_one = min((hit for hit in hits if hit <= edge + NEAR), default=None)
    if next_one is not None:
        return max((next_one - web) / 2, 0.0)
    return max(edge - web / 2, 0.0)


def _sides(outline: Sequence[Point]) -> list[Segment]:
    return list(zip(outline, [*outline[1:], outline[0]], strict=True))


def _inside(point: Point, outline: Sequence[Point]) -> bool:
    """Whether a convex, counter-clockwise outline holds a point."""
    return all(
        (b[0] - a[0]) * (point[1] - a[1]) - (b[1] - a[1]) * (point[0] - a[0]) >= 0 for a, b in _sides(outline)
    )


def _hit(at: Point, way: Point, segment: Segment) -> float | None:
    """Distance along a ray to a segment; None where it passes or runs along it."""
    (x0, y0), (x1, y1) = segment
    run = (x1 - x0, y1 - y0)
    cross = way[0] * run[1] - way[1] * run[0]
    if abs(cross) <= NEAR * math.hypot(*run):
        return None
    away = (x0 - at[0], y0 - at[1])
    distance = (away[0] * run[1] - away[1] * run[0]) / cross
    along = (away[0] * way[1] - away[1] * way[0]) / cross
    return distance if -NEAR <= along <= 1 + NEAR and distance > -NEAR else None
