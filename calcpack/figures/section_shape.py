"""Outlines of cross-sections in metres, from the section's bottom centre, and of stirrups in them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calcpack.figures.shapes import Array, Pair, circle

WIDEST_FLANGE = 2.0  # times the web's width: a wider flange of a tee is drawn broken off


@dataclass(frozen=True)
class Outline:
    """A cross-section's outline.

    Parameters
    ----------
    points : (n, 2) [m]
        Counter-clockwise, from the section's bottom centre.
    width, depth : float [m]
        Of the whole section, as it is.
    web : float [m]
        Width of the part that stirrups stand in.
    broken : bool
        A flange is drawn narrower than it is.
    """

    points: Array
    width: float
    depth: float
    web: float
    broken: bool = False

    @property
    def drawn_width(self) -> float:
        """Width of what is drawn [m]."""
        return float(np.ptp(self.points[:, 0]))


def outline_of(shape: str, dimensions: Mapping[str, float]) -> Outline:
    """The outline of a rectangle, a tee or a rolled I-shape.

    Parameters
    ----------
    shape : "rectangle", "tee" or "rolled"
    dimensions : mapping of name to value [m]
        width, depth; flange_width, flange_depth; web, flange, root_radius. A tee without flange width
        is drawn as its web with the flange broken off on either side.

    Raises
    ------
    ValueError
        Another shape, or a dimension that is not positive.

    Examples
    --------
    >>> outline_of("rectangle", {"width": 0.3, "depth": 0.5}).points.tolist()
    [[-0.15, 0.0], [0.15, 0.0], [0.15, 0.5], [-0.15, 0.5]]
    """
    if wrong := [name for name, value in dimensions.items() if not value > 0 and name != "root_radius"]:
        raise ValueError(f"a section cannot be drawn with {', '.join(sorted(wrong))} not positive")
    width, depth = dimensions["width"], dimensions["depth"]
    half = width / 2
    if shape == "rectangle":
        ring = np.array([(-half, 0.0), (half, 0.0), (half, depth), (-half, depth)])
        return Outline(ring, width, depth, width)
    if shape == "tee":
        return _tee(width, depth, dimensions.get("flange_width"), dimensions["flange_depth"])
    if shape == "rolled":
        web, flange = dimensions["web"], dimensions["flange"]
        ring = _rolled(half, depth, web / 2, flange, dimensions.get("root_radius", 0.0))
        return Outline(ring, width, depth, web)
    raise ValueError(f"no outline is known for a section of shape {shape!r}")


def _tee(web: float, depth: float, flange_width: float | None, flange_depth: float) -> Outline:
    widest = WIDEST_FLANGE * web
    drawn = min(flange_width or widest, widest)
    half, wing, soffit = web / 2, drawn / 2, depth - flange_depth
    ring = [(-half, 0.0), (half, 0.0), (half, soffit), (wing, soffit)]
    ring += [(wing, depth), (-wing, depth), (-wing, soffit), (-half, soffit)]
    broken = flange_width is None or flange_width > widest * (1 + 1e-9)
    return Outline(np.array(ring), flange_width or 0.0, depth, web, broken)


def _rolled(half: float, depth: float, web: float, flange: float, radius: float) -> Array:
    """An I-shape, a quarter at a time: right half from the bottom up, then its mirror image."""
    low = [(half, 0.0), (half, flange)]
    if radius > 0:
        # The root's centre is off web and flange by its radius; the arc bends inwards.
        low += [(x, y) for x, y in circle(web + radius, flange + radius, radius, 270.0, 180.0).tolist()]
    else:
        low.append((web, flange))
    right = low + [(x, depth - y) for x, y in reversed(low)]
    return np.array(right + [(-x, y) for x, y in reversed(right)])


def rounded(left: float, bottom: float, right: float, top: float, radius: float) -> Array:
    """A rectangle with rounded corners, counter-clockwise.

    Examples
    --------
    >>> ring = rounded(0.0, 0.0, 2.0, 1.0, 0.25)
    >>> ring.min(axis=0).round(9).tolist(), ring.max(axis=0).round(9).tolist()
    ([0.0, 0.0], [2.0, 1.0])
    """
    radius = min(radius, (right - left) / 2, (top - bottom) / 2)
    corners = [
        (right - radius, bottom + radius, 270.0),
        (right - radius, top - radius, 0.0),
        (left + radius, top - radius, 90.0),
        (left + radius, bottom + radius, 180.0),
    ]
    return np.vstack([circle(x, y, radius, start, start + 90.0) for x, y, start in corners])


def inner_legs(
    legs: int, half: float, diameter: float, bars: Sequence[tuple[float, float, float]]
) -> list[float]:
    """Where the legs of a stirrup stand that are not its outermost two.

    Parameters
    ----------
    legs : int
    half : float [m]
        From the middle to an outer leg's axis.
    diameter : float [m]
        Of the stirrup.
    bars : (x, y, diameter) [m]
        A leg stands close beside the nearest bar of the lowest layer, on its outer side.

    Returns
    -------
    list of float [m]

    Examples
    --------
    >>> inner_legs(3, 0.1, 0.01, []), inner_legs(2, 0.1, 0.01, [])
    ([0.0], [])
    >>> inner_legs(4, 0.09, 0.01, [(-0.08, 0.05, 0.02), (-0.04, 0.05, 0.02), (0.04, 0.05, 0.02)])
    [-0.055, 0.055]
    """
    lowest = min((y for _, y, _ in bars), default=0.0)
    row = [(x, size) for x, y, size in bars if y < lowest + size]
    found = []
    for number in range(1, legs - 1):
        at = -half + 2 * half * number / (legs - 1)
        near = min(row, key=lambda bar: abs(bar[0] - at), default=None)
        if near is not None and abs(near[0] - at) < half / (legs - 1) and abs(at) > 1e-9:
            at = near[0] + (1 if at > 0 else -1) * (near[1] + diameter) / 2
        found.append(round(at, 9))
    return found


def break_line(x: float, bottom: float, top: float, size: float) -> list[Pair]:
    """A line with a kink in its middle, where something is drawn broken off."""
    middle = (bottom + top) / 2
    kink = [(x, middle - size), (x + size, middle - size / 3), (x - size, middle + size / 3)]
    return [(x, bottom - size), *kink, (x, middle + size), (x, top + size)]
